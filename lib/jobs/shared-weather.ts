/** Weather on memory that threads share, so that no slice of a run carries a copy. */
import type { CompletedWeather } from '../weather/variable.ts';

const copies = new WeakMap<CompletedWeather, CompletedWeather>();

/** The weather on shared memory; a copy is made once per weather object, none where it lies there already. */
export function sharedWeather(weather: CompletedWeather): CompletedWeather {
  if (weather.airTemperatureMax.buffer instanceof SharedArrayBuffer) return weather;
  const known = copies.get(weather);
  if (known) return known;
  const entries = Object.entries(weather).map(([name, value]) => [name, ArrayBuffer.isView(value) ? onShared(value) : value]);
  const copy = Object.fromEntries(entries) as CompletedWeather;
  copies.set(weather, copy);
  return copy;
}

function onShared(value: ArrayBufferView): ArrayBufferView {
  const memory = new SharedArrayBuffer(value.byteLength);
  new Uint8Array(memory).set(new Uint8Array(value.buffer, value.byteOffset, value.byteLength));
  return value instanceof Float64Array ? new Float64Array(memory) : new Uint32Array(memory);
}
