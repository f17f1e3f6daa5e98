import { answerWorking } from '../../../../../../../../lib/http/answers/parcel-season.ts';
import { workingOperation } from '../../../../../../../../lib/http/operations/runs.ts';
import { route } from '../../../../../../../../lib/http/route.ts';

export const GET = route(workingOperation, ({ caller, params, query }) => answerWorking(caller, params.id, params.code, query.date));
