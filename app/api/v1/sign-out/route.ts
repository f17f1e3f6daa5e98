import { signOut } from '../../../../lib/access/sessions.ts';
import { noContent } from '../../../../lib/http/cookies.ts';
import { signOutOperation } from '../../../../lib/http/operations/session.ts';
import { openRoute } from '../../../../lib/http/route.ts';

export const POST = openRoute(signOutOperation, async ({ request }) => noContent(await signOut(request.headers)));
