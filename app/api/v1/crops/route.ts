import { answerCrops } from '../../../../lib/http/answers/land.ts';
import { listCropsOperation } from '../../../../lib/http/operations/land.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(listCropsOperation, async ({ caller }) => ({ items: await answerCrops(caller) }));
