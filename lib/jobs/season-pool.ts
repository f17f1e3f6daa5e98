/**
 * Threads that run seasons: the parcels of a run are cut into as many parts as there are threads, the weather is shared between them.
 *
 * The result is bit for bit that of `runSeason` on one thread, because parcels do not touch one another.
 */
import { createRequire } from 'node:module';
import { availableParallelism } from 'node:os';
import { pathToFileURL } from 'node:url';
import { Worker } from 'node:worker_threads';
import { RangeViolation, Refused, ShapeError } from '../base/errors.ts';
import { keptDays } from '../season/pack.ts';
import { DAILY_VARIABLE_COUNT, type SeasonInput, type SeasonOutput } from '../season/types.ts';
import type { SeasonReply, SeasonTask } from './season-thread.ts';
import { sharedWeather } from './shared-weather.ts';
import type { SliceOutput, SliceTask } from './slice-work.ts';

/** Fewer parcels than this are not worth another thread. */
const PARCELS_PER_PART = 64;

interface SeasonPool {
  /**
   * Runs a season on the threads.
   *
   * @param signal aborting it stops the threads at work on this season and rejects with its reason
   * @throws as `runSeason`
   */
  run(input: SeasonInput, signal?: AbortSignal): Promise<SeasonOutput>;
  /**
   * Computes a slice of a run on one thread; several slices keep several threads busy. The thread takes the text of the slice over.
   *
   * @throws as `computeSliceOutput`
   */
  slice(task: SliceTask, signal?: AbortSignal): Promise<SliceOutput>;
  /** Stops the threads; seasons under way are rejected. */
  close(): Promise<void>;
}

interface Task {
  readonly task: SeasonTask;
  readonly signal: AbortSignal | undefined;
  resolve(output: SeasonOutput | SliceOutput): void;
  reject(reason: unknown): void;
}

let shared: SeasonPool | null = null;

/**
 * The pool of this process, made at the first call.
 *
 * @param size threads, counted only by the first call; as many as the machine has cores when left out
 */
export function seasonPool(size = availableParallelism()): SeasonPool {
  shared ??= makeSeasonPool(size);
  return shared;
}

/** A pool of its own, for a bench or a test. */
export function makeSeasonPool(size: number): SeasonPool {
  const threads = new Threads(Math.max(1, size));
  return {
    async run(input, signal) {
      const weather = sharedWeather(input.weather);
      const parts = partsOf(input.parcels.length, Math.max(1, size));
      const slices = parts.map(([from, to]) => ({ ...input, weather, parcels: input.parcels.slice(from, to) }));
      const outputs = await Promise.all(slices.map((part) => threads.run({ input: part }, signal) as Promise<SeasonOutput>));
      return joined(input, parts, outputs);
    },
    slice(task, signal) {
      const season = { ...task.season, weather: sharedWeather(task.season.weather) };
      return threads.run({ slice: { ...task, season } }, signal) as Promise<SliceOutput>;
    },
    async close() {
      if (shared === this) shared = null;
      await threads.close();
    },
  };
}

function partsOf(parcels: number, size: number): [number, number][] {
  const count = Math.max(1, Math.min(size, Math.ceil(parcels / PARCELS_PER_PART)));
  return Array.from({ length: count }, (_, k) => [Math.floor((k * parcels) / count), Math.floor(((k + 1) * parcels) / count)]);
}

function joined(input: SeasonInput, parts: [number, number][], outputs: SeasonOutput[]): SeasonOutput {
  if (outputs.length === 1) return outputs[0];
  const days = keptDays(input);
  const daily = new Uint16Array(input.parcels.length * DAILY_VARIABLE_COUNT * days);
  const flags = new Uint32Array(input.parcels.length * days);
  const plantings = input.parcels.reduce((count, parcel) => count + parcel.plantings.length, 0);
  const stageEt = new Float64Array(8 * plantings);
  const stageDays = new Int32Array(5 * plantings);
  let planting = 0;
  for (const [k, output] of outputs.entries()) {
    daily.set(output.daily, parts[k][0] * DAILY_VARIABLE_COUNT * days);
    flags.set(output.flags, parts[k][0] * days);
    stageEt.set(output.stageEt, 8 * planting);
    stageDays.set(output.stageDays, 5 * planting);
    planting += output.stageDays.length / 5;
  }
  return {
    daily,
    flags,
    stageEt,
    stageDays,
    closing: outputs.flatMap(({ closing }) => closing),
    maxBalanceResidual: Math.max(...outputs.map(({ maxBalanceResidual }) => maxBalanceResidual)),
  };
}

/** A thread entry in TypeScript needs its loader registered inside the thread. Threads run in worker processes, which are never bundled. */
function startThread(): Worker {
  const loaderPackage = createRequire(import.meta.url).resolve('tsx/package.json');
  const loader = new URL('./dist/esm/api/index.mjs', pathToFileURL(loaderPackage)).href;
  const entry = new URL('./season-thread.ts', import.meta.url).href;
  const boot = `import(${JSON.stringify(loader)}).then((tsx) => { tsx.register(); return import(${JSON.stringify(entry)}); })`;
  return new Worker(boot, { eval: true });
}

class Threads {
  private readonly idle: Worker[] = [];
  private readonly waiting: Task[] = [];
  private readonly busy = new Map<Worker, (reason: unknown) => void>();

  constructor(private readonly size: number) {}

  run(task: SeasonTask, signal?: AbortSignal): Promise<SeasonOutput | SliceOutput> {
    return new Promise((resolve, reject) => {
      this.waiting.push({ task, signal, resolve, reject });
      this.pump();
    });
  }

  async close(): Promise<void> {
    for (const task of this.waiting.splice(0)) task.reject(new Error('the season pool was closed'));
    const working = [...this.busy];
    for (const [, stop] of working) stop(new Error('the season pool was closed'));
    await Promise.all(this.idle.splice(0).map((thread) => thread.terminate()));
  }

  private pump(): void {
    while (this.waiting.length > 0 && this.busy.size < this.size) {
      const task = this.waiting.shift() as Task;
      if (task.signal?.aborted) task.reject(task.signal.reason);
      else this.give(this.idle.pop() ?? startThread(), task);
    }
  }

  /** Hands one task to one thread. Listeners are taken off one by one: removing all would take Node's own too. */
  private give(thread: Worker, task: Task): void {
    const release = (healthy: boolean) => {
      thread.off('message', onReply).off('error', stop).off('exit', onExit);
      task.signal?.removeEventListener('abort', onAbort);
      this.busy.delete(thread);
      if (healthy) this.idle.push(thread);
      else void thread.terminate();
      thread.unref();
      this.pump();
    };
    const onReply = (reply: SeasonReply) => {
      release(true);
      if ('output' in reply) task.resolve(reply.output);
      else task.reject(errorOf(reply.failure));
    };
    const stop = (reason: unknown) => {
      release(false);
      task.reject(reason);
    };
    const onExit = (code: number) => stop(new Error(`a season thread ended with code ${code}`));
    const onAbort = () => stop(task.signal?.reason);
    this.busy.set(thread, stop);
    thread.ref();
    thread.on('message', onReply).on('error', stop).on('exit', onExit);
    task.signal?.addEventListener('abort', onAbort, { once: true });
    thread.postMessage(task.task);
  }
}

function errorOf(failure: Extract<SeasonReply, { failure: unknown }>['failure']): Error {
  if (failure.code === 'range') return new RangeViolation(failure.message, failure.findings);
  if (failure.code === 'refused') return new Refused(failure.message, failure.findings);
  return failure.code === 'shape' ? new ShapeError(failure.message) : new Error(failure.message);
}
