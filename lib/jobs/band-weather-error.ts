/** How far the reference ET of a run may be off, day by day: from its sites, from the years on record, and by stated defaults where neither tells. */
import type { Tx } from '../../db/connect.ts';
import { findDistrict } from '../../db/queries/run-inputs.ts';
import { addDays, civilFromDayNumber, dayNumber, dayNumberOf } from '../base/civil-date.ts';
import { roundOrNull } from '../base/missing.ts';
import type { WeatherError } from '../season/band-factors.ts';
import type { SeasonInput } from '../season/types.ts';
import { leaveOneOutError, type RelativeError, spreadOfYears } from '../weather/relative-error.ts';
import { FALLBACK } from '../weather/variable.ts';
import { loadObservations } from './observations.ts';
import { findRunSource } from './run-observations.ts';
import { usableSites } from './run-plan.ts';
import type { RunSettings } from './run-settings.ts';
import type { WeightsRecord } from './run-weights.ts';
import { seasonWeather } from './season-weather.ts';
import { withReferenceEt } from './site-reference-et.ts';

/** Where the sites cannot tell: one site alone, or a grid. Common practice, no source. */
const UNTOLD: RelativeError = { deviation: 0.1, persistence: 0.5, n: 0 };
/** Where the years on record cannot tell how far a normal is off. Common practice, no source. */
const UNTOLD_NORMAL: RelativeError = { deviation: 0.25, persistence: 0.5, n: 0 };
/** No error is taken wider than this: beyond it the record is at fault, not the weather. */
const MOST_DEVIATION = 0.5;
/** Years it takes for a spread. */
const FEWEST_YEARS = 3;
/** Days after which a forecast is worth no more than the normal. Common practice, no source. */
const FORECAST_DAYS = 10;
/** Share of the days asked for that a year must have to count. */
const LEAST_SHARE = 0.8;

/** What a band says of its weather error; deviations are coefficients of variation of daily reference ET. */
export interface WeatherErrorRecord {
  readonly observed: { readonly deviation: number; readonly persistence: number; readonly from: string };
  /** of days to come; null where the run has none */
  readonly ahead: { readonly deviation: number; readonly persistence: number; readonly from: string; readonly days: number } | null;
}

/** A run as far as its weather error needs it. */
export interface RunOfBand {
  readonly startDate: string;
  readonly dayCount: number;
  readonly settings: RunSettings;
  readonly manifest: unknown;
}

/**
 * The error of reference ET on every day of a run's season, lead days and all.
 *
 * @param season the frozen season with some of its parcels
 */
export async function bandWeatherError(
  tx: Tx,
  districtId: string,
  run: RunOfBand,
  season: SeasonInput,
): Promise<{ error: WeatherError; record: WeatherErrorRecord }> {
  const district = await findDistrict(tx, districtId);
  const observed = observedError(run, season, district?.defaultElevation ?? 0);
  const kinds = dayKinds(season);
  const days = kinds.filter((kind) => kind !== 'observed').length;
  const ahead = days === 0 ? null : await aheadError(tx, districtId, run, season, kinds);
  return {
    error: errorByDay(kinds, observed.error, ahead?.error ?? UNTOLD_NORMAL),
    record: { observed: recordOf(observed), ahead: ahead ? { ...recordOf(ahead), days } : null },
  };
}

interface Told {
  readonly error: RelativeError;
  readonly from: string;
}

function recordOf({ error, from }: Told) {
  return { deviation: roundOrNull(error.deviation, 4) ?? 0, persistence: roundOrNull(error.persistence, 3) ?? 0, from };
}

/**
 * Error of an observed day: the kriging variance of reference ET where it is carried by kriging; else what leaving one site out tells.
 */
