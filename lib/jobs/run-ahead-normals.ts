/** Normals of the days to come at the sites of a run, and which stored years stand behind them. */
import { addDays, dayNumber, isoDate } from '../base/civil-date.ts';
import { completeWeather } from '../energy/complete-weather.ts';
import type { SiteReferenceEt } from '../season/types.ts';
import { addToTallies, emptyTallies, type PartDays, type YearTally } from '../weather/analogue-year.ts';
import { hasDriver, normalParts } from '../weather/days-ahead.ts';
import { measuredWhere } from '../weather/measured-values.ts';
import { addToNormals, type DaySpan, emptyNormalSums, NORMAL_HALF_WINDOW, normalsOf } from '../weather/normal-of-day.ts';
import type { CarriedSeries, CompletedWeather, SiteObservations } from '../weather/variable.ts';
import type { RunRecord } from './run-record.ts';
import { withReferenceEt } from './site-reference-et.ts';

/** Series of which the mean of the day is taken; rain goes by a representative year. */
const MEAN_SERIES = [
  'airTemperatureMax',
  'airTemperatureMin',
  'actualVapourPressure',
  'solarRadiation',
  'windSpeed2m',
  'referenceEt',
] as const satisfies readonly CarriedSeries[];
type MeanSeries = (typeof MEAN_SERIES)[number];

export interface NormalsWanted {
  readonly record: RunRecord;
  readonly siteCount: number;
  /** the days to come */
  readonly days: DaySpan;
  /** 1 on the days that need a normal [day] */
  readonly open: Uint8Array;
  readonly lastObserved: string;
  /** where reference ET is carried from the sites: of what kind it is; null where it is computed at the parcels */
  readonly referenceEt: SiteReferenceEt | null;
  readonly method: 'fao56' | 'asce2005';
  readonly defaultElevation: number;
  readonly radiationCoefficient: number;
}

export interface SiteNormals {
  /** [site × day to come]; NaN where a site has no other year */
  readonly series: Partial<Record<MeanSeries, Float64Array>>;
  readonly tallies: readonly YearTally[];
}

/**
 * Means of the day from the observed record, part by part. A value that was estimated counts only where a site never measured the series.
 *
 * Reference ET that is carried from the sites gets a normal of its own: the mean of the reference ET of the days, not that of their mean weather.
 */
export async function siteNormals(wanted: NormalsWanted): Promise<SiteNormals> {
  const { record, siteCount, days, open } = wanted;
  const names = MEAN_SERIES.filter((name) => name !== 'referenceEt' || wanted.referenceEt !== null);
  const sums = new Map(names.map((name) => [name, emptyNormalSums(siteCount, days.dayCount)]));
  const span = observedSpan(wanted);
  const tallies = span ? emptyTallies(days, span.first) : [];
  for (const part of span ? partsOf(days, span, record.longest) : []) {
    const stored = await record.load(part);
    const weather = completedPart(stored, wanted);
    const own = { first: dayNumber(stored.startDate), dayCount: stored.dayCount };
    for (const [name, sum] of sums) {
      for (let site = 0; site < siteCount; site++) {
        addToNormals(sum, { site, days }, measuredSeries(weather, name, site, wanted.referenceEt), own);
      }
    }
    addToTallies(tallies, days, open, partDays(stored, weather, own));
  }
  return { series: Object.fromEntries([...sums].map(([name, sum]) => [name, normalsOf(sum)])), tallies };
}

/** Days on record up to the last observed one. */
function observedSpan({ record, lastObserved }: NormalsWanted): DaySpan | null {
  if (!record.span) return null;
  const dayCount = dayNumber(addDays(lastObserved, 1)) - record.span.first;
  return dayCount > 0 ? { first: record.span.first, dayCount } : null;
}

/** A record that is in memory is taken whole. */
function partsOf(days: DaySpan, span: DaySpan, longest: number): DaySpan[] {
  return longest === Number.POSITIVE_INFINITY ? [span] : normalParts(days, span, longest);
}

function completedPart(stored: SiteObservations, wanted: NormalsWanted): CompletedWeather {
  const { referenceEt, method, defaultElevation } = wanted;
  const weather = completeWeather(stored, wanted);
  if (referenceEt === null) return weather;
  if (referenceEt === 'given') return { ...weather, referenceEt: stored.values.reference_et_given_mm ?? null };
  const { sites, startDate } = stored;
  return { ...weather, referenceEt: withReferenceEt({ weather, sites, startDate, method, defaultElevation, values: null }).referenceEt };
}

/** One site's values; those that were estimated are missing, unless it has no others. */
function measuredSeries(weather: CompletedWeather, name: MeanSeries, site: number, kind: SiteReferenceEt | null): Float64Array {
  const [from, to] = [site * weather.dayCount, (site + 1) * weather.dayCount];
  const series = weather[name]?.subarray(from, to) ?? new Float64Array(weather.dayCount).fill(Number.NaN);
  if (name === 'referenceEt' && kind === 'given') return series;
  const measured = measuredWhere(weather.flags.subarray(from, to), name);
  const kept = series.map((value, day) => (measured[day] === 1 ? value : Number.NaN));
  return kept.some((value) => !Number.isNaN(value)) ? kept : series;
}

function partDays(stored: SiteObservations, weather: CompletedWeather, part: DaySpan): PartDays {
  const hasValue = new Uint8Array(part.dayCount);
  const meanRain = new Float64Array(part.dayCount).fill(Number.NaN);
  const rain = stored.values.precipitation_mm;
  for (let day = 0; day < part.dayCount; day++) {
    let [sum, count] = [0, 0];
    for (let site = 0; site < weather.siteCount; site++) {
      const at = site * part.dayCount + day;
      if (hasDriver(weather, at)) hasValue[day] = 1;
      if (!rain || Number.isNaN(rain[at])) continue;
      sum += rain[at];
      count++;
    }
    if (count > 0) meanRain[day] = sum / count;
  }
  return { part, hasValue, meanRain };
}

/** How the window of the normals reads in a sentence. @example windowText() // '7 days on either side' */
export function windowText(): string {
  return `${NORMAL_HALF_WINDOW} days on either side`;
}

/** First and last of some years before the day given, as years of the calendar. */
export function yearsText(years: readonly YearTally[], day: number): string {
  const of = ({ yearsBack }: YearTally) => Number(isoDate(day).slice(0, 4)) - yearsBack;
  const all = years.map(of).sort((a, b) => a - b);
  return all.length === 1 ? String(all[0]) : `${all[0]}–${all[all.length - 1]}`;
}
