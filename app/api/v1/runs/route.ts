import { answerRuns, startRun } from '../../../../lib/http/answers/run.ts';
import { createRunOperation, listRunsOperation } from '../../../../lib/http/operations/runs.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(listRunsOperation, async ({ caller, query }) => ({ items: await answerRuns(caller, query.season) }));
export const POST = route(createRunOperation, ({ caller, body }) => startRun(caller, body));
