import { answerFlags } from '../../../../../lib/http/answers/quality.ts';
import { listFlagsOperation } from '../../../../../lib/http/operations/quality.ts';
import { route } from '../../../../../lib/http/route.ts';

export const GET = route(listFlagsOperation, ({ caller, query, csv }) => answerFlags(caller, query, csv));
