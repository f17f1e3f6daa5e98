/**
 * The same days of another year, and which stored year stands for them best: the wetting pattern of days to come.
 *
 * The mean rain of the day would make every day a drizzle, which wets the surface daily and never runs off or percolates. Days to come therefore take the
 * rain of one stored year as it fell: the year whose rain over these days lies nearest to the median of the years.
 */
import { civilFromDayNumber, type DayNumber, dayNumberOf, isLeapYear } from '../base/civil-date.ts';
import type { DaySpan } from './normal-of-day.ts';

/** Least share of the days with rain on record for a year to be taken. The product's own limit. */
const LEAST_RAIN_DAYS = 0.8;
/** Least share of the days with a value for a year to count as on record. The product's own limit. */
const LEAST_YEAR_DAYS = 0.5;

/** A day in another year. */
export interface YearDay {
  readonly day: DayNumber;
  /** 29 February of a year that has none: the weather of 28 February, whose rain must not fall twice */
  readonly repeated: boolean;
}

/**
 * The same calendar day, some years earlier. 29 February is 28 February in common years; a 29 February of the earlier year is passed over.
 *
 * @param day day number
 * @param yearsBack whole years, negative for later ones
 */
export function sameDay(day: DayNumber, yearsBack: number): YearDay {
  const own = civilFromDayNumber(day);
  const year = own.year - yearsBack;
  const repeated = own.month === 2 && own.day === 29 && !isLeapYear(year);
  return { day: dayNumberOf(year, own.month, repeated ? 28 : own.day), repeated };
}

/** The span that the same days cover in another year. */
export function sameDays({ first, dayCount }: DaySpan, yearsBack: number): DaySpan {
  const start = sameDay(first, yearsBack).day;
  return { first: start, dayCount: sameDay(first + dayCount - 1, yearsBack).day - start + 1 };
}

/** What one earlier year has of the days wanted; parts of a record are added one after the other. */
export interface YearTally {
  readonly yearsBack: number;
  /** days on which any site has a value of what drives the crops */
  days: number;
  /** days on which any site has rain, and the rain of those days, on the mean of the sites [mm] */
  rainDays: number;
  rain: number;
}

/** Daily figures over the sites of a part of a record: whether any has a value, and the mean rain of those that have it (NaN where none has). */
export interface PartDays {
  readonly part: DaySpan;
  readonly hasValue: Uint8Array;
  readonly meanRain: Float64Array;
}

/** Tallies for every earlier year that the record may hold. */
export function emptyTallies(days: DaySpan, recordFirst: DayNumber): YearTally[] {
  const years = civilFromDayNumber(days.first + days.dayCount - 1).year - civilFromDayNumber(recordFirst).year;
  return Array.from({ length: Math.max(0, years) }, (_, index) => ({ yearsBack: index + 1, days: 0, rainDays: 0, rain: 0 }));
}

/**
 * Adds part of a record to the tallies.
 *
 * @param wanted 1 on the days that count [day]
 */
export function addToTallies(
  tallies: readonly YearTally[],
  days: DaySpan,
  wanted: ArrayLike<number>,
  { part, hasValue, meanRain }: PartDays,
): void {
  for (const tally of tallies) {
    for (let day = 0; day < days.dayCount; day++) {
      if (wanted[day] === 0) continue;
      const then = sameDay(days.first + day, tally.yearsBack);
      const at = then.day - part.first;
      if (at < 0 || at >= part.dayCount) continue;
      tally.days += hasValue[at];
      if (Number.isNaN(meanRain[at])) continue;
      tally.rainDays++;
      if (!then.repeated) tally.rain += meanRain[at];
    }
  }
}

/** The years that count as on record, newest first: those with a value on at least half of the days. */
export function yearsOnRecord(tallies: readonly YearTally[], dayCount: number): YearTally[] {
  return tallies.filter(({ days }) => dayCount > 0 && days >= LEAST_YEAR_DAYS * dayCount);
}

/**
 * The year whose rain over the days lies nearest to the median of the years; of two as near, the later.
 *
 * A year with rain on fewer than 80 % of the days is not looked at; the rain of one that lacks days is raised to all of them.
 *
 * @returns null when no year has rain on record
 */
export function representativeYear(tallies: readonly YearTally[], dayCount: number): YearTally | null {
  const able = tallies.filter(({ rainDays }) => rainDays > 0 && rainDays >= LEAST_RAIN_DAYS * dayCount);
  if (able.length === 0) return null;
  const total = ({ rain, rainDays }: YearTally) => (rain * dayCount) / rainDays;
  const sorted = able.map(total).sort((a, b) => a - b);
  const median = (sorted[(sorted.length - 1) >> 1] + sorted[sorted.length >> 1]) / 2;
  return able.reduce((best, year) => (Math.abs(total(year) - median) < Math.abs(total(best) - median) ? year : best));
}
