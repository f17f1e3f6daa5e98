/**
 * Arrays that were read and are done with lie outside the script's own heap, so that its collector may let hundreds of megabytes stand before
 * it looks. Readers of large files have it look when they know that much is done with.
 */
import { setFlagsFromString } from 'node:v8';
import { runInNewContext } from 'node:vm';

/** Arrays that may stand before they are looked through, and growth since that makes it worth while again [bytes]. */
const STANDING = 160 * 1024 * 1024;
const GROWTH = 64 * 1024 * 1024;

let collect: (() => void) | null = null;
let left = 0;

/** Frees what is done with, where much of it may have gathered; costs next to nothing otherwise. */
export function relieveMemory(): void {
  const { arrayBuffers } = process.memoryUsage();
  if (arrayBuffers < Math.max(STANDING, left + GROWTH)) return;
  collect ??= collector();
  collect();
  left = process.memoryUsage().arrayBuffers;
}

function collector(): () => void {
  setFlagsFromString('--expose-gc');
  return runInNewContext('gc') as () => void;
}
