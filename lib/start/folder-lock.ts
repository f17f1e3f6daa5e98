/** One service a data folder: a second one would stop the first one's database when it ends. */
import { existsSync, mkdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';

/**
 * Takes the folder, or refuses when a live process holds it. A lock left by a killed process is taken over.
 *
 * @returns gives the folder back
 * @throws Error naming the process that holds it and what to do
 */
export function lockFolder(folder: string): () => void {
  mkdirSync(folder, { recursive: true });
  const file = join(folder, 'launcher.pid');
  const holder = existsSync(file) ? Number(readFileSync(file, 'utf8')) : Number.NaN;
  if (isLauncher(holder)) {
    throw new Error(`A service already runs from ${folder} (process ${holder}): stop it, or set TILLWATER_DATA to another folder.`);
  }
  writeFileSync(file, String(process.pid));
  return () => rmSync(file, { force: true });
}

/** True for a live process that is a launcher; a pid may have been given to another program since. */
function isLauncher(pid: number): boolean {
  if (!Number.isInteger(pid) || pid === process.pid) return false;
  try {
    process.kill(pid, 0);
  } catch {
    return false;
  }
  try {
    return readFileSync(`/proc/${pid}/cmdline`, 'utf8').includes('lib/start/main.ts');
  } catch {
    return true;
  }
}
