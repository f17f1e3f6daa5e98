/** Weather sites with what they cover, and the days of one site with reference ET and energy budget. */

import type { Tx } from '../../../db/connect.ts';
import { findWholeDistrict } from '../../../db/queries/district-read.ts';
import { type BlockRow, findMonths, listBlocks, listSites, type SiteRow } from '../../../db/queries/weather-observations.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { addDays, dayNumber, dayOfYear, isIsoDate, isoDate } from '../../base/civil-date.ts';
import { Malformed, NotFound, TooLarge } from '../../base/errors.ts';
import { roundOrNull } from '../../base/missing.ts';
import { completeWeather } from '../../energy/complete-weather.ts';
import { hargreavesReferenceEt } from '../../energy/hargreaves.ts';
import { clearSkyRadiation } from '../../energy/radiation.ts';
import { energyBudgetDay, type ReferenceDayInput, referenceEtDay } from '../../energy/reference-day.ts';
import { sunDay } from '../../energy/sun.ts';
import { assembleObservations, floatsOf } from '../../jobs/observations.ts';
import { fillTemperatureGaps } from '../../weather/gaps.ts';
import { type CompletedWeather, fallbackNames, type SiteObservations } from '../../weather/variable.ts';
import type { SiteAnswer, SiteDay, SiteDaysAnswer } from '../contract/rest.ts';

/** Most days of one answer. */
const MOST_DAYS = 400;

export function answerSites(caller: Caller): Promise<SiteAnswer[]> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const rows = await listSites(tx, districtId);
    const months = await findMonths(tx, districtId);
    const blocks = months ? await listBlocks(tx, districtId, { from: months.first, to: addDays(months.last, 27) }) : [];
    const coverage = new Map(rows.map((row) => [keyOf(row), new Coverage()]));
    for (const block of blocks) addCoverage(coverage, block);
    return rows.map((row) => siteMembers(row, coverage.get(keyOf(row)) as Coverage));
  });
}

function keyOf(row: { sourceId: number; ordinal: number }): string {
  return `${row.sourceId}/${row.ordinal}`;
}

/** Days on which a site has anything, and how many of each variable. */
class Coverage {
  readonly days = new Set<number>();
  readonly variables: Record<string, number> = {};
}

function addCoverage(coverage: Map<string, Coverage>, block: BlockRow): void {
  const values = floatsOf(block.values);
  const first = dayNumber(block.month);
  for (let ordinal = 0; ordinal < block.siteCount; ordinal++) {
    const site = coverage.get(keyOf({ sourceId: block.sourceId, ordinal }));
    for (let day = 0; site && day < block.dayCount; day++) {
      if (Number.isNaN(values[ordinal * block.dayCount + day])) continue;
      site.days.add(first + day);
      site.variables[block.variable] = (site.variables[block.variable] ?? 0) + 1;
    }
  }
}

function siteMembers(row: SiteRow, coverage: Coverage): SiteAnswer {
  let [first, last] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
  for (const day of coverage.days) [first, last] = [Math.min(first, day), Math.max(last, day)];
  const any = coverage.days.size > 0;
  return {
    code: row.code,
    name: row.name,
    source: row.source,
    longitude: row.longitude,
    latitude: row.latitude,
    elevation_m: row.elevation,
    wind_height_m: row.windHeight,
    first_day: any ? isoDate(first) : null,
    last_day: any ? isoDate(last) : null,
    day_count: coverage.days.size,
    coverage_days: coverage.variables,
  };
}

interface DaysWanted {
  readonly from?: string;
  readonly to?: string;
}

/**
 * Days of a site with what else it has: the last days asked for when they are more than one answer holds.
 *
 * @throws {NotFound} for a site that is not the district's. @throws {TooLarge} for more than 400 days with both ends given.
 */
