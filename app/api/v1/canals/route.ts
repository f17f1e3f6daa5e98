import { answerCanals } from '../../../../lib/http/answers/land.ts';
import { listCanalsOperation } from '../../../../lib/http/operations/land.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(listCanalsOperation, async ({ caller }) => ({ items: await answerCanals(caller) }));
