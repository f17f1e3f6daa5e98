/** Weather sources and sites with what they cover, and the days of one site with reference ET and energy budget. */

import { z } from 'zod';
import { type BlockRow, findMonths, listBlocks, listSites, type SiteRow } from '../../../db/queries/weather-observations.ts';
import { findIssueDay, findSite, listBlockSpans, listSitePage, listSourcesWithSites } from '../../../db/queries/weather-sources.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { addDays, civilFromDayNumber, dayNumber, daysInMonth, isIsoDate, isoDate } from '../../base/civil-date.ts';
import { Malformed, NotFound, TooLarge } from '../../base/errors.ts';
import { floatsOf, loadObservations } from '../../jobs/observations.ts';
import type { SiteAnswer, SiteDay, SiteDaysAnswer } from '../contract/rest.ts';
import type { WeatherSourceAnswer } from '../contract/weather.ts';
import { readCursor, writeCursor } from '../paging.ts';
import { hourlySums, siteDay, sumsOn } from './weather-day.ts';
import { loadHours, openRecord, type SharedFills, type SiteRecord } from './weather-record.ts';

/** Place of the last site of a page. */
const CURSOR = z.tuple([z.number().int().min(-1)]);
/** Most days of one answer. */
const MOST_DAYS = 400;

/** Stations with what they cover, from their values: of every source of observations, or of the source named, which may be a forecast. Cells of grids are not among them. */
export function answerSites(caller: Caller, source?: string): Promise<SiteAnswer[]> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const wanted = (row: SiteRow) => (source === undefined ? row.role === 'observed' : row.source === source);
    const rows = (await listSites(tx, districtId)).filter((row) => row.kind === 'stations' && wanted(row));
    const sourceIds = [...new Set(rows.map(({ sourceId }) => sourceId))];
    const months = sourceIds.length > 0 ? await findMonths(tx, districtId, sourceIds) : null;
    const blocks = months ? await listBlocks(tx, districtId, { from: months.first, to: addDays(months.last, 27), sourceIds }) : [];
    const coverage = new Map(rows.map((row) => [keyOf(row), new Coverage()]));
    for (const block of blocks) addCoverage(coverage, block);
    return rows.map((row) => siteMembers(row, coverage.get(keyOf(row)) as Coverage));
  });
}

/** One site with what it covers: of the source named, else of the first that has it; null when there is none. */
export function answerSite(caller: Caller, code: string, source?: string): Promise<SiteAnswer | null> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const row = await findSite(tx, districtId, code, source);
    if (!row) return null;
    const months = await findMonths(tx, districtId, row.sourceId);
    const coverage = new Coverage();
    if (months) {
      const { values, startDate, dayCount } = await loadObservations(tx, districtId, { sites: [row], raw: true });
      const first = dayNumber(startDate);
      for (const [name, series] of Object.entries(values)) {
        for (let day = 0; day < dayCount; day++) if (!Number.isNaN(series[day])) coverage.count(name, first + day);
      }
    }
    return siteMembers(row, coverage);
  });
}

interface SitesWanted {
  readonly source?: string;
  readonly limit: number;
  readonly cursor?: string;
}

interface SitePage {
  readonly items: SiteAnswer[];
  readonly total: number;
  readonly next_cursor: string | null;
}

/**
 * A page of sites: of the stations of all sources of observations, or of the source named. Cells of a grid tell the months of the grid; their values are not
 * looked at, so `coverage_days` is empty.
 *
 * @throws {NotFound} for a source that is not the district's
 */
export async function answerSitePage(caller: Caller, wanted: SitesWanted): Promise<SitePage> {
  const source = wanted.source === undefined ? null : await findSource(caller, wanted.source);
  const [after] = readCursor(wanted.cursor, CURSOR) ?? [-1];
  if (source?.kind === 'grid') return gridPage(caller, source, { after, limit: wanted.limit });
  const all = await answerSites(caller, source?.name);
  const items = all.slice(after + 1, after + 1 + wanted.limit);
  const end = after + items.length;
  return { items, total: all.length, next_cursor: end + 1 < all.length ? writeCursor(end) : null };
}

type SourceRow = Awaited<ReturnType<typeof listSourcesWithSites>>[number];

async function findSource(caller: Caller, name: string): Promise<SourceRow> {
  const sources = await database().inDistrict(caller.districtId, (tx) => listSourcesWithSites(tx, caller.districtId));
  const found = sources.find((source) => source.name === name);
  if (!found) throw new NotFound(`no weather source "${name}" in this district`);
  return found;
}

function gridPage(caller: Caller, source: SourceRow, { after, limit }: { after: number; limit: number }): Promise<SitePage> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const rows = await listSitePage(tx, districtId, { sourceId: source.sourceId, after, limit });
    const months = await findMonths(tx, districtId, source.sourceId);
    const span = months ? { first: months.first, last: endOfMonth(months.last) } : null;
    const items = rows.map((row) => ({
      code: row.code,
      name: row.name,
      source: source.name,
      longitude: row.longitude,
      latitude: row.latitude,
      elevation_m: row.elevation,
      wind_height_m: row.windHeight,
      first_day: span?.first ?? null,
      last_day: span?.last ?? null,
      day_count: span ? dayNumber(span.last) - dayNumber(span.first) + 1 : 0,
      coverage_days: {},
    }));
    const last = rows[rows.length - 1]?.ordinal ?? after;
    return { items, total: source.sites, next_cursor: last + 1 < source.sites && rows.length > 0 ? writeCursor(last) : null };
  });
}

