/**
 * The process's side of its HDF5 thread: one thread for all open files, started when the first is opened and ended with the last, so that its
 * memory goes back to the system. A request that takes too long ends the thread; other files are then opened again in a new one.
 */
import { createRequire } from 'node:module';
import { pathToFileURL } from 'node:url';
import { Worker } from 'node:worker_threads';
import type { Hdf5Contents, Hdf5Reply, Hdf5Request } from './hdf5-messages.ts';

/** Longest time to open a file, and to read one slab [ms]. */
const TIME_LIMIT = { open: 20_000, read: 120_000, text: 120_000, close: 10_000 } as const;
/** Time the thread stays when no file is open [ms]: files of one import follow one another. */
const IDLE_TIME = 2000;
/** Largest heap of the thread beside the library's own memory [MB]. */
const HEAP_LIMIT = 512;

interface Waiting {
  resolve(value: unknown): void;
  reject(error: Error): void;
  readonly timer: NodeJS.Timeout;
}

/** The thread ended under way: the file may be asked again. */
export class ThreadEnded extends Error {}

class Hdf5Thread {
  readonly files = new Set<number>();
  isAlive = true;
  private readonly waiting = new Map<number, Waiting>();
  private readonly worker: Worker;
  private nextId = 1;

  constructor() {
    this.worker = startThread();
    this.worker.unref();
    this.worker.on('message', (reply: Hdf5Reply) => this.settle(reply));
    this.worker.on('error', (error) => this.end(error));
    this.worker.on('exit', () => this.end(new ThreadEnded('the HDF5 thread ended')));
  }

  ask(request: Hdf5Request): Promise<unknown> {
    const id = this.nextId++;
    return new Promise((resolve, reject) => {
      const limit = TIME_LIMIT[request.kind];
      const timer = setTimeout(() => this.end(new Error(`it was not read within ${limit / 1000} s`)), limit);
      this.waiting.set(id, { resolve, reject, timer });
      this.worker.ref();
      this.worker.postMessage({ id, request });
    });
  }

  get isIdle(): boolean {
    return this.waiting.size === 0 && this.files.size === 0;
  }

  end(reason: Error): void {
    if (!this.isAlive) return;
    this.isAlive = false;
    const [first, ...others] = this.waiting.values();
    this.waiting.clear();
    if (first) {
      clearTimeout(first.timer);
      first.reject(reason);
    }
    for (const { timer, reject } of others) {
      clearTimeout(timer);
      reject(new ThreadEnded('the HDF5 thread ended on another file'));
    }
    void this.worker.terminate();
  }

  private settle(reply: Hdf5Reply): void {
    const asked = this.waiting.get(reply.id);
    if (asked === undefined) return;
    this.waiting.delete(reply.id);
    clearTimeout(asked.timer);
    if (this.waiting.size === 0) this.worker.unref();
    if ('failure' in reply) asked.reject(new Error(reply.failure));
    else asked.resolve(reply.value);
  }
}

/**
 * A thread entry in TypeScript needs its loader registered inside the thread. The HDF5 library is loaded before: it is four megabytes of plain
 * JavaScript that the loader need not look at. Files are read in worker processes, which are never bundled.
 */
function startThread(): Worker {
  const packages = createRequire(import.meta.url);
  const loader = new URL('./dist/esm/api/index.mjs', pathToFileURL(packages.resolve('tsx/package.json'))).href;
  const library = import.meta.resolve('h5wasm/node');
  const entry = new URL('./hdf5-thread.ts', import.meta.url).href;
  const [first, second, third] = [library, loader, entry].map((address) => JSON.stringify(address));
  const boot = `import(${first}).then(() => import(${second})).then((tsx) => { tsx.register(); return import(${third}); })`;
  return new Worker(boot, { eval: true, resourceLimits: { maxOldGenerationSizeMb: HEAP_LIMIT } });
}

let shared: Hdf5Thread | null = null;
let idleTimer: NodeJS.Timeout | null = null;

function currentThread(): Hdf5Thread {
  if (idleTimer !== null) clearTimeout(idleTimer);
  idleTimer = null;
  if (shared === null || !shared.isAlive) shared = new Hdf5Thread();
  return shared;
}

function endWhenIdle(): void {
  if (idleTimer !== null || shared === null || !shared.isIdle) return;
  idleTimer = setTimeout(() => {
    idleTimer = null;
    if (!shared?.isIdle) return;
    shared.end(new ThreadEnded('no file is open'));
    shared = null;
  }, IDLE_TIME);
  idleTimer.unref();
}

/** A file open in the thread. */
export class Hdf5Handle {
  private thread: Hdf5Thread | null = null;
  private handle = 0;

  constructor(private readonly path: string) {}

  /** Opens the file. @throws when the library cannot, or takes too long */
  async open(): Promise<Hdf5Contents> {
    const thread = currentThread();
    try {
      const contents = (await thread.ask({ kind: 'open', path: this.path })) as Hdf5Contents;
      this.thread = thread;
      this.handle = contents.handle;
      thread.files.add(contents.handle);
      return contents;
    } finally {
      endWhenIdle();
    }
  }

  /** Numbers of a slab of a dataset. */
  async read(path: string, start: readonly number[], count: readonly number[]): Promise<Float64Array> {
    return (await this.ask('read', path, start, count)) as Float64Array;
  }

  /** Texts of a slab of a dataset. */
  async readText(path: string, start: readonly number[], count: readonly number[]): Promise<string[]> {
    return (await this.ask('text', path, start, count)) as string[];
  }

  async close(): Promise<void> {
    const { thread, handle } = this;
    this.thread = null;
    if (thread?.isAlive) {
      thread.files.delete(handle);
      await thread.ask({ kind: 'close', handle }).catch(() => undefined);
    }
    endWhenIdle();
  }

  private async ask(kind: 'read' | 'text', path: string, start: readonly number[], count: readonly number[]): Promise<unknown> {
    for (let attempt = 1; ; attempt++) {
      if (!this.thread?.isAlive) await this.open();
      try {
        return await (this.thread as Hdf5Thread).ask({ kind, handle: this.handle, path, start, count });
      } catch (error) {
        if (!(error instanceof ThreadEnded) || attempt > 2) throw error;
      }
    }
  }
}
