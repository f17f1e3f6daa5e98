/** Child processes of the launcher: started from the same sources, restarted when they fall, ended in order. */
import { type ChildProcess, spawn } from 'node:child_process';
import { setTimeout as sleep } from 'node:timers/promises';
import { log } from '../access/log.ts';

const GRACE_MS = 10_000;
/** A process that falls is started again after this long, doubled each time it falls soon after. */
const RESTART_DELAY_MS = 1000;
const LONGEST_DELAY_MS = 30_000;
const STEADY_MS = 60_000;

export interface Child {
  /** settles when the child says it is ready */
  readonly ready: Promise<void>;
  stop(): Promise<void>;
}

/**
 * Starts `node --import tsx <script>` and keeps it running until `stop`. The child is told of its parent's death by the closing of its
 * message channel, and says "ready" over it.
 *
 * @param options `beforeRestart` runs when the process has fallen, before it is started again
 */
export function keepRunning(
  name: string,
  script: string,
  options: { readonly env?: Record<string, string>; readonly beforeRestart?: () => Promise<unknown> } = {},
): Child {
  let stopping = false;
  let current: ChildProcess;
  let delay = RESTART_DELAY_MS;
  let startedAt = 0;
  let announce: () => void = () => {};
  const ready = new Promise<void>((resolve) => {
    announce = resolve;
  });
  const again = async () => {
    if (stopping) return;
    await options.beforeRestart?.().catch((error) => log().error({ err: error, child: name }, 'before starting again'));
    if (!stopping) start();
  };
  const start = () => {
    startedAt = Date.now();
    current = spawn(process.execPath, ['--import', 'tsx', script], {
      env: { ...process.env, ...options.env },
      stdio: ['ignore', 'inherit', 'inherit', 'ipc'],
    });
    current.on('message', (message) => {
      if (message === 'ready') announce();
    });
    current.on('exit', (code, signal) => {
      if (stopping) return;
      log().error({ child: name, code, signal }, 'a process of the service fell; starting it again');
      delay = Date.now() - startedAt > STEADY_MS ? RESTART_DELAY_MS : Math.min(LONGEST_DELAY_MS, delay * 2);
      setTimeout(() => void again(), delay);
    });
  };
  start();
  return {
    ready,
    async stop() {
      stopping = true;
      await endProcess(current);
    },
  };
}

/** SIGTERM, and SIGKILL when that was not heeded in time. */
async function endProcess(child: ChildProcess): Promise<void> {
  if (child.exitCode !== null || child.signalCode !== null) return;
  const ended = new Promise<void>((resolve) => child.once('exit', () => resolve()));
  child.kill('SIGTERM');
  await Promise.race([ended, sleep(GRACE_MS, undefined, { ref: false })]);
  if (child.exitCode === null && child.signalCode === null) child.kill('SIGKILL');
  await ended;
}

/**
 * In a child: calls `stop` once on SIGTERM, SIGINT or the parent's death, then ends the process.
 */
export function stopWithParent(stop: () => Promise<void>): void {
  let begun = false;
  const end = async () => {
    if (begun) return;
    begun = true;
    try {
      await stop();
    } catch (error) {
      log().error({ err: error }, 'stopping');
    }
    process.exit(0);
  };
  process.on('SIGTERM', end);
  process.on('SIGINT', end);
  process.on('disconnect', end);
}

/** In a child: tells the launcher that the work can begin. */
export function sayReady(): void {
  process.send?.('ready');
}
