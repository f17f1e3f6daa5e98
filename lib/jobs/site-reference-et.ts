/** Reference ET of site-days that is carried to the parcels as it is: given by the source, summed over hours, or computed at the site. */
import { dayNumber, dayOfYear, isoDate } from '../base/civil-date.ts';
import { Refused } from '../base/errors.ts';
import { referenceEtDay } from '../energy/reference-day.ts';
import type { SiteReferenceEt } from '../season/types.ts';
import { type CompletedWeather, FALLBACK, type Site, type SiteObservations } from '../weather/variable.ts';
import type { RunSettings } from './run-settings.ts';

/**
 * Where a run takes its reference ET from; null for computed at the parcels.
 *
 * Automatic: at the parcels for stations, at the cells for grids (a parcel then has the mean of what stands on the grid), and as given for a source that brings
 * reference ET but no temperature.
 *
 * @param has what the source brings
 * @throws {Refused} when the setting asks for what the source does not have
 */
export function referenceEtOf(
  setting: RunSettings['reference_et'],
  source: { readonly kind: 'stations' | 'grid'; readonly name: string },
  has: { readonly given: boolean; readonly temperature: boolean; readonly hours: boolean },
): SiteReferenceEt | null {
  if (setting === 'given' && !has.given) {
    throw new Refused(
      `reference_et "given": the weather source ${source.name} brings no reference ET of its own. Take "automatic", or import it as reference ET given by the source.`,
    );
  }
  if (setting === 'hourly-sum' && !has.hours) {
    throw new Refused(
      `reference_et "hourly-sum": the weather source ${source.name} has no hourly weather in this season. Take "automatic", or import hourly weather.`,
    );
  }
  if (!has.temperature && setting !== 'given' && has.given) {
    if (setting === 'automatic') return 'given';
    throw new Refused(
      `reference_et "${setting}": the weather source ${source.name} brings reference ET but no air temperature to compute it from. Take "automatic" or "given".`,
    );
  }
  if (setting === 'automatic') return source.kind === 'grid' ? 'at-sites' : null;
  return setting === 'at-parcels' ? null : setting;
}

interface SiteEtInput {
  readonly weather: CompletedWeather;
  readonly sites: readonly Site[];
  readonly startDate: string;
  readonly method: 'fao56' | 'asce2005';
  /** elevation of a site that does not state its own [m] */
  readonly defaultElevation: number;
  /** given or hourly-summed values, [site × day], NaN where missing; null to compute every day */
  readonly values: Float64Array | null;
}

/**
 * The weather with its reference ET [mm d⁻¹]. A day that is not given, or whose hours cannot be summed, is computed from the day's completed weather
 * and flagged; rain that is missing on a day with reference ET counts as none and is flagged.
 *
 * Missing: NaN where a site-day has neither a value nor the weather to compute one.
 */
export function withReferenceEt({ weather, sites, startDate, method, defaultElevation, values }: SiteEtInput): CompletedWeather {
  const { dayCount, siteCount } = weather;
  const first = dayNumber(startDate);
  const referenceEt = values?.slice() ?? new Float64Array(siteCount * dayCount).fill(Number.NaN);
  const flags = weather.flags.slice();
  const precipitation = weather.precipitation.slice();
  for (let site = 0; site < siteCount; site++) {
    const { latitude, elevation } = sites[site];
    const place = { method, surface: 'short', latitude, elevation: Number.isNaN(elevation) ? defaultElevation : elevation } as const;
    for (let day = 0, at = site * dayCount; day < dayCount; day++, at++) {
      if (Number.isNaN(referenceEt[at])) {
        if (Number.isNaN(weather.airTemperatureMax[at])) continue;
        referenceEt[at] = computedReferenceEt(weather, at, { ...place, dayOfYear: dayOfYear(first + day) });
        if (values) flags[at] |= FALLBACK.referenceEtFromDailyWeather;
      }
      if (!Number.isNaN(precipitation[at])) continue;
      precipitation[at] = 0;
      flags[at] |= FALLBACK.precipitationAssumedZero;
    }
  }
  return { ...weather, referenceEt, flags, precipitation };
}

type Place = Pick<Parameters<typeof referenceEtDay>[0], 'method' | 'surface' | 'latitude' | 'elevation' | 'dayOfYear'>;

/** Reference ET of one site-day from its completed weather [mm d⁻¹]. */
export function computedReferenceEt(weather: CompletedWeather, at: number, place: Place): number {
  return referenceEtDay(
    {
      ...place,
      airTemperatureMax: weather.airTemperatureMax[at],
      airTemperatureMin: weather.airTemperatureMin[at],
      actualVapourPressure: weather.actualVapourPressure[at],
      solarRadiation: weather.solarRadiation[at],
      windSpeed2m: weather.windSpeed2m[at],
    },
    null,
  );
}

/** Reference ET as the source gave it, on the days of a season, [site × day]; NaN outside the record. */
export function givenReferenceEt(observations: SiteObservations, span: { startDate: string; dayCount: number }): Float64Array {
  const all = observations.values.reference_et_given_mm;
  const given = new Float64Array(observations.sites.length * span.dayCount).fill(Number.NaN);
  if (!all) return given;
  const offset = dayNumber(span.startDate) - dayNumber(observations.startDate);
  for (let site = 0; site < observations.sites.length; site++) {
    for (let day = 0; day < span.dayCount; day++) {
      const from = day + offset;
      if (from >= 0 && from < observations.dayCount) given[site * span.dayCount + day] = all[site * observations.dayCount + from];
    }
  }
  return given;
}

/** Last day of a span. */
export function lastDay({ startDate, dayCount }: { startDate: string; dayCount: number }): string {
  return isoDate(dayNumber(startDate) + dayCount - 1);
}
