import { noContent } from '../../../../lib/http/cookies.ts';
import { preferencesOperation } from '../../../../lib/http/operations/session.ts';
import { preferenceCookies } from '../../../../lib/http/preferences.ts';
import { openRoute } from '../../../../lib/http/route.ts';

export const POST = openRoute(preferencesOperation, async ({ request, body }) => noContent(await preferenceCookies(request, body)));
