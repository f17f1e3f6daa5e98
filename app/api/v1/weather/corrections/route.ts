import { answerCorrections, answerNewCorrection } from '../../../../../lib/http/answers/quality.ts';
import { listCorrectionsOperation, makeCorrectionOperation } from '../../../../../lib/http/operations/quality.ts';
import { route } from '../../../../../lib/http/route.ts';

export const GET = route(listCorrectionsOperation, ({ caller, query, csv }) => answerCorrections(caller, query, csv));
export const POST = route(makeCorrectionOperation, ({ caller, body }) => answerNewCorrection(caller, body));