function endOfMonth(month: string): string {
  const { year, month: number } = civilFromDayNumber(dayNumber(month));
  return addDays(month, daysInMonth(year, number) - 1);
}

/** Every source with its sites, months and variables, told from the keys of what is stored. */
export function answerSources(caller: Caller): Promise<WeatherSourceAnswer[]> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const spans = await listBlockSpans(tx, districtId);
    const sources = await listSourcesWithSites(tx, districtId);
    const issued = new Map<number, string | null>();
    for (const { sourceId, role } of sources) if (role === 'forecast') issued.set(sourceId, await findIssueDay(tx, districtId, sourceId));
    return sources.map(({ sourceId, name, kind, role, sites }) => {
      const own = spans.filter((span) => span.sourceId === sourceId);
      const firsts = own.map(({ first }) => first as string).sort();
      const lasts = own.map(({ last }) => last as string).sort();
      return {
        name,
        kind,
        role,
        issued: issued.get(sourceId) ?? null,
        sites,
        first_month: firsts[0] ?? null,
        last_month: lasts[lasts.length - 1] ?? null,
        variables: own.map(({ variable }) => variable),
      };
    });
  });
}

function keyOf(row: { sourceId: number; ordinal: number }): string {
  return `${row.sourceId}/${row.ordinal}`;
}

/** Days on which a site has anything, and how many of each variable. */
class Coverage {
  readonly days = new Set<number>();
  readonly variables: Record<string, number> = {};

  count(variable: string, day: number): void {
    this.days.add(day);
    this.variables[variable] = (this.variables[variable] ?? 0) + 1;
  }
}

function addCoverage(coverage: Map<string, Coverage>, block: BlockRow): void {
  const values = floatsOf(block.values);
  const first = dayNumber(block.month);
  for (let ordinal = 0; ordinal < block.siteCount; ordinal++) {
    const site = coverage.get(keyOf({ sourceId: block.sourceId, ordinal }));
    for (let day = 0; site && day < block.dayCount; day++) {
      if (Number.isNaN(values[ordinal * block.dayCount + day])) continue;
      site.count(block.variable, first + day);
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
  /** source of the site; left out: the first that has a site of this code */
  readonly source?: string;
  /** kept by a caller that asks for several stations of a source */
  readonly shared?: SharedFills;
}

/**
 * Days of a site with what else it has: the last days asked for when they are more than one answer holds.
 *
 * @throws {NotFound} for a site that is not the district's. @throws {TooLarge} for more than 400 days with both ends given.
 */
export async function answerSiteRecord(caller: Caller, code: string, wanted: DaysWanted): Promise<SiteDaysAnswer> {
  requireSpan(wanted);
  const record = await openRecord(caller, code, wanted.source, wanted.shared);
  if (!record) return { items: [], first_day: null, last_day: null, truncated: false };
  const { first, last } = record;
  const { from, to } = spanOf(wanted, last);
  const truncated = (!wanted.from && from > first && to >= first) || (!wanted.to && to < last);
  return { items: await daysOf(caller, record, from, to), first_day: first, last_day: last, truncated };
}

/** The days of `answerSiteRecord` alone. */
export async function answerSiteDays(caller: Caller, code: string, wanted: DaysWanted): Promise<SiteDay[]> {
  return (await answerSiteRecord(caller, code, wanted)).items;
}

/** Every day asked for, in pieces of at most 400. @throws {NotFound} for a site that is not the district's. */
export async function* eachSiteDays(caller: Caller, code: string, wanted: DaysWanted): AsyncGenerator<SiteDay[]> {
  requireSpan(wanted);
  const record = await openRecord(caller, code, wanted.source, wanted.shared);
  if (!record) return;
  const { from = record.first, to = record.last } = wanted;
  const end = minimum(to, record.last);
  const [, begin] = [from, record.first].sort();
  for (let start = begin; start <= end; start = addDays(start, MOST_DAYS)) {
    yield await daysOf(caller, record, start, minimum(end, addDays(start, MOST_DAYS - 1)));
  }
}

/** Days of the record between two dates, both included. */
async function daysOf(caller: Caller, record: SiteRecord, wantedFrom: string, wantedTo: string): Promise<SiteDay[]> {
  const from = [wantedFrom, record.first].sort()[1];
  const to = minimum(wantedTo, record.last);
  if (from > to) return [];
  const hours = await loadHours(caller, record, from, to);
  const sums = hours && hourlySums(hours);
  const offset = dayNumber(from) - dayNumber(record.start);
  return Array.from({ length: dayNumber(to) - dayNumber(from) + 1 }, (_, day) => siteDay(record, offset + day, sumsOn(sums, day)));
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
