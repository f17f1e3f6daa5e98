import { callOffRun } from '../../../../../../lib/http/answers/run.ts';
import { cancelRunOperation } from '../../../../../../lib/http/operations/runs.ts';
import { route } from '../../../../../../lib/http/route.ts';

export const POST = route(cancelRunOperation, ({ caller, params }) => callOffRun(caller, params.id));