export function observedError(run: Pick<RunOfBand, 'settings' | 'manifest'>, season: SeasonInput, defaultElevation: number): Told {
  const { manifest, settings } = run;
  const record = (manifest as { interpolation?: WeightsRecord }).interpolation;
  const usable = usableSites(season.weather);
  if (record?.source === 'grid' || usable.length < 2)
    return { error: UNTOLD, from: record?.source === 'grid' ? 'a grid cannot be held against itself: taken' : 'one site: taken' };
  const { values, sites } = siteReferenceEt(season, usable, defaultElevation);
  const { dayCount } = season;
  const how = { power: settings.power, maximumSites: settings.interpolation === 'nearest' ? 1 : settings.maximum_sites };
  const left = leaveOneOutError(sites, values, dayCount, how);
  if (!(left.deviation >= 0)) return { error: UNTOLD, from: 'no two sites on one day: taken' };
  const mean = meanOf(values);
  const kriged = krigingDeviation(season) / mean;
  if (kriged > 0) return { error: held({ ...left, deviation: kriged }), from: 'kriging variance of reference ET' };
  const checked = (record?.series.referenceEt?.leave_one_out?.rmse ?? Number.NaN) / mean;
  if (checked > 0) return { error: held({ ...left, deviation: checked }), from: 'leave-one-out of the run' };
  return { error: held(left), from: `leave-one-out over ${usable.length} sites` };
}

function held(error: RelativeError): RelativeError {
  return { ...error, deviation: Math.min(error.deviation, MOST_DEVIATION) };
}

/** Reference ET at the usable sites, [site × day]. */
function siteReferenceEt(season: SeasonInput, usable: readonly number[], defaultElevation: number) {
  const { weather, startDate, settings, dayCount } = season;
  const common = { startDate, method: settings.method, defaultElevation, values: null };
  const all = weather.referenceEt ?? withReferenceEt({ ...common, weather, sites: season.sites }).referenceEt ?? new Float64Array();
  const values = new Float64Array(usable.length * dayCount);
  usable.forEach((site, row) => {
    values.set(all.subarray(site * dayCount, (site + 1) * dayCount), row * dayCount);
  });
  return { values, sites: usable.map((site) => season.sites[site]) };
}

function meanOf(values: Float64Array): number {
  let [sum, count] = [0, 0];
  for (const value of values) {
    if (Number.isNaN(value)) continue;
    sum += value;
    count++;
  }
  return sum / count;
}

/** Root of the mean kriging variance of reference ET over the parcels [mm]; NaN where it is not kriged. */
function krigingDeviation(season: SeasonInput): number {
  const known = season.parcels.flatMap(({ series }) => {
    const variance = series?.referenceEt?.variance ?? Number.NaN;
    return variance >= 0 ? [variance] : [];
  });
  return known.length === 0 ? Number.NaN : Math.sqrt(known.reduce((sum, variance) => sum + variance, 0) / known.length);
}

type DayKind = 'observed' | 'forecast' | 'normal' | 'analogue';

/** What the weather of each day is: as most of the sites that have any say. */
function dayKinds({ weather, dayCount }: SeasonInput): DayKind[] {
  return Array.from({ length: dayCount }, (_, day) => {
    const counts = { observed: 0, forecast: 0, normal: 0, analogue: 0 };
    for (let site = 0; site < weather.siteCount; site++) {
      const at = site * dayCount + day;
      if (Number.isFinite(weather.airTemperatureMax[at]) || Number.isFinite(weather.referenceEt?.[at] ?? Number.NaN))
        counts[kindOf(weather.flags[at])]++;
    }
    return (Object.keys(counts) as DayKind[]).reduce((most, kind) => (counts[kind] > counts[most] ? kind : most));
  });
}

function kindOf(flags: number): DayKind {
  if ((flags & FALLBACK.aheadFromForecast) !== 0) return 'forecast';
  if ((flags & FALLBACK.aheadFromNormal) !== 0) return 'normal';
  return (flags & FALLBACK.aheadFromAnalogue) !== 0 ? 'analogue' : 'observed';
}

