import { answerPreview } from '../../../../../../lib/http/answers/quality.ts';
import { previewCorrectionOperation } from '../../../../../../lib/http/operations/quality.ts';
import { route } from '../../../../../../lib/http/route.ts';

export const POST = route(previewCorrectionOperation, ({ caller, body }) => answerPreview(caller, body));
