import { answerCrop } from '../../../../../lib/http/answers/land.ts';
import { readCropOperation } from '../../../../../lib/http/operations/land.ts';
import { route } from '../../../../../lib/http/route.ts';

export const GET = route(readCropOperation, ({ caller, params }) => answerCrop(caller, params.code));
