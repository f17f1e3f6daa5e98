import { answerCriticalTemperatures } from '../../../../../lib/http/answers/frost.ts';
import { criticalTemperaturesOperation } from '../../../../../lib/http/operations/frost.ts';
import { route } from '../../../../../lib/http/route.ts';

export const GET = route(criticalTemperaturesOperation, async () => answerCriticalTemperatures());
