/** An address under /api/v1 that no call has. */
import { NotFound } from '../base/errors.ts';
import { countAnswer } from './metrics.ts';
import { problemResponse } from './problem.ts';

export async function answerUnknownPath(request: Request): Promise<Response> {
  const began = performance.now();
  const { pathname } = new URL(request.url);
  const error = new NotFound(`there is no call at ${pathname}: /api/docs lists them all`);
  const response = problemResponse(error, request);
  countAnswer({ method: request.method, path: 'unknown' }, response.status, (performance.now() - began) / 1000);
  return response;
}
