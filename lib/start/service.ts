/** A whole service in processes of its own, for tests that start, stop and kill one. */
import { type ChildProcess, spawn } from 'node:child_process';

const READY_TIMEOUT_MS = 300_000;
const STOP_TIMEOUT_MS = 20_000;

export interface Service {
  /** what the launcher has printed, its last 20,000 characters */
  output(): string;
  /** SIGTERM; settles when everything has stopped */
  stop(): Promise<void>;
  /** SIGKILL to launcher, web and worker at once; the embedded database lives on, as it would */
  kill(): Promise<void>;
}

/**
 * Starts `npm start`'s launcher with an embedded database in `folder`, in a process group of its own, and waits until it is ready.
 *
 * @throws Error with the launcher's output when it is not ready in time or ends
 */
export async function startService(folder: string, env: Record<string, string>): Promise<Service> {
  const child = spawn(process.execPath, ['--import', 'tsx', 'lib/start/main.ts'], {
    stdio: ['ignore', 'pipe', 'pipe'],
    detached: true,
    env: { ...process.env, ...env, TILLWATER_DATA: folder, DATABASE_URL: '' },
  });
  let output = '';
  const keep = (chunk: Buffer) => {
    output = (output + chunk.toString()).slice(-20_000);
  };
  child.stdout?.on('data', keep);
  child.stderr?.on('data', keep);
  await readiness(child, () => output);
  return { output: () => output, stop: () => end(child, 'SIGTERM'), kill: () => end(child, 'SIGKILL') };
}

function readiness(child: ChildProcess, output: () => string): Promise<void> {
  return new Promise((resolve, reject) => {
    const done = (act: () => void) => {
      clearTimeout(timer);
      child.stdout?.off('data', look);
      child.off('exit', ended);
      act();
    };
    const look = () => {
      if (output().includes('Stop with Ctrl-C')) done(resolve); // the launcher's last line
    };
    const ended = (code: number | null) => done(() => reject(new Error(`the service ended with ${code}:\n${output()}`)));
    const timer = setTimeout(
      () => done(() => reject(new Error(`the service was not ready in ${READY_TIMEOUT_MS / 1000} s:\n${output()}`))),
      READY_TIMEOUT_MS,
    );
    child.stdout?.on('data', look);
    child.on('exit', ended);
  });
}

/** A kill goes to the whole group; a stop to the launcher alone, which stops the others in order. */
async function end(child: ChildProcess, signal: 'SIGTERM' | 'SIGKILL'): Promise<void> {
  if (child.exitCode !== null || child.signalCode !== null || child.pid === undefined) return;
  const ended = new Promise<void>((resolve) => child.once('exit', () => resolve()));
  process.kill(signal === 'SIGKILL' ? -child.pid : child.pid, signal);
  const late = setTimeout(() => child.pid && process.kill(-child.pid, 'SIGKILL'), STOP_TIMEOUT_MS);
  await ended;
  clearTimeout(late);
}
