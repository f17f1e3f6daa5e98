import { addressOf, limitSignIn } from '../../../../lib/access/rate-limit.ts';
import { signIn } from '../../../../lib/access/sessions.ts';
import { Unauthenticated } from '../../../../lib/base/errors.ts';
import { noContent } from '../../../../lib/http/cookies.ts';
import { signInOperation } from '../../../../lib/http/operations/session.ts';
import { openRoute } from '../../../../lib/http/route.ts';

export const POST = openRoute(signInOperation, async ({ request, body }) => {
  await limitSignIn(body.email, addressOf(request.headers));
  const cookies = await signIn(request.headers, body);
  if (!cookies) throw new Unauthenticated('the e-mail address or the password is wrong');
  return noContent(cookies);
});
