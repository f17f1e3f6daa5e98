/**
 * Reading files in a process of its own: a file that makes a reader hang, eat memory or fall ends that process and nothing else. One is
 * kept standing by, so that a reading does not wait for a process to start.
 */
import { type ChildProcess, fork } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { childEnvironment, environment } from '../access/environment.ts';
import { type Finding, Refused } from '../base/errors.ts';
import type { ImportContext, ImportKind, ImportOptions, ImportReading } from '../files/reading.ts';
import { makeReadingFolder, removeReadingFolder } from './reading-folder.ts';

/** What a reader is asked for. Paths lie inside `folder`, which is the only place it writes to. */
export interface ReadRequest {
  readonly kind: ImportKind;
  readonly files: readonly { readonly name: string; readonly path: string }[];
  readonly options: ImportOptions;
  readonly context: ImportContext;
  readonly folder: string;
}

export type ToReader = { readonly say: 'read'; readonly request: ReadRequest } | { readonly say: 'taken' };

/** A reading without what was staged, which went out in pieces. */
export type ToldReading = Omit<ImportReading, 'staged'>;

export type FromReader =
  | { readonly say: 'ready' }
  | { readonly say: 'progress'; readonly fraction: number }
  | { readonly say: 'piece'; readonly path: string }
  | { readonly say: 'done'; readonly reading: ToldReading; readonly head: string }
  | { readonly say: 'failed'; readonly known: boolean; readonly message: string; readonly findings: readonly Finding[] };

/** What is to be read, before its files lie anywhere. */
export interface Wanted extends Omit<ReadRequest, 'files' | 'folder'> {
  /** writes the files into the reader's folder */
  layOut(folder: string): Promise<ReadRequest['files']>;
}

export interface ReadHooks {
  /** told how far it is; what it throws ends the reading */
  progress(fraction: number): Promise<void> | void;
  /** takes a packed piece; the next one waits for it */
  piece(bytes: Uint8Array): Promise<void>;
}

export interface ReadOutcome {
  readonly reading: ToldReading;
  /** packed head of the staged pieces */
  readonly head: Uint8Array;
}

const SCRIPT = fileURLToPath(new URL('./reader-process.ts', import.meta.url));
/** A reader that says nothing for so long has lost its way [ms]. */
const SILENCE_MS = 180_000;
const WATCH_MS = 200;
const MEGABYTE = 1024 * 1024;
/** Share of the memory limit that the reader's own heap may take; the rest is for decompressed arrays. */
const HEAP_SHARE = 0.8;

/** A reader and the folder that is its own: the only place it writes to, and its place for temporary files. */
interface ReaderProcess {
  readonly child: ChildProcess;
  readonly folder: string;
}

let standby: ReaderProcess | null = null;

function start(): ReaderProcess {
  const heap = Math.round(environment().TILLWATER_READER_MEMORY_MB * HEAP_SHARE);
  const folder = makeReadingFolder();
  const child = fork(SCRIPT, [], {
    execArgv: ['--import', 'tsx', `--max-old-space-size=${heap}`],
    env: childEnvironment({ TMPDIR: folder, TZ: 'UTC' }),
    serialization: 'advanced',
    stdio: ['ignore', 'ignore', 'ignore', 'ipc'],
  });
  return { child, folder };
}

const isAlive = ({ child }: ReaderProcess) => child.exitCode === null && child.signalCode === null;

/** Starts a reader that waits for the next file. */
export function standBy(): void {
  if (standby && isAlive(standby)) return;
  if (standby) removeReadingFolder(standby.folder);
  standby = start();
  standby.child.unref();
  standby.child.channel?.unref?.();
}

/** Ends the reader that stands by. */
export function stopStandby(): void {
  if (standby) end(standby);
  standby = null;
}

function end(reader: ReaderProcess): void {
  reader.child.removeAllListeners();
  reader.child.kill('SIGKILL');
  removeReadingFolder(reader.folder);
}

