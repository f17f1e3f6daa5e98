/** `npm test`: types, formatting, then every test: numbers, database and HTTP under vitest, then the browser journeys on a service of its own. */
import { spawn } from 'node:child_process';
import { randomBytes } from 'node:crypto';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { freePort } from '../../db/embedded.ts';
import { startService } from './service.ts';

const onlyBrowser = process.argv.includes('--only-browser');

function run(script: string, args: readonly string[], env: Record<string, string> = {}): Promise<void> {
  const child = spawn(process.execPath, [script, ...args], { stdio: 'inherit', env: { ...process.env, ...env } });
  return new Promise((resolve, reject) => {
    child.once('error', reject);
    child.once('exit', (code) => (code === 0 ? resolve() : reject(new Error(`${script} ${args.join(' ')} ended with ${code}`))));
  });
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
    await service.stop();
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
