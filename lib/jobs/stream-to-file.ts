/** Bytes that arrive, written to a file and told apart on the way: size, hash, and the first bytes that say what they are. */
import { createHash } from 'node:crypto';
import { createWriteStream } from 'node:fs';
import { type Readable, Transform } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { HEAD_BYTES } from '../files/content-kind.ts';

export interface WrittenFile {
  readonly path: string;
  readonly size: number;
  /** SHA-256, hex */
  readonly sha256: string;
  readonly head: Uint8Array;
}

/**
 * Writes a stream to a file.
 *
 * @param options `refuse` answers a fault for a size that is too much, which ends the writing; `signal` ends it too
 * @throws what `refuse` answered; the stream's own errors
 */
export async function streamToFile(
  stream: Readable,
  path: string,
  options: { readonly refuse?: (size: number) => Error | null; readonly signal?: AbortSignal } = {},
): Promise<WrittenFile> {
  const hash = createHash('sha256');
  const heads: Buffer[] = [];
  let size = 0;
  const watch = new Transform({
    transform(part: Buffer, _encoding, done) {
      hash.update(part);
      if (size < HEAD_BYTES) heads.push(part);
      size += part.byteLength;
      done(options.refuse?.(size) ?? null, part);
    },
  });
  await pipeline(stream, watch, createWriteStream(path), { signal: options.signal });
  return { path, size, sha256: hash.digest('hex'), head: Buffer.concat(heads).subarray(0, HEAD_BYTES) };
}
