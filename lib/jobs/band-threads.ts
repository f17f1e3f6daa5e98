/**
 * Threads that compute parts of bands, one part a thread: a part's bytes do not depend on how many threads there are. They are started when a part asks
 * for one, kept for the next, and never bundled.
 */
import { createRequire } from 'node:module';
import { pathToFileURL } from 'node:url';
import { Worker } from 'node:worker_threads';
import { Refused } from '../base/errors.ts';
import type { EnsembleOutput } from '../season/ensemble.ts';
import type { CompletedWeather } from '../weather/variable.ts';
import type { BandReply, BandTask } from './band-thread.ts';

const idle: Worker[] = [];

/**
 * Computes a part on a thread.
 *
 * @param signal aborting it stops the thread and rejects with its reason
 * @throws {Refused} in the words of the season's own refusal
 */
export function computeBandPart(task: BandTask, signal?: AbortSignal): Promise<EnsembleOutput> {
  return new Promise((resolve, reject) => {
    if (signal?.aborted) return reject(signal.reason);
    const thread = idle.pop() ?? startThread();
    const release = (healthy: boolean) => {
      thread.off('message', onReply).off('error', onError).off('exit', onExit);
      signal?.removeEventListener('abort', onAbort);
      thread.unref();
      if (healthy) idle.push(thread);
      else void thread.terminate();
    };
    const onReply = (reply: BandReply) => {
      release(true);
      if ('output' in reply) resolve(reply.output);
      else reject(reply.refused ? new Refused(reply.failure) : new Error(reply.failure));
    };
    const onError = (error: unknown) => {
      release(false);
      reject(error);
    };
    const onExit = (code: number) => onError(new Error(`a thread of a band ended with code ${code}`));
    const onAbort = () => onError(signal?.reason);
    thread.ref();
    thread.on('message', onReply).on('error', onError).on('exit', onExit);
    signal?.addEventListener('abort', onAbort, { once: true });
    thread.postMessage({ ...task, input: { ...task.input, weather: onSharedMemory(task.input.weather) } });
  });
}

/** Ends the threads that wait; for the end of a test or a bench. */
export async function closeBandThreads(): Promise<void> {
  await Promise.all(idle.splice(0).map((thread) => thread.terminate()));
}

function startThread(): Worker {
  const loaderPackage = createRequire(import.meta.url).resolve('tsx/package.json');
  const loader = new URL('./dist/esm/api/index.mjs', pathToFileURL(loaderPackage)).href;
  const entry = new URL('./band-thread.ts', import.meta.url).href;
  const boot = `import(${JSON.stringify(loader)}).then((tsx) => { tsx.register(); return import(${JSON.stringify(entry)}); })`;
  return new Worker(boot, { eval: true });
}

const sharedCopies = new WeakMap<CompletedWeather, CompletedWeather>();

/** The weather on shared memory, copied once per weather, so that the parts of a band share it. */
function onSharedMemory(weather: CompletedWeather): CompletedWeather {
  if (weather.airTemperatureMax.buffer instanceof SharedArrayBuffer) return weather;
  const known = sharedCopies.get(weather);
  if (known) return known;
  const entries = Object.entries(weather).map(([name, value]) => [name, ArrayBuffer.isView(value) ? shared(value) : value]);
  const copy = Object.fromEntries(entries) as CompletedWeather;
  sharedCopies.set(weather, copy);
  return copy;
}

function shared(value: ArrayBufferView): ArrayBufferView {
  const { buffer, byteOffset, byteLength } = value;
  const memory = new SharedArrayBuffer(byteLength);
  new Uint8Array(memory).set(new Uint8Array(buffer, byteOffset, byteLength));
  return value instanceof Float64Array ? new Float64Array(memory) : new Uint32Array(memory);
}
