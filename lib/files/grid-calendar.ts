/**
 * The calendars of the CF conventions: a count since an epoch → a day and second of the civil calendar.
 *
 * Source: CF Metadata Conventions 1.11, section 4.4.1 "Calendar".
 */
import { civilFromDayNumber, type DayNumber, dayNumberOf, daysInMonth, isLeapYear } from '../base/civil-date.ts';
import { SECONDS_PER_DAY } from '../base/units.ts';

/** Calendars that can be read: `standard` counts as Julian before 1582-10-15. */
export type Calendar = 'standard' | 'proleptic_gregorian' | '365_day' | '366_day' | '360_day';

const CALENDARS: Record<string, Calendar> = {
  '': 'standard',
  standard: 'standard',
  gregorian: 'standard',
  proleptic_gregorian: 'proleptic_gregorian',
  noleap: '365_day',
  no_leap: '365_day',
  '365_day': '365_day',
  all_leap: '366_day',
  '366_day': '366_day',
  '360_day': '360_day',
};

/** The calendar a file names, or null for one that has no place among civil dates (julian, none). @example calendarOf('noleap') // '365_day' */
export function calendarOf(text: string): Calendar | null {
  return CALENDARS[text.trim().toLowerCase()] ?? null;
}

/** A moment of an epoch: civil year, month (1–12), day and second of the day. */
export interface EpochDate {
  readonly year: number;
  readonly month: number;
  readonly day: number;
  readonly second: number;
}

const MONTH_STARTS_NO_LEAP = monthStarts(false);
const MONTH_STARTS_ALL_LEAP = monthStarts(true);
/** First day of the Gregorian reform, day number of the civil calendar. */
const REFORM = dayNumberOf(1582, 10, 15);

function monthStarts(leap: boolean): number[] {
  const starts = [0];
  for (let month = 1; month <= 12; month++) starts.push(starts[month - 1] + daysInMonth(leap ? 2000 : 2001, month));
  return starts;
}

/** True when the date exists in the calendar. @example isCalendarDate('standard', { year: 1582, month: 10, day: 14, second: 0 }) // false */
export function isCalendarDate(calendar: Calendar, { year, month, day }: EpochDate): boolean {
  if (month < 1 || month > 12 || day < 1) return false;
  if (calendar === '360_day') return day <= 30;
  if (calendar === '365_day') return day <= daysInMonth(2001, month);
  if (calendar === '366_day') return day <= daysInMonth(2000, month);
  if (calendar === 'standard' && year === 1582 && month === 10 && day > 4 && day < 15) return false;
  const julian = calendar === 'standard' && dayNumberOf(year, month, day) < REFORM;
  const last = month === 2 && julian ? (year % 4 === 0 ? 29 : 28) : daysInMonth(year, month);
  return day <= last;
}

/** Days from 1970-01-01 to a date of the Julian calendar, as day number of the civil one. Source: as `civil-date.ts`, section 15.11. */
function julianDayNumber(year: number, month: number, day: number): DayNumber {
  const y = month <= 2 ? year - 1 : year;
  const fromMarch = Math.floor((153 * (month + (month > 2 ? -3 : 9)) + 2) / 5) + day - 1;
  return 365 * y + Math.floor(y / 4) + fromMarch - 719470;
}

/**
 * Converts counts of seconds since an epoch to seconds since 1970-01-01 00:00 of the civil calendar.
 *
 * Days of the 365-day calendar keep their date, so that 29 February is absent. 29 February of the 366-day calendar in a year without one is
 * NaN. A day of the 360-day calendar goes to the civil day nearest to the same fraction of the year, halves to the even day, so that five
 * days of each year (six of a leap year) are absent.
 *
 * @param seconds since the epoch, in the calendar
 * @returns seconds since 1970-01-01, NaN for a day that does not exist or an input that is NaN
 */
export function civilSeconds(calendar: Calendar, epoch: EpochDate, seconds: Float64Array): Float64Array {
  const convert = CONVERTERS[calendar];
  const start = calendarDays(calendar, epoch) * SECONDS_PER_DAY + epoch.second;
  const result = new Float64Array(seconds.length);
  for (let i = 0; i < seconds.length; i++) {
    const total = start + seconds[i];
    const day = Math.floor(total / SECONDS_PER_DAY);
    result[i] = Number.isFinite(total) ? convert(day) * SECONDS_PER_DAY + (total - day * SECONDS_PER_DAY) : Number.NaN;
  }
  return result;
}

/** Days of the calendar's own count: since 1970-01-01 for the civil calendars, since year 0 for the idealised ones. */
function calendarDays(calendar: Calendar, { year, month, day }: EpochDate): number {
  if (calendar === '360_day') return year * 360 + (month - 1) * 30 + day - 1;
  if (calendar === '365_day') return year * 365 + MONTH_STARTS_NO_LEAP[month - 1] + day - 1;
  if (calendar === '366_day') return year * 366 + MONTH_STARTS_ALL_LEAP[month - 1] + day - 1;
  const civil = dayNumberOf(year, month, day);
  return calendar === 'standard' && civil < REFORM ? julianDayNumber(year, month, day) : civil;
}

const CONVERTERS: Record<Calendar, (day: number) => DayNumber> = {
  standard: (day) => day,
  proleptic_gregorian: (day) => day,
  '365_day': (day) => dateInYear(Math.floor(day / 365), mod(day, 365), MONTH_STARTS_NO_LEAP),
  '366_day': (day) => dateInYear(Math.floor(day / 366), mod(day, 366), MONTH_STARTS_ALL_LEAP),
  '360_day': (day) => {
    const year = Math.floor(day / 360);
    const length = isLeapYear(year) ? 366 : 365;
    return dayNumberOf(year, 1, 1) + roundHalfEven(((mod(day, 360) + 1) * length) / 360) - 1;
  },
};

function dateInYear(year: number, dayOfYear: number, starts: readonly number[]): DayNumber {
  let month = 12;
  while (starts[month - 1] > dayOfYear) month--;
  const day = dayOfYear - starts[month - 1] + 1;
  return day <= daysInMonth(year, month) ? dayNumberOf(year, month, day) : Number.NaN;
}

function mod(value: number, by: number): number {
  return value - Math.floor(value / by) * by;
}

function roundHalfEven(value: number): number {
  const down = Math.floor(value);
  const rest = value - down;
  if (rest !== 0.5) return rest < 0.5 ? down : down + 1;
  return down % 2 === 0 ? down : down + 1;
}

/** Year and month of a civil second count, for messages. */
export function dateOfSeconds(seconds: number): { readonly year: number; readonly month: number; readonly day: number } {
  return civilFromDayNumber(Math.floor(seconds / SECONDS_PER_DAY));
}
