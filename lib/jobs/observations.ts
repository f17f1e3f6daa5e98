/** Stored weather blocks put together into observations of sites over days, with the decisions of the quality desk laid over them. */
import type { Tx } from '../../db/connect.ts';
import { findWholeDistrict } from '../../db/queries/district-read.ts';
import { listOpenFlags, listStandingCorrections } from '../../db/queries/quality.ts';
import {
  type BlockRow,
  findMonths,
  listBlocks,
  listSitesOf,
  listWeatherSources,
  type SiteRow,
  type WeatherSourceRow,
} from '../../db/queries/weather-observations.ts';
import { addDays, civilFromDayNumber, dayNumber, daysInMonth, isoDate } from '../base/civil-date.ts';
import { nanFromNull } from '../base/missing.ts';
import { applyCorrections } from '../energy/quality-corrections.ts';
import { markSuspect } from '../weather/quality/correction.ts';
import { doubtsItsDays, RULES } from '../weather/quality/rules.ts';
import { QUALITY, type Site, type SiteObservations, WEATHER_VARIABLES, type WeatherVariable } from '../weather/variable.ts';
import { correctionsOver } from './correction-rows.ts';

/** A row of the blocks of a source. */
export interface SiteKey {
  readonly sourceId: number;
  readonly ordinal: number;
}

interface ObservationsWanted {
  /** name of a source, which may be a forecast; left out or null: every source of observed stations when any of them has weather, else the first grid that has */
  readonly source?: string | null;
  /** first and last day; left out: everything stored */
  readonly from?: string;
  readonly to?: string;
  /** only these sites, in this order, of whatever source: the cells of a grid that somebody listens to */
  readonly sites?: readonly SiteKey[];
  /** only these variables */
  readonly variables?: readonly WeatherVariable[];
  /** true: as stored, without corrections and without marks of doubt */
  readonly raw?: boolean;
}

interface Span {
  readonly from: string;
  readonly to: string;
}

/**
 * Observations of a district's sites as they are computed with: each daily variable that has a block is [site × day], NaN where nothing is
 * stored or a value was rejected. `quality` says what is not as measured. Hourly blocks are not looked at.
 *
 * @returns no sites and no days where the district has no weather
 */
export async function loadObservations(tx: Tx, districtId: string, wanted: ObservationsWanted = {}): Promise<SiteObservations> {
  const sources = await sourcesWanted(tx, districtId, wanted);
  const sourceIds = sources.map(({ sourceId }) => sourceId);
  const rows = sitesWanted(await listSitesOf(tx, districtId, sourceIds), wanted.sites);
  const months = rows.length === 0 ? null : await findMonths(tx, districtId, sourceIds);
  if (!months) return { sites: rows.map(siteOf), startDate: wanted.from ?? '1970-01-01', dayCount: 0, values: {} };
  const span = { from: wanted.from ?? months.first, to: wanted.to ?? endOfMonth(months.last) };
  const assembly = new Assembly(rows, span);
  const grids = sources.some(({ kind }) => kind === 'grid');
  for (const part of partsOf(span, months, grids)) {
    for (const block of await listBlocks(tx, districtId, { ...part, sourceIds, variables: wanted.variables })) assembly.add(block);
  }
  const stored = assembly.observations();
  return wanted.raw ? stored : withDecisions(tx, districtId, { stored, rows, sourceIds, span });
}

async function sourcesWanted(tx: Tx, districtId: string, { source, sites }: ObservationsWanted): Promise<WeatherSourceRow[]> {
  const all = await listWeatherSources(tx, districtId);
  if (sites) {
    const asked = new Set(sites.map(({ sourceId }) => sourceId));
    return all.filter(({ sourceId }) => asked.has(sourceId));
  }
  if (source) return all.filter(({ name }) => name === source);
  const observed = all.filter(({ role }) => role === 'observed');
  const stations = observed.filter(({ kind }) => kind === 'stations');
  const grid = observed.find(({ kind, hasWeather }) => kind === 'grid' && hasWeather);
  return stations.some(({ hasWeather }) => hasWeather) || !grid ? stations : [grid];
}

function sitesWanted(rows: readonly SiteRow[], sites: readonly SiteKey[] | undefined): readonly SiteRow[] {
  if (!sites) return rows;
  const byKey = new Map(rows.map((row) => [keyOf(row), row]));
  return sites.flatMap((site) => byKey.get(keyOf(site)) ?? []);
}

function keyOf({ sourceId, ordinal }: SiteKey): string {
  return `${sourceId}/${ordinal}`;
}

/** Years of stations, months of grids: what is read at once stays small. */
function partsOf(span: Span, months: { first: string; last: string }, grids: boolean): Span[] {
  const parts: Span[] = [];
  const end = [span.to, endOfMonth(months.last)].sort()[0];
  let from = [span.from, months.first].sort()[1];
  while (from <= end) {
    const last = grids ? endOfMonth(from) : `${from.slice(0, 4)}-12-31`;
    parts.push({ from, to: [last, end].sort()[0] });
    from = addDays(last, 1);
  }
  return parts;
}

interface Stored {
  readonly stored: SiteObservations;
  readonly rows: readonly SiteRow[];
  readonly sourceIds: readonly number[];
  readonly span: Span;
}

const DOUBTING = Object.keys(RULES).filter(doubtsItsDays);

