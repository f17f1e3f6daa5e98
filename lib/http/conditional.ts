/** Answers that never change: an ETag, and nothing but a 304 for a caller who has it already. */

import { createHash } from 'node:crypto';
import type { Caller } from '../access/caller.ts';

/** Part of a tag that tells what a grower sees from what everybody else sees. */
export function viewOf(caller: Caller): string {
  return caller.parcels ? `-${createHash('sha256').update(caller.parcels.join('\n')).digest('base64url').slice(0, 16)}` : '';
}

/**
 * @param tag names the content; two contents never share one
 * @param make called only when the caller does not have it
 */
export async function immutable(request: Request, tag: string, make: () => Promise<Response>): Promise<Response> {
  const etag = `"${tag}"`;
  const headers = { etag, 'cache-control': 'private, max-age=600', vary: 'Accept, Authorization, Cookie' };
  if (holds(request.headers.get('if-none-match'), etag)) return new Response(null, { status: 304, headers });
  const response = await make();
  if (response.ok) for (const [name, value] of Object.entries(headers)) response.headers.set(name, value);
  return response;
}

function holds(header: string | null, etag: string): boolean {
  if (!header) return false;
  return header.trim() === '*' || header.split(',').some((part) => part.trim().replace(/^W\//, '') === etag);
}
