import { answerParcel } from '../../../../../lib/http/answers/land.ts';
import { readParcelOperation } from '../../../../../lib/http/operations/land.ts';
import { route } from '../../../../../lib/http/route.ts';

export const GET = route(readParcelOperation, ({ caller, params }) => answerParcel(caller, params.code));
