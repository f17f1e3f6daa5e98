/** Where the pieces of a Zarr store lie: members of a zip archive, or files of a folder. Keys are paths within the store. */
import { open, readdir, readFile, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { unreadable } from './array-slab.ts';
import { ZIP_MEMBER_LIMIT, type ZipArchive } from './zip.ts';

/** Bytes of a store's pieces. Every answer has a buffer of its own. */
export interface ZarrPieces {
  /** keys of the pieces that describe arrays and groups: .zarray, .zgroup, .zattrs, .zmetadata, zarr.json */
  readonly metadataKeys: readonly string[];
  has(key: string): Promise<boolean>;
  get(key: string): Promise<Uint8Array | undefined>;
  /** bytes from `start` to `end`; a negative start counts from the end of the piece */
  getRange(key: string, start: number, end: number): Promise<Uint8Array | undefined>;
  close(): Promise<void>;
}

const METADATA = /(^|\/)(\.zarray|\.zgroup|\.zattrs|\.zmetadata|zarr\.json)$/;

/** True for the name of a piece that describes an array or a group. */
export function isZarrMetadata(name: string): boolean {
  return METADATA.test(name);
}

/** The pieces of a store inside an archive; closing them closes the archive. */
export function zipPieces(archive: ZipArchive): ZarrPieces {
  return {
    metadataKeys: archive.members.map(({ name }) => name).filter(isZarrMetadata),
    has: async (key) => archive.find(key) !== null,
    get: async (key) => (archive.find(key) === null ? undefined : archive.read(key)),
    async getRange(key, start, end) {
      const member = archive.find(key);
      if (member === null) return undefined;
      const from = start < 0 ? member.size + start : start;
      return (await archive.readRange(key, from, start < 0 ? member.size : end)).slice();
    },
    close: async () => archive.close(),
  };
}

/** The pieces of a store that lies in a folder. Links are not followed. */
export async function folderPieces(folder: string): Promise<ZarrPieces> {
  const metadataKeys: string[] = [];
  await listMetadata(folder, '', metadataKeys);
  const inside = (key: string) => join(folder, ...key.split('/').filter((part) => part !== '' && part !== '.' && part !== '..'));
  return {
    metadataKeys,
    has: (key) =>
      stat(inside(key)).then(
        (entry) => entry.isFile(),
        () => false,
      ),
    get: (key) => absentAsUndefined(async () => new Uint8Array(await readFile(inside(key)))),
    getRange: (key, start, end) => absentAsUndefined(() => readPart(inside(key), start, end)),
    close: async () => undefined,
  };
}

async function listMetadata(folder: string, prefix: string, found: string[]): Promise<void> {
  const entries = await readdir(join(folder, prefix), { withFileTypes: true });
  const here = entries.filter((entry) => entry.isFile() && isZarrMetadata(entry.name)).map(({ name }) => prefix + name);
  found.push(...here);
  if (found.length > ZIP_MEMBER_LIMIT)
    throw unreadable(folder, 'has too many files', 'Send the arrays that are needed.', `${ZIP_MEMBER_LIMIT}`);
  if (here.some((key) => key.endsWith('.zarray'))) return;
  for (const entry of entries) {
    if (entry.isDirectory() && entry.name !== 'c') await listMetadata(folder, `${prefix}${entry.name}/`, found);
  }
}

async function readPart(path: string, start: number, end: number): Promise<Uint8Array> {
  const handle = await open(path, 'r');
  try {
    const { size } = await handle.stat();
    const from = Math.max(0, start < 0 ? size + start : start);
    const bytes = new Uint8Array(Math.max(0, Math.min(start < 0 ? size : end, size) - from));
    await handle.read(bytes, 0, bytes.length, from);
    return bytes;
  } finally {
    await handle.close();
  }
}

async function absentAsUndefined<T>(work: () => Promise<T>): Promise<T | undefined> {
  try {
    return await work();
  } catch (error) {
    if (['ENOENT', 'ENOTDIR', 'EISDIR'].includes((error as NodeJS.ErrnoException).code ?? '')) return undefined;
    throw error;
  }
}
