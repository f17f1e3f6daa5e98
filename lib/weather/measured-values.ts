/** Which values of completed weather were measured, told from the bits of what was estimated. */
import { AHEAD_BITS } from './day-kind.ts';
import { type CarriedSeries, FALLBACK, type Fallback } from './variable.ts';

/** How the bits of a series begin. */
const PREFIX: Record<CarriedSeries, string> = {
  airTemperatureMax: 'temperature',
  airTemperatureMin: 'temperature',
  actualVapourPressure: 'humidity',
  solarRadiation: 'radiation',
  windSpeed2m: 'wind',
  precipitation: 'precipitation',
  referenceEt: '',
};

/** Values worked out of another measurement of the same thing, and facts about the site: still measured. */
const MEASURED_ALL_THE_SAME: ReadonlySet<Fallback> = new Set([
  'humidityFromDewPoint',
  'humidityFromRhMax',
  'humidityFromRhMean',
  'radiationFromSunshine',
  'windHeightAssumed',
  'elevationAssumed',
]);

/** Bits under which a value of the series is no measurement, a day to come included. Reference ET rests on every series but rain. */
export function estimateBits(series: CarriedSeries): number {
  return (Object.keys(FALLBACK) as Fallback[])
    .filter((name) => name.startsWith(PREFIX[series]) && !MEASURED_ALL_THE_SAME.has(name))
    .filter((name) => series !== 'referenceEt' || !name.startsWith('precipitation'))
    .reduce((bits, name) => bits | FALLBACK[name], AHEAD_BITS);
}

/** 1 where the value of the series was measured, one per flag. */
export function measuredWhere(flags: ArrayLike<number>, series: CarriedSeries): Uint8Array {
  const bits = estimateBits(series);
  return Uint8Array.from(flags, (flag) => ((flag & bits) === 0 ? 1 : 0));
}
