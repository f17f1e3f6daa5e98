import { withdrawToken } from '../../../../../lib/http/answers/members.ts';
import { deleteTokenOperation } from '../../../../../lib/http/operations/district.ts';
import { route } from '../../../../../lib/http/route.ts';

export const DELETE = route(deleteTokenOperation, ({ caller, params }) => withdrawToken(caller, params.id));