/**
 * Errors day by day. A forecast begins at the error of an observed day and reaches that of the normal after ten days; a normal misses by the spread of the
 * years, an analogue year by √2 of it, being one year against another. Both come on top of the error of carrying weather to parcels.
 */
export function errorByDay(kinds: readonly DayKind[], observed: RelativeError, normal: RelativeError): WeatherError {
  const first = kinds.findIndex((kind) => kind !== 'observed');
  const wide = Math.hypot(observed.deviation, normal.deviation);
  const deviation = kinds.map((kind, day) => {
    if (kind === 'observed') return observed.deviation;
    if (kind === 'analogue') return Math.hypot(observed.deviation, Math.SQRT2 * normal.deviation);
    if (kind === 'normal') return wide;
    return observed.deviation + (wide - observed.deviation) * Math.min(1, (day - first + 1) / FORECAST_DAYS);
  });
  const persistence = kinds.map((kind) => (kind === 'observed' ? observed : normal).persistence);
  return { deviation: Float64Array.from(deviation), persistence: Float64Array.from(persistence) };
}

/** Error of a normal on the days to come, from the years before the season at the run's own stations. */
async function aheadError(tx: Tx, districtId: string, run: RunOfBand, season: SeasonInput, kinds: readonly DayKind[]): Promise<Told> {
  const untold = { error: UNTOLD_NORMAL, from: `fewer than ${FEWEST_YEARS} years on record: taken` };
  const source = await findRunSource(tx, districtId, run.settings.source);
  const district = await findDistrict(tx, districtId);
  if (source.kind === 'grid' || !district) return untold;
  const stored = await loadObservations(tx, districtId, { source: source.asked });
  const { defaultElevation, radiationCoefficient } = district;
  const whole = { startDate: stored.startDate, dayCount: stored.dayCount };
  const daily = seasonWeather(stored, whole, { defaultElevation, radiationCoefficient, fillGaps: false, others: [] });
  const common = { sites: stored.sites, startDate: whole.startDate, method: run.settings.method, defaultElevation, values: null };
  const { referenceEt } = withReferenceEt({ ...common, weather: daily });
  const means = siteMeans(referenceEt ?? new Float64Array(), stored.sites.length, stored.dayCount);
  const days = kinds.flatMap((kind, day) => (kind === 'observed' ? [] : [addDays(season.startDate, day)]));
  const years = yearsOf(means, whole.startDate, days);
  if (years.length < FEWEST_YEARS) return untold;
  const spread = spreadOfYears(years);
  return spread.deviation >= 0 ? { error: held(spread), from: `spread of ${years.length} years` } : untold;
}

/** Mean over the sites that have a value, [day]. */
function siteMeans(values: Float64Array, siteCount: number, dayCount: number): Float64Array {
  const means = new Float64Array(dayCount);
  for (let day = 0; day < dayCount; day++) {
    let [sum, count] = [0, 0];
    for (let site = 0; site < siteCount; site++) {
      const value = values[site * dayCount + day];
      if (Number.isNaN(value)) continue;
      sum += value;
      count++;
    }
    means[day] = sum / count;
  }
  return means;
}

/** The same calendar days in each earlier year on record, those years that have most of them; 29 February is read as the day after the 28th. */
function yearsOf(means: Float64Array, startDate: string, days: readonly string[]): Float64Array[] {
  const first = dayNumber(startDate);
  const from = civilFromDayNumber(first).year;
  const own = civilFromDayNumber(dayNumber(days[0])).year;
  const years: Float64Array[] = [];
  for (let year = from - 1; year < own; year++) {
    const values = Float64Array.from(days, (date) => {
      const there = civilFromDayNumber(dayNumber(date));
      return means[dayNumberOf(there.year - own + year, there.month, there.day) - first] ?? Number.NaN;
    });
    const known = values.reduce((count, value) => count + (Number.isNaN(value) ? 0 : 1), 0);
    if (known >= LEAST_SHARE * days.length) years.push(values);
  }
  return years;
}
