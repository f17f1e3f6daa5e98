import { answerRun } from '../../../../../lib/http/answers/run.ts';
import { readRunOperation } from '../../../../../lib/http/operations/runs.ts';
import { route } from '../../../../../lib/http/route.ts';

export const GET = route(readRunOperation, ({ caller, params }) => answerRun(caller, params.id));
