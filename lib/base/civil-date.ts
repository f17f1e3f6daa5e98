/**
 * Civil dates without clocks: `YYYY-MM-DD` strings and whole day numbers of the proleptic Gregorian calendar.
 *
 * Source of the day arithmetic: E. G. Richards, "Calendars", in Explanatory Supplement to the Astronomical Almanac, 3rd ed. (2013), section 15.11.
 */

/** A civil date, `YYYY-MM-DD`, in the district's own time zone. */
export type IsoDate = string;

/** Whole days since 1970-01-01 (which is 0). */
export type DayNumber = number;

const ISO = /^(\d{4})-(\d{2})-(\d{2})$/;

/** @example daysInMonth(2024, 2) // 29 */
export function daysInMonth(year: number, month: number): number {
  if (month === 2) return isLeapYear(year) ? 29 : 28;
  return month === 4 || month === 6 || month === 9 || month === 11 ? 30 : 31;
}

/** @example isLeapYear(1900) // false */
export function isLeapYear(year: number): boolean {
  return (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0;
}

/** True for a real date in the form YYYY-MM-DD. @example isIsoDate('2023-02-29') // false */
export function isIsoDate(text: string): text is IsoDate {
  const match = ISO.exec(text);
  if (!match) return false;
  const [year, month, day] = [Number(match[1]), Number(match[2]), Number(match[3])];
  return month >= 1 && month <= 12 && day >= 1 && day <= daysInMonth(year, month);
}

/** Day number of a year, month (1–12) and day of month. @example dayNumberOf(1970, 1, 1) // 0 */
export function dayNumberOf(year: number, month: number, day: number): DayNumber {
  const y = month <= 2 ? year - 1 : year;
  const era = Math.floor(y / 400);
  const yearOfEra = y - era * 400;
  const dayOfYearFromMarch = Math.floor((153 * (month + (month > 2 ? -3 : 9)) + 2) / 5) + day - 1;
  const dayOfEra = yearOfEra * 365 + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100) + dayOfYearFromMarch;
  return era * 146097 + dayOfEra - 719468;
}

/** @example dayNumber('1970-01-02') // 1 */
export function dayNumber(date: IsoDate): DayNumber {
  return dayNumberOf(Number(date.slice(0, 4)), Number(date.slice(5, 7)), Number(date.slice(8, 10)));
}

/** Year, month (1–12) and day of a day number; the inverse of `dayNumberOf`. */
export function civilFromDayNumber(n: DayNumber): { year: number; month: number; day: number } {
  const z = n + 719468;
  const era = Math.floor(z / 146097);
  const dayOfEra = z - era * 146097;
  const yearOfEra = Math.floor(
    (dayOfEra - Math.floor(dayOfEra / 1460) + Math.floor(dayOfEra / 36524) - Math.floor(dayOfEra / 146096)) / 365,
  );
  const fromMarch = dayOfEra - (365 * yearOfEra + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100));
  const mp = Math.floor((5 * fromMarch + 2) / 153);
  const month = mp < 10 ? mp + 3 : mp - 9;
  return { year: yearOfEra + era * 400 + (month <= 2 ? 1 : 0), month, day: fromMarch - Math.floor((153 * mp + 2) / 5) + 1 };
}

/** @example isoDate(0) // '1970-01-01' */
export function isoDate(n: DayNumber): IsoDate {
  const { year, month, day } = civilFromDayNumber(n);
  return `${String(year).padStart(4, '0')}-${String(month).padStart(2, '0')}-${String(day).padStart(2, '0')}`;
}

/** Day of the year, 1 on 1 January. @example dayOfYear(dayNumber('2024-12-31')) // 366 */
export function dayOfYear(n: DayNumber): number {
  return n - dayNumberOf(civilFromDayNumber(n).year, 1, 1) + 1;
}

/** ISO weekday, 1 Monday … 7 Sunday. @example isoWeekday(0) // 4 */
export function isoWeekday(n: DayNumber): number {
  return ((((n + 3) % 7) + 7) % 7) + 1;
}

/** @example addDays('2024-02-28', 2) // '2024-03-01' */
export function addDays(date: IsoDate, days: number): IsoDate {
  return isoDate(dayNumber(date) + days);
}

export type PeriodKind = 'day' | 'week' | 'month' | 'season';

/** One period of a run: day offsets from the run's first day, `to` inclusive. */
export interface Period {
  readonly start: IsoDate;
  readonly end: IsoDate;
  readonly from: number;
  readonly to: number;
}

/**
 * Cuts the days `start … end` (inclusive) into periods of one kind; first and last may be short.
 *
 * @param weekStart ISO weekday on which the district's delivery week begins, 1 Monday … 7 Sunday
 */
export function periodsOf(kind: PeriodKind, start: IsoDate, end: IsoDate, weekStart: number): Period[] {
  const first = dayNumber(start);
  const last = dayNumber(end);
  const periods: Period[] = [];
  let from = first;
  for (let day = first; day <= last; day++) {
    if (day === last || beginsPeriod(kind, day + 1, weekStart)) {
      periods.push({ start: isoDate(from), end: isoDate(day), from: from - first, to: day - first });
      from = day + 1;
    }
  }
  return periods;
}

function beginsPeriod(kind: PeriodKind, day: DayNumber, weekStart: number): boolean {
  if (kind === 'day') return true;
  if (kind === 'week') return isoWeekday(day) === weekStart;
  if (kind === 'month') return civilFromDayNumber(day).day === 1;
  return false;
}
