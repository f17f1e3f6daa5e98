import { answerUndo } from '../../../../../../../lib/http/answers/quality.ts';
import { undoCorrectionOperation } from '../../../../../../../lib/http/operations/quality.ts';
import { route } from '../../../../../../../lib/http/route.ts';

export const POST = route(undoCorrectionOperation, ({ caller, params }) => answerUndo(caller, params.id));
