/** `npm test`: types, formatting, then every test: numbers, database and HTTP under vitest, then the browser journeys on a service of its own. */
import { type ChildProcess, spawn } from 'node:child_process';
import { randomBytes } from 'node:crypto';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { freePort } from '../../db/embedded.ts';

const READY_TIMEOUT_MS = 300_000;
const onlyBrowser = process.argv.includes('--only-browser');

function run(script: string, args: readonly string[], env: Record<string, string> = {}): Promise<void> {
  const child = spawn(process.execPath, [script, ...args], { stdio: 'inherit', env: { ...process.env, ...env } });
  return new Promise((resolve, reject) => {
    child.once('error', reject);
    child.once('exit', (code) => (code === 0 ? resolve() : reject(new Error(`${script} ${args.join(' ')} ended with ${code}`))));
  });
}

/** A service on a free port with a database of its own; its output is shown only when it fails. */
async function startService(folder: string, env: Record<string, string>): Promise<{ child: ChildProcess; output: () => string }> {
  const child = spawn(process.execPath, ['--import', 'tsx', 'lib/start/main.ts'], {
    stdio: ['ignore', 'pipe', 'pipe'],
    env: { ...process.env, ...env, TILLWATER_DATA: folder, DATABASE_URL: '' },
  });
  let output = '';
  const ready = new Promise<void>((resolve, reject) => {
    const timer = setTimeout(
      () => reject(new Error(`the service was not ready in ${READY_TIMEOUT_MS / 1000} s:\n${output}`)),
      READY_TIMEOUT_MS,
    );
    const keep = (chunk: Buffer) => {
      output = (output + chunk.toString()).slice(-20_000);
      if (!output.includes('Tillwater is ready')) return;
      clearTimeout(timer);
      resolve();
    };
    child.stdout?.on('data', keep);
    child.stderr?.on('data', keep);
    child.once('exit', (code) => {
      clearTimeout(timer);
      reject(new Error(`the service ended with ${code}:\n${output}`));
    });
  });
  await ready;
  return { child, output: () => output };
}

async function stopService(child: ChildProcess): Promise<void> {
  if (child.exitCode !== null) return;
  const ended = new Promise((resolve) => child.once('exit', resolve));
  child.kill('SIGTERM');
  await ended;
}

async function browserTests(): Promise<void> {
  const folder = mkdtempSync(join(tmpdir(), 'tillwater-browser-'));
  const port = String(await freePort());
  const secrets = {
    TILLWATER_DEMO_PASSWORD: randomBytes(12).toString('base64url'),
    TILLWATER_DEMO_TOKEN: `tw_${randomBytes(32).toString('base64url')}`,
  };
  const service = await startService(folder, { ...secrets, PORT: port, HOST: '127.0.0.1', LOG_LEVEL: 'warn' });
  try {
    const extra = process.argv.filter((argument) => argument.endsWith('.spec.ts') || argument.startsWith('--grep'));
    await run('node_modules/@playwright/test/cli.js', ['test', '-c', 'e2e/playwright.config.ts', ...extra], {
      ...secrets,
      BASE_URL: `http://127.0.0.1:${port}`,
    });
  } catch (error) {
    process.stderr.write(`\nThe service's last output:\n${service.output()}\n`);
    throw error;
  } finally {
    await stopService(service.child);
    rmSync(folder, { recursive: true, force: true });
  }
}

try {
  if (!onlyBrowser) {
    await run('node_modules/typescript/bin/tsc', ['--noEmit']);
    await run('node_modules/@biomejs/biome/bin/biome', ['check', '.']);
    await run('node_modules/vitest/vitest.mjs', ['run', '--config', 'test/vitest.config.ts']);
  }
  await browserTests();
} catch (error) {
  process.stderr.write(`\n${error instanceof Error ? error.message : String(error)}\n`);
  process.exit(1);
}
