/** Who may read the metrics: this machine itself, or a token that administers. */
import { bearerOf, callerOfRequest, requireScope } from '../access/caller.ts';
import { environment } from '../access/environment.ts';
import { Unauthenticated } from '../base/errors.ts';
import { metricsRegistry } from './metrics.ts';
import { problemResponse } from './problem.ts';

const LOOPBACK = /^(127\.\d{1,3}\.\d{1,3}\.\d{1,3}|::1|::ffff:127\.\d{1,3}\.\d{1,3}\.\d{1,3})$/;

export async function metricsResponse(request: Request): Promise<Response> {
  try {
    await requireReader(request);
    const registry = metricsRegistry();
    return new Response(await registry.metrics(), { headers: { 'content-type': registry.contentType, 'cache-control': 'no-store' } });
  } catch (error) {
    return problemResponse(error, request);
  }
}

/**
 * A header can claim any address, so it counts only where nobody else can connect: the server listens on loopback, and whatever proxy
 * stands before it on this machine has written down no other address.
 */
async function requireReader(request: Request): Promise<void> {
  if (bearerOf(request.headers)) return requireScope(await callerOfRequest(request), 'administer');
  const addresses =
    request.headers
      .get('x-forwarded-for')
      ?.split(',')
      .map((address) => address.trim()) ?? [];
  const { HOST } = environment();
  if ((HOST === 'localhost' || LOOPBACK.test(HOST)) && addresses.every((address) => LOOPBACK.test(address))) return;
  throw new Unauthenticated('metrics are for this machine, or for a token of scope "administer"');
}
