/**
 * A cell of a table → a civil date as a day number.
 */
import { type DayNumber, dayNumberOf, daysInMonth } from '../base/civil-date.ts';
import { fixedOffset } from '../base/time-zone.ts';
import type { DateOrder } from './reading.ts';

const COMPACT = /^(\d{4})(\d{2})(\d{2})(?:[ T:]?(\d{2})(?::?(\d{2})(?::?\d{2})?)?)?$/;
const YEAR_FIRST = /^(\d{4})[-/.](\d{1,2})[-/.](\d{1,2})(?:[T ](\d{1,2})(?::(\d{2}))?(?::\d{2}(?:\.\d+)?)?\s*(Z|[+-]\d{2}:?\d{2})?)?$/i;
const YEAR_LAST = /^(\d{1,2})[-/. ](\d{1,2})[-/. ](\d{4})(?:[T ](\d{1,2})(?::(\d{2}))?(?::\d{2}(?:\.\d+)?)?\s*([ap]\.?m\.?)?)?$/i;
const MONTH_NAME = /^(\d{1,2})[- /.]([a-z]{3})[a-z]*[- /.,]+(\d{4})$/i;
const MONTHS = ['jan', 'feb', 'mar', 'apr', 'may', 'jun', 'jul', 'aug', 'sep', 'oct', 'nov', 'dec'];

/** Years that a row may name. */
export const YEAR_LIMITS = { low: 1800, high: 2150 } as const;

export interface DateReading {
  readonly day: DayNumber;
  /** minutes after midnight when the cell had a time, else −1 */
  readonly minute: number;
  /** minutes east of UTC when the cell says so, as in 2024-06-01T12:00+02:00 */
  readonly offset?: number;
}

/** Date from year, month, day; null when there is no such day or the year is outside `YEAR_LIMITS`. */
export function dayFromParts(year: number, month: number, day: number): DayNumber | null {
  if (!Number.isInteger(year) || !Number.isInteger(month) || !Number.isInteger(day)) return null;
  if (year < YEAR_LIMITS.low || year > YEAR_LIMITS.high || month < 1 || month > 12) return null;
  return day >= 1 && day <= daysInMonth(year, month) ? dayNumberOf(year, month, day) : null;
}

/**
 * Reads one date cell. Dates that begin with a four-digit year need no order; the others are read by `order`.
 *
 * @example parseDate('31/12/2024', 'dmy')?.day // 20088
 */
export function parseDate(text: string, order: DateOrder): DateReading | null {
  const cell = text.trim();
  const yearFirst = YEAR_FIRST.exec(cell) ?? COMPACT.exec(cell);
  if (yearFirst) {
    const date = reading(dayFromParts(Number(yearFirst[1]), Number(yearFirst[2]), Number(yearFirst[3])), yearFirst[4], yearFirst[5]);
    return date && yearFirst[6] ? { ...date, offset: fixedOffset(yearFirst[6]) ?? 0 } : date;
  }
  const last = YEAR_LAST.exec(cell);
  if (last) {
    const [first, second, year] = [Number(last[1]), Number(last[2]), Number(last[3])];
    return reading(order === 'mdy' ? dayFromParts(year, first, second) : dayFromParts(year, second, first), last[4], last[5], last[6]);
  }
  const named = MONTH_NAME.exec(cell);
  if (!named) return null;
  return reading(dayFromParts(Number(named[3]), MONTHS.indexOf(named[2].toLowerCase()) + 1, Number(named[1])), undefined, undefined);
}

function reading(day: DayNumber | null, hour: string | undefined, minute: string | undefined, half?: string): DateReading | null {
  if (day === null) return null;
  if (hour === undefined) return { day, minute: -1 };
  const hours = half === undefined ? Number(hour) : (Number(hour) % 12) + (/^p/i.test(half) ? 12 : 0);
  const minutes = hours * 60 + Number(minute ?? 0);
  return Number(minute ?? 0) < 60 && minutes <= 24 * 60 ? { day, minute: minutes } : null;
}

/**
 * Order of day and month in dates with the year last, told from numbers above 12.
 *
 * @returns the order, `ambiguous` when every number is ≤ 12, `mixed` when both orders occur, or `ymd` when no date has the year last
 */
export function sniffDateOrder(cells: Iterable<string>): DateOrder | 'ambiguous' | 'mixed' {
  let seen = 0;
  let firstAbove = 0;
  let secondAbove = 0;
  for (const cell of cells) {
    const match = YEAR_LAST.exec(cell.trim());
    if (!match) continue;
    seen++;
    if (Number(match[1]) > 12) firstAbove++;
    if (Number(match[2]) > 12) secondAbove++;
  }
  if (seen === 0) return 'ymd';
  if (firstAbove > 0 && secondAbove > 0) return 'mixed';
  if (firstAbove > 0) return 'dmy';
  return secondAbove > 0 ? 'mdy' : 'ambiguous';
}
