/** What the framework would answer without a reason, or not at all: refused before it sees the request. */
import type { IncomingMessage, ServerResponse } from 'node:http';
import { Malformed } from '../base/errors.ts';
import { OPERATIONS } from './operations/all.ts';
import { problemResponse } from './problem.ts';
import { methodsAt } from './route.ts';
import { isStorable } from './storable-text.ts';
import { WrongMethod } from './wrong-method.ts';

const KNOWN_METHODS = ['GET', 'HEAD', 'POST', 'PUT', 'PATCH', 'DELETE', 'OPTIONS'];

/** Answers a request that nothing here can take; true when it did. */
export async function refuseEarly(request: IncomingMessage, response: ServerResponse): Promise<boolean> {
  const error = faultOf(request.method ?? '', request.url ?? '/');
  if (!error) return false;
  const refusal = problemResponse(error, new Request('http://localhost'));
  const body = Buffer.from(await refusal.text());
  response.writeHead(refusal.status, { ...Object.fromEntries(refusal.headers), 'content-length': body.byteLength });
  response.end(request.method === 'HEAD' ? undefined : body);
  return true;
}

function faultOf(method: string, address: string): Malformed | WrongMethod | null {
  const pathname = address.split(/[?#]/, 1)[0];
  if (!KNOWN_METHODS.includes(method)) return wrongMethod(method, pathname, allowedAt(pathname) ?? KNOWN_METHODS);
  const path = decoded(pathname);
  if (path === null) return new Malformed('the address is not percent-encoded UTF-8');
  const query = address.slice(pathname.length);
  if (!isStorable(path) || /%00/.test(query)) return new Malformed('the address holds a NUL character (%00), which no name or code has');
  const allowed = allowedAt(pathname);
  return allowed && !allowed.includes(method) ? wrongMethod(method, pathname, allowed) : null;
}

function wrongMethod(method: string, pathname: string, allow: readonly string[]): WrongMethod {
  return new WrongMethod(`${pathname} does not take ${method}: it takes ${allow.join(', ')}`, allow);
}

/** Methods of a call of the API; null where there is none. What can be read can be asked for its head, and all for their options. */
function allowedAt(pathname: string): string[] | null {
  const methods = pathname.startsWith('/api/v1/') ? methodsAt(OPERATIONS, pathname) : [];
  if (methods.length === 0) return null;
  return [...new Set([...methods, ...(methods.includes('GET') ? ['HEAD'] : []), 'OPTIONS'])];
}

function decoded(pathname: string): string | null {
  try {
    return decodeURIComponent(pathname);
  } catch {
    return null;
  }
}
