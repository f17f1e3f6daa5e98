import { answerMethods } from '../../../../lib/http/answers/methods.ts';
import { listMethodsOperation } from '../../../../lib/http/operations/land.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(listMethodsOperation, async ({ caller }) => ({ items: await answerMethods(caller) }));