export async function answerSiteRecord(caller: Caller, code: string, wanted: DaysWanted): Promise<SiteDaysAnswer> {
  requireSpan(wanted);
  const record = await openRecord(caller, code);
  if (!record) return { items: [], first_day: null, last_day: null, truncated: false };
  const { first, last } = record;
  const { from, to } = spanOf(wanted, last);
  const truncated = (!wanted.from && from > first && to >= first) || (!wanted.to && to < last);
  return { items: record.days(from, to), first_day: first, last_day: last, truncated };
}

/** The days of `answerSiteRecord` alone. */
export async function answerSiteDays(caller: Caller, code: string, wanted: DaysWanted): Promise<SiteDay[]> {
  return (await answerSiteRecord(caller, code, wanted)).items;
}

/** Every day asked for, in pieces of at most 400. @throws {NotFound} for a site that is not the district's. */
export async function* eachSiteDays(caller: Caller, code: string, wanted: DaysWanted): AsyncGenerator<SiteDay[]> {
  requireSpan(wanted);
  const record = await openRecord(caller, code);
  if (!record) return;
  const { from = record.first, to = record.last } = wanted;
  const end = minimum(to, record.last);
  const [, begin] = [from, record.first].sort();
  for (let start = begin; start <= end; start = addDays(start, MOST_DAYS)) {
    yield record.days(start, minimum(end, addDays(start, MOST_DAYS - 1)));
  }
}

interface SiteRecord {
  readonly first: string;
  readonly last: string;
  /** days of the record between two dates, both included */
  days(from: string, to: string): SiteDay[];
}

/** The whole record of a site, completed: gaps in temperature are filled from all of it, as a run fills them. Null when there is nothing. */
function openRecord(caller: Caller, code: string): Promise<SiteRecord | null> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const row = (await listSites(tx, districtId)).find((site) => site.code === code);
    const district = await findWholeDistrict(tx, districtId);
    if (!row || !district) throw new NotFound(`no weather site "${code}" in this district`);
    const record = await readRecord(tx, districtId, row);
    if (!record) return null;
    const { first, last, observations } = record;
    const { defaultElevation, radiationCoefficient } = district;
    const temperatures = fillTemperatureGaps(observations);
    const completed = completeWeather(observations, { defaultElevation, radiationCoefficient, temperatures });
    const place = { latitude: row.latitude, elevation: row.elevation ?? defaultElevation };
    const offset = dayNumber(observations.startDate);
    const days = (wantedFrom: string, wantedTo: string) => {
      const [from, to] = [Math.max(dayNumber(wantedFrom), dayNumber(first)), Math.min(dayNumber(wantedTo), dayNumber(last))];
      return Array.from({ length: Math.max(0, to - from + 1) }, (_, i) => siteDay(observations, completed, place, from + i - offset));
    };
    return { first, last, days };
  });
}

/** Everything stored of a site, and its first and last day with a value; null when there is nothing. */
async function readRecord(tx: Tx, districtId: string, row: SiteRow) {
  const months = await findMonths(tx, districtId, row.sourceId);
  if (!months) return null;
  const span = { from: months.first, to: addDays(months.last, 30) };
  const blocks = await listBlocks(tx, districtId, { ...span, sourceId: row.sourceId });
  const coverage = new Map([[keyOf(row), new Coverage()]]);
  for (const block of blocks) addCoverage(coverage, block);
  const { first_day: first, last_day: last } = siteMembers(row, coverage.get(keyOf(row)) as Coverage);
  return first && last ? { first, last, observations: assembleObservations([row], blocks, span) } : null;
}

/** @throws {Malformed} when a date is none, or the last day is before the first. */
function requireSpan({ from, to }: DaysWanted): void {
  for (const date of [from, to]) if (date && !isIsoDate(date)) throw new Malformed(`"${date}" is not a day of the calendar`);
  if (from && to && from > to) throw new Malformed(`from ${from} is after to ${to}`);
}

