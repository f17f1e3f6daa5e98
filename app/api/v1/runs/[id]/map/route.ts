import { answerMapDescription } from '../../../../../../lib/http/answers/map.ts';
import { mapOperation } from '../../../../../../lib/http/operations/runs.ts';
import { route } from '../../../../../../lib/http/route.ts';

export const GET = route(mapOperation, ({ caller, params }) => answerMapDescription(caller, params.id));
