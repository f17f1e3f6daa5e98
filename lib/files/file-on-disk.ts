/** Files of an import that lie on disk, and safe names for those that are unpacked. */
import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { basename, extname } from 'node:path';
import type { ImportFile } from './reading.ts';

/** A file that lies on disk; its bytes are read when they are asked for. */
export function fileOnDisk(name: string, path: string): ImportFile {
  return {
    name,
    path,
    get bytes() {
      return new Uint8Array(readFileSync(path));
    },
  };
}

/** A name without anything a path could be made of, one per member, ending as the member's does. */
export function safeName(member: string): string {
  const digest = createHash('sha256').update(member).digest('hex').slice(0, 12);
  const ending = extname(member).replace(/[^.A-Za-z0-9_-]/g, '');
  const stem = basename(member, extname(member))
    .replace(/[^A-Za-z0-9_-]+/g, '-')
    .slice(0, 60);
  return `${stem === '' ? 'member' : stem}-${digest}${ending.slice(0, 16)}`;
}
