import { answerSummary } from '../../../../../../lib/http/answers/summary.ts';
import { summaryOperation } from '../../../../../../lib/http/operations/runs.ts';
import { route } from '../../../../../../lib/http/route.ts';

export const GET = route(summaryOperation, ({ caller, params }) => answerSummary(caller, params.id));
