/** A folder of its own for the files of one reading, beside the service's data and gone when the reading ends. */
import { existsSync, mkdirSync, mkdtempSync, readdirSync, rmSync } from 'node:fs';
import { open } from 'node:fs/promises';
import { join, resolve } from 'node:path';
import type { Tx } from '../../db/connect.ts';
import { eachFilePiece } from '../../db/queries/import-row.ts';
import { environment } from '../access/environment.ts';

const FOLDER = 'reading';

function parentFolder(): string {
  return resolve(environment().TILLWATER_DATA, FOLDER);
}

/** A new folder of this process. */
export function makeReadingFolder(): string {
  mkdirSync(parentFolder(), { recursive: true });
  return mkdtempSync(join(parentFolder(), `${process.pid}-`));
}

export function removeReadingFolder(folder: string): void {
  rmSync(folder, { recursive: true, force: true });
}

/** Removes the folders of processes that are no more. */
export function clearReadingFolders(): void {
  if (!existsSync(parentFolder())) return;
  for (const name of readdirSync(parentFolder())) {
    if (!isAlive(Number.parseInt(name, 10))) removeReadingFolder(join(parentFolder(), name));
  }
}

function isAlive(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    return (error as NodeJS.ErrnoException).code === 'EPERM';
  }
}

/** Writes the stored files of an import into a folder, piece by piece. The names on disk are numbers: a file's own name is never a path. */
export async function layOutFiles(
  tx: Tx,
  own: { districtId: string; importId: string },
  folder: string,
): Promise<{ name: string; path: string }[]> {
  const files: { name: string; path: string }[] = [];
  for await (const piece of eachFilePiece(tx, own.districtId, own.importId)) {
    files[piece.place] ??= { name: piece.name, path: join(folder, `file-${piece.place}${endingOf(piece.name)}`) };
    const handle = await open(files[piece.place].path, 'a');
    try {
      await handle.write(piece.bytes);
    } finally {
      await handle.close();
    }
  }
  return files;
}

/** Ending of a file name where it is a plain one: some readers look at it. */
function endingOf(name: string): string {
  return /\.[A-Za-z0-9]{1,8}$/.exec(name)?.[0].toLowerCase() ?? '';
}
