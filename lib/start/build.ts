/** Builds the pages, unless the sources are those of the last build. `npm run build` does it by hand. */
import { spawn } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';

const SOURCES = ['app', 'lib', 'db', 'next.config.mjs', 'package-lock.json', 'tsconfig.json'];
const OUTPUT = '.next';
const HASH_FILE = join(OUTPUT, 'source-hash');

/** SHA-256 over every source file's path and content. */
function sourceHash(): string {
  const hash = createHash('sha256');
  for (const path of SOURCES.flatMap(filesBelow)) hash.update(path).update('\0').update(readFileSync(path));
  return hash.digest('hex');
}

function filesBelow(path: string): string[] {
  if (!existsSync(path)) return [];
  const entries = readdirSafe(path);
  if (!entries) return [path];
  return entries.sort().flatMap((name) => filesBelow(join(path, name)));
}

function readdirSafe(path: string): string[] | null {
  try {
    return readdirSync(path);
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOTDIR') return null;
    throw error;
  }
}

/** @returns true when a build was needed. @throws Error with the tail of the build's output */
export async function buildIfChanged(): Promise<boolean> {
  const hash = sourceHash();
  if (existsSync(HASH_FILE) && readFileSync(HASH_FILE, 'utf8') === hash) return false;
  await runBuild();
  writeFileSync(HASH_FILE, hash);
  return true;
}

function runBuild(): Promise<void> {
  const env = { ...process.env, NODE_ENV: 'production' as const, NEXT_TELEMETRY_DISABLED: '1' };
  const child = spawn(process.execPath, ['node_modules/next/dist/bin/next', 'build'], { env, stdio: ['ignore', 'pipe', 'pipe'] });
  let output = '';
  const keep = (chunk: Buffer) => {
    output = (output + chunk.toString()).slice(-8000);
  };
  child.stdout.on('data', keep);
  child.stderr.on('data', keep);
  return new Promise((resolve, reject) => {
    child.once('error', reject);
    child.once('exit', (code) => (code === 0 ? resolve() : reject(new Error(`The build failed (exit ${code}):\n${output}`))));
  });
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href) {
  process.stdout.write((await buildIfChanged()) ? 'built\n' : 'nothing changed since the last build\n');
}
