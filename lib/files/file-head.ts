/** The first bytes of a file, which tell what it is. */
import { closeSync, openSync, readSync } from 'node:fs';
import { HEAD_BYTES } from './content-kind.ts';
import type { ImportFile } from './reading.ts';

/** First `HEAD_BYTES` of a file, or all of a shorter one; of a file on disk no more is read. */
export function headOf(file: ImportFile): Uint8Array {
  if (file.path === undefined) return file.bytes.subarray(0, HEAD_BYTES);
  const head = Buffer.alloc(HEAD_BYTES);
  const handle = openSync(file.path, 'r');
  try {
    return head.subarray(0, readSync(handle, head, 0, HEAD_BYTES, 0));
  } finally {
    closeSync(handle);
  }
}
