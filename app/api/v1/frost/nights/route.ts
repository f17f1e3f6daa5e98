import { answerFrozenNights } from '../../../../../lib/http/answers/frost.ts';
import { frostNightsOperation } from '../../../../../lib/http/operations/frost.ts';
import { route } from '../../../../../lib/http/route.ts';

export const GET = route(frostNightsOperation, ({ caller, query }) => answerFrozenNights(caller, query));
