/** A watched folder: files under the folder that whoever runs the service has set aside for a district, and nothing beyond it. */
import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { copyFile, open, readdir, realpath, stat } from 'node:fs/promises';
import { basename, dirname, join, resolve, sep } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { environment } from '../../access/environment.ts';
import { Refused } from '../../base/errors.ts';
import { HEAD_BYTES } from '../../files/content-kind.ts';

/** A file that is still being written is left for the next turn: it must have rested this long [ms]. */
const REST_MS = 5000;
/** Most files of one turn. */
const MOST_FILES = 400;

export interface FolderFile {
  readonly path: string;
  readonly name: string;
  /** size and times of change: what tells it from its next version */
  readonly mark: string;
}

/**
 * The folder of a district.
 *
 * @throws Refused when the service has none set aside
 */
export function districtFolder(districtCode: string): string {
  const { TILLWATER_FEED_FOLDER } = environment();
  if (!TILLWATER_FEED_FOLDER) {
    throw new Refused(
      'This service watches no folder: whoever runs it must set TILLWATER_FEED_FOLDER; each district then has its own folder inside.',
    );
  }
  return resolve(TILLWATER_FEED_FOLDER, districtCode);
}

/** @throws Refused for a pattern that leaves the folder */
export function checkPattern(pattern: string): void {
  const parts = pattern.split('/');
  if (pattern.startsWith('/') || /[\\:\0]/.test(pattern) || parts.some((part) => part === '..' || part === '')) {
    throw new Refused(
      `"${pattern}" is not a file pattern inside the district's folder: give a name such as "hourly_{YYYY}{MM}{DD}*.csv", without "..", and not from the root.`,
    );
  }
  if (parts.slice(0, -1).some((part) => part.includes('*')))
    throw new Refused(`"${pattern}" has a star in a folder's name: a star may stand only in the file's name.`);
}

/** Files of a filled pattern, by name; those that were changed a moment ago are waited for once. */
export async function listFolder(root: string, pattern: string): Promise<FolderFile[]> {
  const first = await listRested(root, pattern);
  if (!first.restless) return first.files;
  await sleep(REST_MS);
  return (await listRested(root, pattern)).files;
}

async function listRested(root: string, pattern: string): Promise<{ files: FolderFile[]; restless: boolean }> {
  checkPattern(pattern);
  const folder = join(root, dirname(pattern));
  const wanted = matcher(basename(pattern));
  const names = (await readdir(folder).catch(() => [])).filter((name) => wanted.test(name)).sort();
  const files: FolderFile[] = [];
  let restless = false;
  for (const name of names.slice(0, MOST_FILES)) {
    const path = await insideOnly(root, join(folder, name));
    if (path === null) continue;
    const info = await stat(path);
    if (!info.isFile()) continue;
    if (Date.now() - info.mtimeMs < REST_MS) {
      restless = true;
      continue;
    }
    files.push({ path, name, mark: `${info.size}-${info.mtimeMs}-${info.ctimeMs}` });
  }
  return { files, restless };
}

/** The real path, or null where a link leads out of the folder. */
async function insideOnly(root: string, path: string): Promise<string | null> {
  const [real, home] = await Promise.all([realpath(path).catch(() => null), realpath(root).catch(() => null)]);
  return real !== null && home !== null && real.startsWith(home + sep) ? real : null;
}

function matcher(pattern: string): RegExp {
  return new RegExp(
    `^${pattern
      .split('*')
      .map((part) => part.replace(/[.*+?^${}()|[\]\\]/g, '\\$&'))
      .join('.*')}$`,
  );
}

/** Copies a file aside and says what it is, so that what is imported is what was hashed. */
export async function takeAside(path: string, into: string, limit: number) {
  const { size } = await stat(path);
  if (size > limit) {
    throw new Refused(
      `The file is larger than ${Math.round(limit / 1024 / 1024)} MB, the most this service takes (TILLWATER_UPLOAD_LIMIT_MB).`,
    );
  }
  await copyFile(path, into);
  const hash = createHash('sha256');
  for await (const part of createReadStream(into)) hash.update(part);
  const handle = await open(into, 'r');
  try {
    const head = Buffer.alloc(HEAD_BYTES);
    const { bytesRead } = await handle.read(head, 0, HEAD_BYTES, 0);
    return { path: into, size: (await stat(into)).size, sha256: hash.digest('hex'), head: head.subarray(0, bytesRead) };
  } finally {
    await handle.close();
  }
}
