import { answerFrostWorking } from '../../../../../lib/http/answers/frost.ts';
import { frostWorkingOperation } from '../../../../../lib/http/operations/frost.ts';
import { route } from '../../../../../lib/http/route.ts';

export const GET = route(frostWorkingOperation, ({ caller, query }) => answerFrostWorking(caller, query));