/** What one answer holds of the days asked for; an open end gives way. */
function spanOf(wanted: DaysWanted, last: string): { from: string; to: string } {
  const to = wanted.to ?? (wanted.from ? minimum(addDays(wanted.from, MOST_DAYS - 1), last) : last);
  const from = wanted.from ?? addDays(to, 1 - MOST_DAYS);
  const days = dayNumber(to) - dayNumber(from) + 1;
  if (days > MOST_DAYS) throw new TooLarge(`${from} to ${to} are ${days} days; one answer has at most ${MOST_DAYS}: ask in parts`);
  return { from, to };
}

function minimum(a: string, b: string): string {
  return a < b ? a : b;
}

function siteDay(
  observations: SiteObservations,
  completed: CompletedWeather,
  place: { latitude: number; elevation: number },
  day: number,
): SiteDay {
  const date = addDays(observations.startDate, day);
  const input: Omit<ReferenceDayInput, 'method' | 'surface'> = {
    ...place,
    dayOfYear: dayOfYear(dayNumber(date)),
    airTemperatureMax: completed.airTemperatureMax[day],
    airTemperatureMin: completed.airTemperatureMin[day],
    actualVapourPressure: completed.actualVapourPressure[day],
    solarRadiation: completed.solarRadiation[day],
    windSpeed2m: completed.windSpeed2m[day],
  };
  return { date, observed: observedOn(observations, day), completed: completedOn(completed, day), ...derived(input, completed.flags[day]) };
}

function observedOn({ values }: SiteObservations, day: number): SiteDay['observed'] {
  return Object.fromEntries(Object.entries(values).map(([name, row]) => [name, rounded(row?.[day] ?? Number.NaN)]));
}

/** Stored observations are single precision: six significant figures are what they hold for certain. */
function rounded(value: number): number | null {
  return Number.isFinite(value) ? Number(value.toPrecision(6)) : null;
}

function completedOn(completed: CompletedWeather, day: number): SiteDay['completed'] {
  return {
    air_temperature_max_c: rounded(completed.airTemperatureMax[day]),
    air_temperature_min_c: rounded(completed.airTemperatureMin[day]),
    vapour_pressure_kpa: rounded(completed.actualVapourPressure[day]),
    solar_radiation_mj_m2_d: rounded(completed.solarRadiation[day]),
    wind_speed_2m_m_s: rounded(completed.windSpeed2m[day]),
    precipitation_mm: rounded(completed.precipitation[day]),
  };
}

function derived(input: Omit<ReferenceDayInput, 'method' | 'surface'>, flags: number): Omit<SiteDay, 'date' | 'observed' | 'completed'> {
  const short = { ...input, method: 'fao56', surface: 'short' } as const;
  const budget = energyBudgetDay(short);
  const extraterrestrial = sunDay(input.latitude, input.dayOfYear).extraterrestrialRadiation;
  const depth = (value: number) => roundOrNull(value, 4);
  return {
    fallbacks: fallbackNames(flags),
    reference_et_fao56_short_mm: depth(budget.referenceEt),
    reference_et_asce2005_short_mm: depth(referenceEtDay({ ...input, method: 'asce2005', surface: 'short' }, null)),
    reference_et_asce2005_tall_mm: depth(referenceEtDay({ ...input, method: 'asce2005', surface: 'tall' }, null)),
    reference_et_hargreaves_mm: depth(hargreavesReferenceEt(input.airTemperatureMax, input.airTemperatureMin, extraterrestrial)),
    clear_sky_radiation_mj_m2_d: depth(clearSkyRadiation(extraterrestrial, input.elevation)),
    extraterrestrial_radiation_mj_m2_d: depth(extraterrestrial),
    net_shortwave_mj_m2_d: depth(budget.netShortwave),
    net_longwave_mj_m2_d: depth(budget.netLongwave),
    net_radiation_mj_m2_d: depth(budget.netRadiation),
    latent_heat_mj_m2_d: depth(budget.latentHeatFlux),
    sensible_heat_mj_m2_d: depth(budget.sensibleHeatFlux),
  };
}
