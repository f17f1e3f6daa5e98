import { answerReaches } from '../../../../../../lib/http/answers/run-reaches.ts';
import { reachesOperation } from '../../../../../../lib/http/operations/runs.ts';
import { route } from '../../../../../../lib/http/route.ts';

export const GET = route(reachesOperation, ({ caller, params, query }) => answerReaches(caller, params.id, query));
