import { answerChecks, answerRunCheck } from '../../../../../lib/http/answers/quality.ts';
import { readChecksOperation, runCheckOperation } from '../../../../../lib/http/operations/quality.ts';
import { route } from '../../../../../lib/http/route.ts';

export const GET = route(readChecksOperation, async ({ caller }) => ({ items: await answerChecks(caller) }));
export const POST = route(runCheckOperation, ({ caller, body }) => answerRunCheck(caller, body.source));
