import { answerTokens, createDistrictToken } from '../../../../lib/http/answers/members.ts';
import { createTokenOperation, listTokensOperation } from '../../../../lib/http/operations/district.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(listTokensOperation, async ({ caller }) => ({ items: await answerTokens(caller) }));
export const POST = route(createTokenOperation, ({ caller, body }) => createDistrictToken(caller, body));
