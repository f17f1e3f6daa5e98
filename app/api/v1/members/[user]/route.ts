import { removeMember } from '../../../../../lib/http/answers/members.ts';
import { deleteMemberOperation } from '../../../../../lib/http/operations/district.ts';
import { route } from '../../../../../lib/http/route.ts';

export const DELETE = route(deleteMemberOperation, ({ caller, params }) => removeMember(caller, params.user));
