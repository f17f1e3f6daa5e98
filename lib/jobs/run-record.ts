/** The whole record of a run's sites, read in parts: what days to come are told from. */
import type { Tx } from '../../db/connect.ts';
import { findMonths } from '../../db/queries/weather-observations.ts';
import { addDays, civilFromDayNumber, dayNumber, daysInMonth, isoDate } from '../base/civil-date.ts';
import { lastObservedDay } from '../weather/days-ahead.ts';
import type { DaySpan } from '../weather/normal-of-day.ts';
import type { SiteObservations } from '../weather/variable.ts';
import { loadObservations, type SiteKey } from './observations.ts';
import type { RunWeatherSource } from './run-observations.ts';

/** Most site-days of a grid read at once. */
const MOST_AT_ONCE = 1_000_000;

/** The record behind a run: of stations it is in memory, of a grid it is read as asked. */
export interface RunRecord {
  /** days on record, whole months; null where there are none */
  readonly span: DaySpan | null;
  /** longest part that is read at once [d] */
  readonly longest: number;
  /** observations over at least some days of the record: of stations always all of it */
  readonly load: (days: DaySpan) => Promise<SiteObservations>;
}

/**
 * @param stored what the run has read already: the whole record of stations, the season with a margin of a grid
 * @param cells the cells that the run listens to, in the order of `stored.sites`; null for stations
 */
export async function runRecord(
  tx: Tx,
  districtId: string,
  { source, stored, cells }: { source: RunWeatherSource; stored: SiteObservations; cells: readonly SiteKey[] | null },
): Promise<RunRecord> {
  if (!cells) {
    const span = stored.dayCount > 0 ? { first: dayNumber(stored.startDate), dayCount: stored.dayCount } : null;
    return { span, longest: Number.POSITIVE_INFINITY, load: async () => stored };
  }
  const months = await findMonths(
    tx,
    districtId,
    source.sources.map(({ sourceId }) => sourceId),
  );
  const load = ({ first, dayCount }: DaySpan) =>
    loadObservations(tx, districtId, { source: source.asked, from: isoDate(first), to: isoDate(first + dayCount - 1), sites: cells });
  return { span: months && wholeMonths(months), longest: Math.max(31, Math.floor(MOST_AT_ONCE / Math.max(1, cells.length))), load };
}

function wholeMonths({ first, last }: { first: string; last: string }): DaySpan {
  const { year, month } = civilFromDayNumber(dayNumber(last));
  const end = dayNumber(last) + daysInMonth(year, month);
  return { first: dayNumber(first), dayCount: end - dayNumber(first) };
}

/**
 * The last day on which any site of the run has air temperature, or reference ET of its own; null where none ever had.
 *
 * A grid's last day is looked for in what was read of the season, then in the last months of its record.
 */
export async function findLastObserved(record: RunRecord, stored: SiteObservations): Promise<string | null> {
  const end = record.span ? record.span.first + record.span.dayCount : 0;
  const storedEnd = dayNumber(addDays(stored.startDate, stored.dayCount));
  const found = lastObservedDay(stored);
  if (found !== null || !record.span) return found === null ? null : isoDate(found);
  if (storedEnd >= end && record.longest === Number.POSITIVE_INFINITY) return null;
  const step = Math.min(record.longest, 366);
  for (let last = end; last > record.span.first; last -= step) {
    const first = Math.max(record.span.first, last - step);
    const day = lastObservedDay(await record.load({ first, dayCount: last - first }));
    if (day !== null) return isoDate(day);
  }
  return null;
}