function takeReader(): ReaderProcess {
  const ready = standby;
  standby = null;
  if (!ready || !isAlive(ready)) return start();
  ready.child.ref();
  ready.child.channel?.ref?.();
  return ready;
}

/**
 * Reads the files of one import in a process of its own.
 *
 * @throws Refused when the reader refused the file as a whole, fell, said nothing for three minutes or took more memory than it may
 * (TILLWATER_READER_MEMORY_MB); whatever a hook throws
 */
export async function readInChild(wanted: Wanted, hooks: ReadHooks): Promise<ReadOutcome> {
  const reader = takeReader();
  const { layOut, ...rest } = wanted;
  try {
    const request: ReadRequest = { ...rest, folder: reader.folder, files: await layOut(reader.folder) };
    return await converse(reader.child, request, hooks);
  } finally {
    end(reader);
    standBy();
  }
}

function converse(child: ChildProcess, request: ReadRequest, hooks: ReadHooks): Promise<ReadOutcome> {
  return new Promise<ReadOutcome>((resolve, reject) => {
    const watch = watchOver(child, (reason) => settled(() => reject(reason)));
    const settled = (act: () => void) => {
      clearInterval(watch.timer);
      act();
    };
    child.on('message', (message: FromReader) => {
      watch.heard();
      take(child, message, hooks).then(
        (outcome) => outcome && settled(() => resolve(outcome)),
        (error) => settled(() => reject(error)),
      );
    });
    child.on('exit', (code, signal) => settled(() => reject(fallen(code, signal))));
    child.on('error', (error) => settled(() => reject(error)));
    child.send({ say: 'read', request } satisfies ToReader);
  });
}

async function take(child: ChildProcess, message: FromReader, hooks: ReadHooks): Promise<ReadOutcome | null> {
  switch (message.say) {
    case 'ready':
      return null;
    case 'progress':
      await hooks.progress(message.fraction);
      return null;
    case 'piece':
      await hooks.piece(readFileSync(message.path));
      child.send({ say: 'taken' } satisfies ToReader);
      return null;
    case 'done':
      return { reading: message.reading, head: readFileSync(message.head) };
    case 'failed':
      throw message.known ? new Refused(message.message, message.findings) : new Error(message.message);
  }
}

/** Ends the wait when the reader is silent for too long or takes too much memory. */
function watchOver(child: ChildProcess, reject: (reason: Error) => void): { timer: NodeJS.Timeout; heard(): void } {
  const limit = environment().TILLWATER_READER_MEMORY_MB;
  let last = Date.now();
  const timer = setInterval(() => {
    const used = residentMegabytes(child.pid);
    if (used > limit) {
      reject(
        new Refused(
          `Reading took more than ${limit} MB of memory and was ended. Split the file, or raise TILLWATER_READER_MEMORY_MB on a machine that has more.`,
        ),
      );
    } else if (Date.now() - last > SILENCE_MS) {
      reject(
        new Refused(
          `Reading did not get on for ${SILENCE_MS / 1000} s and was ended: the file may be damaged. Export it again, or split it.`,
        ),
      );
    }
  }, WATCH_MS);
  return {
    timer,
    heard: () => {
      last = Date.now();
    },
  };
}

/** Memory a process holds, from the system's own account; 0 where the system has none to read. */
function residentMegabytes(pid: number | undefined): number {
  try {
    const pages = Number(readFileSync(`/proc/${pid}/statm`, 'latin1').split(' ')[1]);
    return (pages * 4096) / MEGABYTE;
  } catch {
    return 0;
  }
}

function fallen(code: number | null, signal: NodeJS.Signals | null): Refused {
  return new Refused(
    `The reader ended in the middle of this file (${signal ?? `code ${code}`}): it is damaged, or needs more memory than the ${environment().TILLWATER_READER_MEMORY_MB} MB a reader may have (TILLWATER_READER_MEMORY_MB). Export it again, or split it.`,
  );
}
