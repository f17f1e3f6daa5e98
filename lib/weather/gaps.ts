/**
 * Gaps in the temperature record of a site. Only maximum and minimum temperature are filled: rain is never interpolated, and the other
 * variables have their own published fallbacks.
 */
import { civilFromDayNumber, type DayNumber, dayNumber, dayNumberOf } from '../base/civil-date.ts';
import { FALLBACK, type SiteObservations } from './variable.ts';

/** Longest gap that is bridged by a straight line between its neighbours [d]. */
const LONGEST_GAP_IN_TIME = 5;
/** Days on either side of the calendar day that make up its normal. */
const NORMAL_HALF_WINDOW = 7;

/** Temperatures with their gaps filled, [site × day], and what was done, as bits of FALLBACK. The observations are never changed. */
export interface FilledTemperatures {
  readonly airTemperatureMax: Float64Array;
  readonly airTemperatureMin: Float64Array;
  readonly flags: Uint16Array;
}

/**
 * Fills gaps in the daily extremes of temperature, each extreme by itself.
 *
 * A gap of at most five days with values on both sides is bridged by a straight line (flag `temperatureFilledInTime`). Any other missing day
 * takes the normal of the day: the mean over the same calendar day ± 7 days in all other years of the same site's record (flag
 * `temperatureFromNormal`). A day for which neither is possible stays NaN, and so does a filled day whose maximum would fall below its minimum.
 *
 * Source: WMO-No. 1203, Guidelines on the Calculation of Climate Normals, for means of the other years; the limits here are the product's own.
 */
export function fillTemperatureGaps(observations: SiteObservations): FilledTemperatures {
  const { dayCount, sites, values, startDate } = observations;
  const length = sites.length * dayCount;
  const first = dayNumber(startDate);
  const flags = new Uint16Array(length);
  const airTemperatureMax = copyOf(values.air_temperature_max_c, length);
  const airTemperatureMin = copyOf(values.air_temperature_min_c, length);
  for (let site = 0; site < sites.length; site++) {
    const [from, to] = [site * dayCount, (site + 1) * dayCount];
    const siteFlags = flags.subarray(from, to);
    fillSeries(airTemperatureMax.subarray(from, to), first, siteFlags);
    fillSeries(airTemperatureMin.subarray(from, to), first, siteFlags);
  }
  withdrawInversions({ airTemperatureMax, airTemperatureMin, flags }, observations);
  return { airTemperatureMax, airTemperatureMin, flags };
}

function copyOf(values: Float64Array | undefined, length: number): Float64Array {
  return values ? values.slice() : new Float64Array(length).fill(Number.NaN);
}

/** Fills one series in place, from a copy of what was observed. */
function fillSeries(series: Float64Array, first: DayNumber, flags: Uint16Array): void {
  const observed = series.slice();
  let day = 0;
  while (day < series.length) {
    if (!Number.isNaN(observed[day])) {
      day++;
      continue;
    }
    const end = gapEnd(observed, day);
    const inside = day > 0 && end < observed.length;
    if (inside && end - day <= LONGEST_GAP_IN_TIME) fillInTime(series, day, end, flags);
    else fillFromNormals({ series, observed, first, flags }, day, end);
    day = end;
  }
}

function gapEnd(observed: Float64Array, start: number): number {
  let end = start;
  while (end < observed.length && Number.isNaN(observed[end])) end++;
  return end;
}

function fillInTime(series: Float64Array, start: number, end: number, flags: Uint16Array): void {
  const [before, after] = [series[start - 1], series[end]];
  for (let day = start; day < end; day++) {
    series[day] = before + ((after - before) * (day - start + 1)) / (end - start + 1);
    flags[day] |= FALLBACK.temperatureFilledInTime;
  }
}

interface SeriesAtWork {
  readonly series: Float64Array;
  readonly observed: Float64Array;
  readonly first: DayNumber;
  readonly flags: Uint16Array;
}

function fillFromNormals({ series, observed, first, flags }: SeriesAtWork, start: number, end: number): void {
  for (let day = start; day < end; day++) {
    const normal = normalOfDay(observed, first, day);
    if (Number.isNaN(normal)) continue;
    series[day] = normal;
    flags[day] |= FALLBACK.temperatureFromNormal;
  }
}

/**
 * Normal of a day: mean of the observed values within ± 7 days of the same calendar day in every other year of the record.
 *
 * @param observed one site's series [day]
 * @param first day number of its first day
 * @param day offset of the day wanted
 * @returns mean in the unit of the series, NaN when no other year has a value. 29 February is taken as 1 March in common years.
 */
export function normalOfDay(observed: Float64Array, first: DayNumber, day: number): number {
  const own = civilFromDayNumber(first + day);
  const firstYear = civilFromDayNumber(first).year;
  const lastYear = civilFromDayNumber(first + observed.length - 1).year;
  let sum = 0;
  let count = 0;
  for (let year = firstYear - 1; year <= lastYear + 1; year++) {
    if (year === own.year) continue;
    const centre = dayNumberOf(year, own.month, own.day) - first;
    const last = Math.min(observed.length - 1, centre + NORMAL_HALF_WINDOW);
    for (let i = Math.max(0, centre - NORMAL_HALF_WINDOW); i <= last; i++) {
      if (Number.isNaN(observed[i])) continue;
      sum += observed[i];
      count++;
    }
  }
  return count === 0 ? Number.NaN : sum / count;
}

/** A filled extreme may contradict the measured one; then the day goes back to what was observed. */
function withdrawInversions(filled: FilledTemperatures, observations: SiteObservations): void {
  const { airTemperatureMax, airTemperatureMin, flags } = filled;
  for (let i = 0; i < flags.length; i++) {
    if (flags[i] === 0 || airTemperatureMax[i] >= airTemperatureMin[i]) continue;
    airTemperatureMax[i] = observations.values.air_temperature_max_c?.[i] ?? Number.NaN;
    airTemperatureMin[i] = observations.values.air_temperature_min_c?.[i] ?? Number.NaN;
    flags[i] = 0;
  }
}
