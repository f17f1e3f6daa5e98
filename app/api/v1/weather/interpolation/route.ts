import { answerInterpolation } from '../../../../../lib/http/answers/interpolation.ts';
import { interpolationOperation } from '../../../../../lib/http/operations/interpolation.ts';
import { route } from '../../../../../lib/http/route.ts';

export const GET = route(interpolationOperation, ({ caller, query }) => answerInterpolation(caller, query));
