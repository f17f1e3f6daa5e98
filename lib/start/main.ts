/**
 * `npm start`: database, migrations, first data, build, worker and web process, in that order; then waits for a signal and stops them in
 * the opposite order. The application's processes never hold more than the application's role.
 */
import { createHmac } from 'node:crypto';
import { createServer } from 'node:net';
import { join } from 'node:path';
import { startEmbedded } from '../../db/embedded.ts';
import { migrateDatabase } from '../../db/migrate.ts';
import { closeDatabase } from '../access/database.ts';
import { environment, rereadEnvironment } from '../access/environment.ts';
import { log } from '../access/log.ts';
import { releaseOrphans, stopQueue } from '../jobs/queue.ts';
import { buildIfChanged } from './build.ts';
import { type Child, keepRunning } from './children.ts';
import { type FirstData, prepareFirstData } from './first-data.ts';
import { lockFolder } from './folder-lock.ts';

const say = (line: string) => process.stdout.write(`${line}\n`);
const dev = process.argv.includes('--dev');
const children: Child[] = [];
let stopDatabase: () => Promise<void> = async () => {};
let stopping = false;

async function stop(code: number): Promise<never> {
  if (!stopping) {
    stopping = true;
    for (const child of [...children].reverse()) await child.stop();
    await stopQueue(1000);
    await closeDatabase();
    await stopDatabase();
  }
  process.exit(code);
}
process.on('SIGTERM', () => void stop(0));
process.on('SIGINT', () => void stop(0));

async function openOwnDatabase(): Promise<string> {
  const given = environment().DATABASE_URL;
  if (given) return given;
  const unlock = lockFolder(environment().TILLWATER_DATA);
  say('Tillwater: starting the embedded database …');
  const server = await startEmbedded({ folder: join(environment().TILLWATER_DATA, 'postgres') });
  stopDatabase = async () => {
    await server.stop();
    unlock();
  };
  process.env.DATABASE_URL = server.ownerUrl;
  rereadEnvironment();
  return server.ownerUrl;
}

/** Before anything is started: a second service in the same folder must not touch the first one's database. */
function refuseTakenPort(host: string, port: number): Promise<void> {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', (error: NodeJS.ErrnoException) =>
      reject(
        new Error(
          error.code === 'EADDRINUSE'
            ? `Port ${port} of ${host} is taken: stop what listens there, or set PORT to another.`
            : `Cannot listen on ${host}:${port} (${error.code}): set HOST and PORT to an address of this machine.`,
        ),
      ),
    );
    probe.listen(port, host, () => probe.close(() => resolve()));
  });
}

/** A secret every host with the same DATABASE_URL agrees on, unless one is set. */
function sharedSecret(ownerUrl: string): string {
  return (
    environment().TILLWATER_SECRET ?? createHmac('sha256', new URL(ownerUrl).password).update('tillwater sessions').digest('base64url')
  );
}

function welcome(first: FirstData, address: string): void {
  say('');
  say(`Tillwater is ready: ${address}`);
  if (first.setupToken) {
    say('This service has no district yet. Make the first one in the browser, or with POST /api/v1/districts and this set-up token:');
    say(`  ${first.setupToken}`);
  }
  if (first.signIns.length > 0) {
    say(`Demo district (invented): ${first.districtName}`);
    for (const entry of first.signIns) say(`  ${entry.role.padEnd(10)} ${entry.email.padEnd(36)} ${entry.password}`);
    say(`Write token for scripts: ${first.token}`);
  }
  say('Stop with Ctrl-C.');
}

try {
  const began = Date.now();
  const { HOST, PORT, TILLWATER_WORKERS } = environment();
  await refuseTakenPort(HOST, PORT);
  const embedded = environment().DATABASE_URL === undefined;
  const ownerUrl = await openOwnDatabase();
  process.env.TILLWATER_SECRET = sharedSecret(ownerUrl);
  rereadEnvironment();
  await migrateDatabase(ownerUrl, 'db/migrations');
  if (embedded) await releaseOrphans();
  const first = await prepareFirstData(ownerUrl);
  first.computed.catch(() => {}); // awaited below; until then a failure must not end the process
  // where this is the only worker there is, what it held when it fell can be given back at once
  const beforeRestart = embedded && TILLWATER_WORKERS === 1 ? releaseOrphans : undefined;
  for (let i = 0; i < TILLWATER_WORKERS; i++) children.push(keepRunning('worker', 'lib/start/worker.ts', { beforeRestart }));
  if (!dev) {
    say('Tillwater: building the pages if they changed (about a minute the first time) …');
    await buildIfChanged();
  }
  const web = keepRunning('web', 'lib/start/serve.ts', { env: { NODE_ENV: dev ? 'development' : 'production', ...first.webEnvironment } });
  children.push(web);
  await web.ready;
  await first.computed;
  const address = environment().TILLWATER_URL ?? `http://${HOST === '0.0.0.0' ? 'localhost' : HOST}:${PORT}`;
  welcome(first, address);
  log().info({ seconds: (Date.now() - began) / 1000 }, 'ready');
} catch (error) {
  process.stderr.write(`${error instanceof Error ? error.message : String(error)}\n`);
  await stop(1);
}