/** Lays standing corrections over what is stored, and marks the days of open flags. */
async function withDecisions(tx: Tx, districtId: string, { stored, rows, sourceIds, span }: Stored): Promise<SiteObservations> {
  const place = new Map(rows.map((row, index) => [keyOf(row), index]));
  const corrections = await listStandingCorrections(tx, districtId, { sourceIds, ...span });
  const flags = await listOpenFlags(tx, districtId, { sourceIds, rules: DOUBTING, ...span });
  if (corrections.length === 0 && flags.length === 0) return stored;
  const district = await findWholeDistrict(tx, districtId);
  const layers = correctionsOver(corrections, stored.startDate, (key) => place.get(keyOf(key)));
  const corrected = applyCorrections(stored, layers, district?.defaultElevation ?? 0);
  const first = dayNumber(stored.startDate);
  const doubts = flags.flatMap((flag) => {
    const site = place.get(keyOf(flag));
    const variable = flag.variable as WeatherVariable;
    if (site === undefined) return [];
    return [{ site, variable, firstDay: dayNumber(flag.firstDay) - first, lastDay: dayNumber(flag.lastDay) - first }];
  });
  return markSuspect(corrected, doubts);
}

/** The site as the numeric rooms take it. */
function siteOf(row: SiteRow): Site {
  const { code, name, longitude, latitude } = row;
  // a cell of a grid has no name of its own
  return { code, name: name || code, longitude, latitude, elevation: nanFromNull(row.elevation), windHeight: nanFromNull(row.windHeight) };
}

/** Puts blocks of any sources and months into arrays over the sites and days asked for. A block shorter than its source leaves NaN. */
export function assembleObservations(rows: readonly SiteRow[], blocks: readonly BlockRow[], span: Span): SiteObservations {
  const assembly = new Assembly(rows, span);
  for (const block of blocks) assembly.add(block);
  return assembly.observations();
}

/** Arrays that blocks are put into one after the other: only the rows of wanted sites are looked at. */
class Assembly {
  private readonly first: number;
  private readonly dayCount: number;
  private readonly bySource = new Map<number, { ordinal: number; index: number }[]>();
  private readonly values: Partial<Record<WeatherVariable, Float64Array>> = {};
  private readonly quality: Partial<Record<WeatherVariable, Uint8Array>> = {};

  constructor(
    private readonly rows: readonly SiteRow[],
    private readonly span: Span,
  ) {
    this.first = dayNumber(span.from);
    this.dayCount = Math.max(0, dayNumber(span.to) - this.first + 1);
    for (const [index, { sourceId, ordinal }] of rows.entries()) {
      const own = this.bySource.get(sourceId);
      if (own) own.push({ ordinal, index });
      else this.bySource.set(sourceId, [{ ordinal, index }]);
    }
  }

  add(block: BlockRow): void {
    const variable = block.variable as WeatherVariable;
    const sites = this.bySource.get(block.sourceId);
    if (!sites || block.steps !== 1 || !(variable in WEATHER_VARIABLES)) return;
    const length = this.rows.length * this.dayCount;
    this.values[variable] ??= new Float64Array(length).fill(Number.NaN);
    const into = this.values[variable];
    const stored = floatsOf(block.values);
    const offset = dayNumber(block.month) - this.first;
    for (const { ordinal, index } of sites) {
      if (ordinal >= block.siteCount) continue;
      const [from, to] = [ordinal * block.dayCount, (ordinal + 1) * block.dayCount];
      copyDays(stored.subarray(from, to), offset, into.subarray(index * this.dayCount, (index + 1) * this.dayCount));
      const quality = block.quality.subarray(from, to);
      if (!quality.some((code) => code > QUALITY.measured)) continue;
      this.quality[variable] ??= new Uint8Array(length);
      copyDays(quality, offset, this.quality[variable].subarray(index * this.dayCount, (index + 1) * this.dayCount));
    }
  }

  observations(): SiteObservations {
    const { rows, span, dayCount, values, quality } = this;
    for (const [variable, codes] of Object.entries(quality) as [WeatherVariable, Uint8Array][]) {
      const own = values[variable] as Float64Array;
      for (let i = 0; i < codes.length; i++) if (codes[i] === QUALITY.missing && !Number.isNaN(own[i])) codes[i] = QUALITY.measured;
    }
    const found = { sites: rows.map(siteOf), startDate: span.from, dayCount, values };
    return Object.keys(quality).length > 0 ? { ...found, quality } : found;
  }
}

function copyDays(from: ArrayLike<number>, offset: number, into: Float64Array | Uint8Array): void {
  for (let day = 0; day < from.length; day++) {
    const at = day + offset;
    if (at >= 0 && at < into.length) into[at] = from[day];
  }
}

/** Float32, little-endian, as a view; copied only when the bytes are not aligned. */
export function floatsOf(bytes: Uint8Array): Float32Array {
  const aligned = bytes.byteOffset % 4 === 0 ? bytes : Uint8Array.from(bytes);
  return new Float32Array(aligned.buffer, aligned.byteOffset, aligned.byteLength >> 2);
}

function endOfMonth(month: string): string {
  const first = dayNumber(`${month.slice(0, 7)}-01`);
  const { year, month: number } = civilFromDayNumber(first);
  return isoDate(first + daysInMonth(year, number) - 1);
}
