/** The weather of a season at the sites of a run: gaps filled, site-days completed, cut to the season. */
import { dayNumber, isoDate } from '../base/civil-date.ts';
import { Refused } from '../base/errors.ts';
import { completeWeather } from '../energy/complete-weather.ts';
import { fillGaps } from '../weather/gaps-fill.ts';
import type { CompletedWeather, SiteObservations, WeatherVariable } from '../weather/variable.ts';

interface Span {
  readonly startDate: string;
  readonly dayCount: number;
}

export interface CompletionWanted {
  readonly defaultElevation: number;
  readonly radiationCoefficient: number;
  /** false: site-days are completed by the published estimates alone */
  readonly fillGaps: boolean;
  /** observations of other sources that may stand in, in their order */
  readonly others: readonly SiteObservations[];
}

/** Weather of the season at the sites: gaps filled by the stated order (`fillGaps`), then completed by the published fallbacks. */
export function seasonWeather(stored: SiteObservations, span: Span, options: CompletionWanted): CompletedWeather {
  const observations = coveringDays(stored, span);
  const from = dayNumber(span.startDate) - dayNumber(observations.startDate);
  const filled = options.fillGaps ? fillGaps(observations, options.others, { from, end: from + span.dayCount }) : observations;
  return windowOf(completeWeather(filled, options), from, span.dayCount);
}

/**
 * Refuses weather that cannot carry a season.
 *
 * @param stored observations; null where days to come have been told, which need none
 * @param weather of the season, with reference ET where it is carried from the sites
 * @throws {Refused} naming the days on which no site has air temperature (or reference ET, where it is carried)
 */
export function requireEveryDay(stored: SiteObservations | null, weather: CompletedWeather, span: Span): void {
  if (stored) refuseUnobserved(coveringDays(stored, span), span);
  const empty = daysWithoutWeather(weather);
  if (empty.length > 0) {
    const first = dayNumber(span.startDate);
    const shown = rangesOf(empty.map((day) => first + day));
    throw new Refused(
      `No site has ${weather.referenceEt ? 'reference ET' : 'air temperature'} on ${empty.length} of ${span.dayCount} days (${shown}), and nothing fills them (no neighbour, no other source, no normal from another year). Import weather for these days, or shorten the season.`,
    );
  }
}

/** Observations over at least the days of the season, so that days past the record's end are filled by the same rule as gaps within it. */
export function coveringDays(observations: SiteObservations, span: Span): SiteObservations {
  const [first, seasonFirst] = [dayNumber(observations.startDate), dayNumber(span.startDate)];
  const from = Math.min(first, seasonFirst);
  const to = Math.max(first + observations.dayCount, seasonFirst + span.dayCount);
  const dayCount = to - from;
  if (dayCount === observations.dayCount) return observations;
  const widened = <A extends Float64Array | Uint8Array>(old: A, wide: A): A => {
    for (let site = 0; site < observations.sites.length; site++) {
      wide.set(old.subarray(site * observations.dayCount, (site + 1) * observations.dayCount), site * dayCount + first - from);
    }
    return wide;
  };
  const length = observations.sites.length * dayCount;
  const values: Partial<Record<WeatherVariable, Float64Array>> = {};
  const quality: Partial<Record<WeatherVariable, Uint8Array>> = {};
  for (const [name, old] of Object.entries(observations.values) as [WeatherVariable, Float64Array][])
    values[name] = widened(old, new Float64Array(length).fill(Number.NaN));
  for (const [name, old] of Object.entries(observations.quality ?? {}) as [WeatherVariable, Uint8Array][])
    quality[name] = widened(old, new Uint8Array(length));
  return { ...observations, startDate: isoDate(from), dayCount, values, ...(observations.quality ? { quality } : {}) };
}

/** Normals stand in for missing days of a season, not for a season. */
function refuseUnobserved(observations: SiteObservations, span: Span): void {
  const from = dayNumber(span.startDate) - dayNumber(observations.startDate);
  const observed = (['air_temperature_max_c', 'air_temperature_mean_c', 'reference_et_given_mm'] as const).some((variable) => {
    const all = observations.values[variable];
    return observations.sites.some((_, site) =>
      all
        ?.subarray(site * observations.dayCount + from, site * observations.dayCount + from + span.dayCount)
        .some((value) => !Number.isNaN(value)),
    );
  });
  if (observed) return;
  const to = isoDate(dayNumber(span.startDate) + span.dayCount - 1);
  throw new Refused(`No site has air temperature on any day of the season, ${span.startDate} to ${to}. Import weather of these days.`);
}

function windowOf(whole: CompletedWeather, offset: number, dayCount: number): CompletedWeather {
  const cut = <A extends Float64Array | Uint32Array>(source: A, fill: number): A => {
    const out = new (source.constructor as new (length: number) => A)(whole.siteCount * dayCount).fill(fill) as A;
    for (let site = 0; site < whole.siteCount; site++) {
      for (let day = 0; day < dayCount; day++) {
        const from = day + offset;
        if (from >= 0 && from < whole.dayCount) out[site * dayCount + day] = source[site * whole.dayCount + from];
      }
    }
    return out;
  };
  return {
    siteCount: whole.siteCount,
    dayCount,
    airTemperatureMax: cut(whole.airTemperatureMax, Number.NaN),
    airTemperatureMin: cut(whole.airTemperatureMin, Number.NaN),
    actualVapourPressure: cut(whole.actualVapourPressure, Number.NaN),
    solarRadiation: cut(whole.solarRadiation, Number.NaN),
    windSpeed2m: cut(whole.windSpeed2m, Number.NaN),
    precipitation: cut(whole.precipitation, Number.NaN),
    flags: cut(whole.flags, 0),
  };
}

/** Days on which no site has what the crops are driven by. */
function daysWithoutWeather(weather: CompletedWeather): number[] {
  const driver = weather.referenceEt ?? weather.airTemperatureMax;
  const empty: number[] = [];
  for (let day = 0; day < weather.dayCount; day++) {
    let found = false;
    for (let site = 0; site < weather.siteCount && !found; site++) found = !Number.isNaN(driver[site * weather.dayCount + day]);
    if (!found) empty.push(day);
  }
  return empty;
}

/** Day numbers as text ranges, the first few. */
function rangesOf(days: readonly number[]): string {
  const ranges: string[] = [];
  let from = days[0];
  for (let i = 0; i < days.length; i++) {
    if (days[i + 1] === days[i] + 1) continue;
    ranges.push(from === days[i] ? isoDate(from) : `${isoDate(from)} to ${isoDate(days[i])}`);
    from = days[i + 1];
  }
  return ranges.length > 6 ? `${ranges.slice(0, 6).join(', ')} and ${ranges.length - 6} more` : ranges.join(', ');
}
