/**
 * Starts that the weather decides: sowing, emergence or green-up once it is warm, wet or free of frost.
 */
import { SOIL_TEMPERATURE_DAYS } from './soil-temperature.ts';
import { degreeDaysOfMean } from './thermal-time.ts';

/** Rows of weather a start is looked for in, [day]; °C and mm d⁻¹. */
export interface StartWeather {
  readonly airTemperatureMax: Float64Array;
  readonly airTemperatureMin: Float64Array;
  readonly precipitation: Float64Array;
}

/** A start rule with its kind and numbers; see `StartRule` of the season for what each kind means. */
export type StartCondition =
  | {
      readonly kind: 'air-temperature' | 'soil-temperature';
      readonly threshold: number;
      readonly days: number;
      readonly falling?: boolean;
    }
  | { readonly kind: 'rain'; readonly depth: number; readonly days: number }
  | { readonly kind: 'frost-free'; readonly threshold: number }
  | { readonly kind: 'growing-degree-days'; readonly base: number; readonly sum: number };

export interface FoundStart {
  /** first day of the crop, offset from the first day of the run */
  readonly day: number;
  /** false when the rule was not met in its window, or no day of the window has weather */
  readonly met: boolean;
}

/**
 * Mean of (Tmax + Tmin) / 2 over the days up to and with `day`; at the start of the run over the days there are.
 *
 * Missing: days without temperature are left out; NaN where none has any.
 *
 * @param day offset from the first day of the run, at least 0
 * @param days days of the mean, at least 1
 * @returns [°C]
 * @example runningMean({ airTemperatureMax: Float64Array.of(20, 24), airTemperatureMin: Float64Array.of(10, 14), precipitation: new Float64Array(2) }, 1, 10) // 17
 */
export function runningMean(weather: StartWeather, day: number, days: number): number {
  let sum = 0;
  let count = 0;
  for (let d = Math.max(0, day - days + 1); d <= day; d++) {
    const mean = (weather.airTemperatureMax[d] + weather.airTemperatureMin[d]) / 2;
    if (Number.isNaN(mean)) continue;
    sum += mean;
    count++;
  }
  return count > 0 ? sum / count : Number.NaN;
}

/**
 * Mean over the days up to and with `day` of the estimated soil temperature, which is itself the mean of the air's over the week before
 * (`fillSoilTemperature`).
 *
 * @returns [°C]
 * Source: common practice, no source.
 */
export function runningSoilMean(weather: StartWeather, day: number, days: number): number {
  const first = Math.max(0, day - days + 1);
  let sum = 0;
  for (let d = first; d <= day; d++) sum += runningMean(weather, d, SOIL_TEMPERATURE_DAYS);
  return sum / (day - first + 1);
}

/**
 * The day on which a start rule is met, searched from `earliest` to `latest` days after it.
 *
 *   air, soil temperature: first day whose mean over `days` days is at or above the threshold (falling: at or below it)
 *   rain: first day on which `depth` has fallen within `days` days
 *   frost-free: day after the last minimum below the threshold within the window; the earliest day when there is none
 *   growing degree days: first day on which their sum above the base (by the day's mean, method 1) from the earliest day reaches `sum`
 *
 * Not met: the latest day. Only days of the run have weather: a window that begins before it is searched from the run's first day, and one that lies
 * wholly outside it has the earliest day, which is what the planting says. Missing: a day without temperature meets no rule.
 *
 * @param condition kind and numbers
 * @param earliest offset of the first day allowed; may be negative
 * @param latest days after it
 * @example findStart({ kind: 'rain', depth: 9, days: 2 }, 0, 2, { airTemperatureMax: new Float64Array(3), airTemperatureMin: new Float64Array(3), precipitation: Float64Array.of(1, 4, 5) }) // { day: 2, met: true }
 * Source: FAO-56 chapter 6 for the rules of its growing seasons by temperature and frost; rain: common practice, no source.
 */
export function findStart(condition: StartCondition, earliest: number, latest: number, weather: StartWeather): FoundStart {
  const days = weather.airTemperatureMax.length;
  const last = earliest + latest;
  if (last < 0 || earliest >= days) return { day: earliest, met: false };
  const window = { first: Math.max(0, earliest), last: Math.min(days - 1, last) };
  if (condition.kind === 'frost-free') return afterLastFrost(condition.threshold, earliest, window, weather.airTemperatureMin);
  const found = firstDayOf(condition, window, weather);
  return found < 0 ? { day: last, met: false } : { day: found, met: true };
}

interface Window {
  readonly first: number;
  readonly last: number;
}

function firstDayOf(condition: Exclude<StartCondition, { kind: 'frost-free' }>, window: Window, weather: StartWeather): number {
  let sum = 0;
  for (let d = window.first; d <= window.last; d++) {
    if (condition.kind === 'rain') {
      if (rainWithin(weather.precipitation, d, condition.days) >= condition.depth) return d;
    } else if (condition.kind === 'growing-degree-days') {
      const today = degreeDaysOfMean(weather.airTemperatureMax[d], weather.airTemperatureMin[d], condition.base);
      if (!Number.isNaN(today)) sum += today;
      if (sum >= condition.sum) return d;
    } else {
      const meanOf = condition.kind === 'soil-temperature' ? runningSoilMean : runningMean;
      const mean = meanOf(weather, d, condition.days);
      if (condition.falling ? mean <= condition.threshold : mean >= condition.threshold) return d;
    }
  }
  return -1;
}

/** Rain of the days up to and with `day` [mm]; at the start of the run of the days there are. @example rainWithin(Float64Array.of(1, 2, 4), 2, 2) // 6 */
export function rainWithin(precipitation: Float64Array, day: number, days: number): number {
  let sum = 0;
  for (let d = Math.max(0, day - days + 1); d <= day; d++) sum += precipitation[d];
  return sum;
}

function afterLastFrost(threshold: number, earliest: number, window: Window, minimum: Float64Array): FoundStart {
  for (let d = window.last; d >= window.first; d--) if (minimum[d] < threshold) return { day: d + 1, met: true };
  return { day: earliest, met: true };
}
