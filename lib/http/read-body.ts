/** Reading a request's body within a limit. */
import type { z } from 'zod';
import { Malformed, TooLarge, UnknownKind } from '../base/errors.ts';
import { malformedFrom } from './problem.ts';
import { requireStorable } from './storable-text.ts';

const DEFAULT_BODY_LIMIT = 256 * 1024;

/**
 * The body as JSON, checked.
 *
 * @throws {UnknownKind} when it is not JSON by its type. @throws {TooLarge} above `limit` bytes. @throws {Malformed} when it does not parse or fit.
 */
export async function readJson<T extends z.ZodType>(request: Request, schema: T, limit = DEFAULT_BODY_LIMIT): Promise<z.infer<T>> {
  const type = request.headers.get('content-type') ?? '';
  if (!/^application\/(json|[\w.-]+\+json)\b/i.test(type)) {
    throw new UnknownKind(`the body is ${type ? `"${type}"` : 'of no stated type'}: send "Content-Type: application/json"`);
  }
  const given = parseJson(await readText(request, limit));
  requireStorable(given, 'body');
  const result = schema.safeParse(given);
  if (!result.success) throw malformedFrom(result.error, 'body');
  return result.data;
}

function parseJson(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch (cause) {
    throw new Malformed(`the body is not JSON: ${(cause as Error).message}`, [], { cause });
  }
}

async function readText(request: Request, limit: number): Promise<string> {
  if (Number(request.headers.get('content-length') ?? 0) > limit) throw tooLarge(limit);
  if (!request.body) return '';
  const reader = request.body.getReader();
  const parts: Uint8Array[] = [];
  let size = 0;
  for (let part = await reader.read(); !part.done; part = await reader.read()) {
    size += part.value.byteLength;
    if (size > limit) {
      await reader.cancel();
      throw tooLarge(limit);
    }
    parts.push(part.value);
  }
  return Buffer.concat(parts).toString('utf8');
}

function tooLarge(limit: number): TooLarge {
  return new TooLarge(`the body is larger than ${Math.floor(limit / 1024)} KiB, the most this call takes`);
}
