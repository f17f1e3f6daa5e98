/** Which season a district would add next. */
import { addDays, civilFromDayNumber, dayNumber, dayNumberOf, type IsoDate, isoDate } from '../../lib/base/civil-date.ts';

export interface SeasonSuggestion {
  readonly code: string;
  readonly name: string;
  readonly start_date: IsoDate;
  readonly end_date: IsoDate;
}

/**
 * The water year after the newest season, else the one that holds today. A water year is named by the calendar year in which it ends.
 *
 * @example nextSeason({ startMonth: 10, lastDays: [], today: '2025-02-03' }) // { code: '2025', start_date: '2024-10-01', end_date: '2025-09-30' … }
 */
export function nextSeason(given: { startMonth: number; lastDays: readonly IsoDate[]; today: IsoDate }): SeasonSuggestion {
  const { startMonth, lastDays, today } = given;
  const newest = [...lastDays].sort().at(-1) ?? '';
  const { year, month } = civilFromDayNumber(dayNumber(newest ? addDays(newest, 1) : today));
  const startYear = month >= startMonth ? year : year - 1;
  const end = isoDate(dayNumberOf(startYear + 1, startMonth, 1) - 1);
  const code = end.slice(0, 4);
  return { code, name: `Water year ${code}`, start_date: isoDate(dayNumberOf(startYear, startMonth, 1)), end_date: end };
}
