import { answerGaps } from '../../../../../lib/http/answers/gaps.ts';
import { gapsOperation } from '../../../../../lib/http/operations/gaps.ts';
import { route } from '../../../../../lib/http/route.ts';

export const GET = route(gapsOperation, ({ caller, query }) => answerGaps(caller, query));
