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
import { DAILY_VARIABLE_COUNT, type SeasonInput, type SeasonOutput } from '../season/types.ts';
import type { CompletedWeather } from '../weather/variable.ts';
import type { SeasonReply } from './season-thread.ts';

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
  /** Stops the threads; seasons under way are rejected. */
  close(): Promise<void>;
}

interface Task {
  readonly input: SeasonInput;
  readonly signal: AbortSignal | undefined;
  resolve(output: SeasonOutput): void;
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
      const outputs = await Promise.all(slices.map((slice) => threads.run(slice, signal)));
      return joined(input, parts, outputs);
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
  const size = DAILY_VARIABLE_COUNT * input.dayCount;
  const daily = new Uint16Array(input.parcels.length * size);
  const flags = new Uint32Array(input.parcels.length * input.dayCount);
  for (const [k, output] of outputs.entries()) {
    daily.set(output.daily, parts[k][0] * size);
    flags.set(output.flags, parts[k][0] * input.dayCount);
  }
  return {
    daily,
    flags,
    stageEt: new Float64Array(0),
    stageDays: new Int32Array(0),
    closing: [],
    maxBalanceResidual: Math.max(...outputs.map(({ maxBalanceResidual }) => maxBalanceResidual)),
  };
}

const sharedCopies = new WeakMap<CompletedWeather, CompletedWeather>();

/** The weather on shared memory; a copy is made once per weather object, so that the slices of a run share it. */
function sharedWeather(weather: CompletedWeather): CompletedWeather {
  if (weather.airTemperatureMax.buffer instanceof SharedArrayBuffer) return weather;
  const known = sharedCopies.get(weather);
  if (known) return known;
  const onShared = (from: Float64Array): Float64Array => {
    const into = new Float64Array(new SharedArrayBuffer(from.byteLength));
    into.set(from);
    return into;
  };
  const flags = new Uint32Array(new SharedArrayBuffer(weather.flags.byteLength));
  flags.set(weather.flags);
  const copy: CompletedWeather = {
    siteCount: weather.siteCount,
    dayCount: weather.dayCount,
    airTemperatureMax: onShared(weather.airTemperatureMax),
    airTemperatureMin: onShared(weather.airTemperatureMin),
    actualVapourPressure: onShared(weather.actualVapourPressure),
    solarRadiation: onShared(weather.solarRadiation),
    windSpeed2m: onShared(weather.windSpeed2m),
    precipitation: onShared(weather.precipitation),
    referenceEt: weather.referenceEt ? onShared(weather.referenceEt) : null,
    flags,
  };
  sharedCopies.set(weather, copy);
  return copy;
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

  run(input: SeasonInput, signal?: AbortSignal): Promise<SeasonOutput> {
    return new Promise((resolve, reject) => {
      this.waiting.push({ input, signal, resolve, reject });
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
    thread.postMessage(task.input);
  }
}

function errorOf(failure: Extract<SeasonReply, { failure: unknown }>['failure']): Error {
  if (failure.code === 'range') return new RangeViolation(failure.message, failure.findings);
  if (failure.code === 'refused') return new Refused(failure.message, failure.findings);
  return failure.code === 'shape' ? new ShapeError(failure.message) : new Error(failure.message);
}
