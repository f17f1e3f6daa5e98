/** Stored weather blocks put together into observations of sites over days. */
import type { Tx } from '../../db/connect.ts';
import { type BlockRow, findMonths, listBlocks, listSites, type SiteRow } from '../../db/queries/weather-observations.ts';
import { civilFromDayNumber, dayNumber, daysInMonth, isoDate } from '../base/civil-date.ts';
import { nanFromNull } from '../base/missing.ts';
import type { Site, SiteObservations, WeatherVariable } from '../weather/variable.ts';

interface ObservationsWanted {
  /** name of a source; left out or null: every source of the district */
  readonly source?: string | null;
  /** first and last day; left out: everything stored */
  readonly from?: string;
  readonly to?: string;
}

/**
 * Observations of a district's sites: each variable that has a block is [site × day], NaN where nothing is stored.
 *
 * @returns no sites and no days where the district has no weather
 */
export async function loadObservations(tx: Tx, districtId: string, wanted: ObservationsWanted = {}): Promise<SiteObservations> {
  const rows = await listSites(tx, districtId, wanted.source);
  const sourceId = wanted.source ? rows[0]?.sourceId : undefined;
  const months = rows.length === 0 ? null : await findMonths(tx, districtId, sourceId);
  if (!months) return { sites: rows.map(siteOf), startDate: wanted.from ?? '1970-01-01', dayCount: 0, values: {} };
  const span = { from: wanted.from ?? months.first, to: wanted.to ?? endOfMonth(months.last) };
  const blocks = await listBlocks(tx, districtId, { ...span, sourceId });
  return assembleObservations(rows, blocks, span);
}

/** The site as the numeric rooms take it. */
function siteOf(row: SiteRow): Site {
  const { code, name, longitude, latitude } = row;
  return { code, name, longitude, latitude, elevation: nanFromNull(row.elevation), windHeight: nanFromNull(row.windHeight) };
}

/** Puts blocks of any sources and months into arrays over the sites and days asked for. A block shorter than its source leaves NaN. */
export function assembleObservations(
  rows: readonly SiteRow[],
  blocks: readonly BlockRow[],
  span: { from: string; to: string },
): SiteObservations {
  const first = dayNumber(span.from);
  const dayCount = Math.max(0, dayNumber(span.to) - first + 1);
  const place = new Map(rows.map((row, index) => [`${row.sourceId}/${row.ordinal}`, index]));
  const values: Partial<Record<WeatherVariable, Float64Array>> = {};
  for (const block of blocks) {
    const variable = block.variable as WeatherVariable;
    values[variable] ??= new Float64Array(rows.length * dayCount).fill(Number.NaN);
    const stored = floatsOf(block.values);
    const offset = dayNumber(block.month) - first;
    for (let ordinal = 0; ordinal < block.siteCount; ordinal++) {
      const site = place.get(`${block.sourceId}/${ordinal}`);
      if (site === undefined) continue;
      const row = stored.subarray(ordinal * block.dayCount, (ordinal + 1) * block.dayCount);
      copyDays(row, offset, values[variable].subarray(site * dayCount, (site + 1) * dayCount));
    }
  }
  return { sites: rows.map(siteOf), startDate: span.from, dayCount, values };
}

function copyDays(from: Float32Array, offset: number, into: Float64Array): void {
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
  const first = dayNumber(month);
  const { year, month: number } = civilFromDayNumber(first);
  return isoDate(first + daysInMonth(year, number) - 1);
}
