import { answerSoils } from '../../../../lib/http/answers/land.ts';
import { listSoilsOperation } from '../../../../lib/http/operations/land.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(listSoilsOperation, async ({ caller }) => ({ items: await answerSoils(caller) }));
