/** Days past the last observation: from when, and what is put on them. */
import { dayNumber } from '../base/civil-date.ts';
import { type DaySpan, NORMAL_HALF_WINDOW } from './normal-of-day.ts';
import { COMPLETED_SERIES, type CompletedWeather, type SiteObservations, type WeatherVariable } from './variable.ts';

/** What a site must report for its day to count as observed. */
const DRIVERS: readonly WeatherVariable[] = ['air_temperature_max_c', 'air_temperature_mean_c', 'reference_et_given_mm'];

/**
 * The last day on which any site has air temperature, or reference ET of its own.
 *
 * @returns day number; null where no site has either on any day
 */
export function lastObservedDay({ values, sites, startDate, dayCount }: SiteObservations): number | null {
  for (let day = dayCount - 1; day >= 0; day--) {
    for (const variable of DRIVERS) {
      const all = values[variable];
      for (let site = 0; all && site < sites.length; site++) {
        if (!Number.isNaN(all[site * dayCount + day])) return dayNumber(startDate) + day;
      }
    }
  }
  return null;
}

/**
 * The days of earlier years that normals of some days look at, merged where they overlap, cut to a record and into parts of at most `longest` days.
 *
 * @param days the days wanted
 * @param record the days on record
 */
export function normalParts(days: DaySpan, record: DaySpan, longest: number): DaySpan[] {
  const end = record.first + record.dayCount;
  const spans: { first: number; end: number }[] = [];
  const most = Math.ceil((days.first + days.dayCount - record.first) / 365) + 1;
  for (let back = most; back >= 0; back--) {
    const shift = Math.round(back * 365.25);
    const first = Math.max(record.first, days.first - shift - NORMAL_HALF_WINDOW - 1);
    const last = Math.min(end, days.first + days.dayCount - shift + NORMAL_HALF_WINDOW + 1);
    if (first >= last) continue;
    const before = spans.at(-1);
    if (before && first <= before.end) before.end = Math.max(before.end, last);
    else spans.push({ first, end: last });
  }
  return spans.flatMap((span) => cut(span, longest));
}

function cut({ first, end }: { first: number; end: number }, longest: number): DaySpan[] {
  const parts: DaySpan[] = [];
  for (let day = first; day < end; day += longest) parts.push({ first: day, dayCount: Math.min(longest, end - day) });
  return parts;
}

/** A copy of completed weather whose last days can be written. */
export function copyOfWeather(weather: CompletedWeather): CompletedWeather {
  const series = COMPLETED_SERIES.map((name) => [name, weather[name].slice()]);
  const referenceEt = weather.referenceEt ? { referenceEt: weather.referenceEt.slice() } : {};
  return { ...weather, ...Object.fromEntries(series), ...referenceEt, flags: weather.flags.slice() };
}

/** Takes everything off a site-day. */
export function clearSiteDay(weather: CompletedWeather, at: number): void {
  for (const name of COMPLETED_SERIES) weather[name][at] = Number.NaN;
  if (weather.referenceEt) weather.referenceEt[at] = Number.NaN;
  weather.flags[at] = 0;
}

/** Puts one site-day of other weather in its place, with further bits of FALLBACK. */
export function putSiteDay(into: CompletedWeather, at: number, from: CompletedWeather, fromAt: number, bits: number): void {
  for (const name of COMPLETED_SERIES) into[name][at] = from[name][fromAt];
  if (into.referenceEt) into.referenceEt[at] = from.referenceEt ? from.referenceEt[fromAt] : Number.NaN;
  into.flags[at] = from.flags[fromAt] | bits;
}

/** Whether a site-day has what the crops are driven by. */
export function hasDriver(weather: CompletedWeather, at: number): boolean {
  return !Number.isNaN(weather.airTemperatureMax[at]) || (weather.referenceEt ? !Number.isNaN(weather.referenceEt[at]) : false);
}
