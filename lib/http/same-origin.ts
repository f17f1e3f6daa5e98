/** A page of somebody else's must not act with the reader's cookie. */
import { originOf } from '../access/sessions.ts';
import { Forbidden } from '../base/errors.ts';

const UNSAFE = new Set(['POST', 'PUT', 'PATCH', 'DELETE']);

/**
 * Lets an unsafe request with a cookie through only when the browser says that our own page made it.
 *
 * @param strict true: a request that says nothing of where it comes from is refused too
 * @throws {Forbidden} otherwise
 */
export function requireSameOrigin(request: Request, strict: boolean): void {
  if (!UNSAFE.has(request.method) || request.headers.has('authorization')) return;
  const site = request.headers.get('sec-fetch-site');
  const origin = request.headers.get('origin');
  if (site ? site === 'same-origin' : origin ? sameHost(origin, request) : !strict) return;
  throw new Forbidden(
    'this request did not come from a page of this service: scripts send "Authorization: Bearer <token>" instead of a cookie',
  );
}

function sameHost(origin: string, request: Request): boolean {
  return URL.canParse(origin) && new URL(origin).host === new URL(originOf(request)).host;
}
