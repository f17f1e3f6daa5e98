/**
 * Readings of a station through the day → hours → values of the day.
 *
 * Clock readings are minutes since 1970-01-01 00:00 of the station's own standard clock; a day has 24 hours, each named by the hour that
 * begins it. Arrays of hours are [day × 24]. Missing is NaN.
 */
import type { DayNumber } from '../base/civil-date.ts';
import { ShapeError } from '../base/errors.ts';

export const HOURS_PER_DAY = 24 as const;
const MINUTES_PER_HOUR = 60;
const MINUTES_PER_DAY = 1440;

/**
 * Part of an hour that must be covered by readings for the hour to count. Source: WMO-No. 8, Guide to Instruments, quality control of
 * automatic stations: two thirds of the samples (recalled, not re-read).
 */
export const LEAST_PART_OF_HOUR = 2 / 3;
/** Fewest hours of a day that make its sums and means, unless chosen otherwise. Common practice, no source. */
export const USUAL_MINIMUM_HOURS = 22;

/** Readings of one variable at one station. */
export interface Readings {
  /** middle of the time each reading stands for [min of the standard clock] */
  readonly centres: Float64Array;
  readonly values: Float64Array;
  /** time that one reading stands for [min] */
  readonly step: number;
}

/** The days that arrays of hours and days run over. */
export interface DaySpan {
  readonly firstDay: DayNumber;
  readonly dayCount: number;
}

/**
 * Means over the hours, of readings that are means or states of the time they stand for. A reading of several hours counts for each of them.
 *
 * Missing: an hour covered for less than two thirds is NaN.
 *
 * @returns [day × 24], unit of the readings
 * @throws {ShapeError} when centres and values differ in length
 */
export function hourlyMeans(readings: Readings, span: DaySpan): Float64Array {
  const { totals, minutes } = gather(readings, span, false);
  return totals.map((total, hour) => (covered(minutes[hour]) ? total / minutes[hour] : Number.NaN));
}

/**
 * Sums over the hours, of readings that are amounts of the time they stand for. A reading of several hours is shared evenly among them.
 *
 * Missing: an hour covered for less than two thirds is NaN; what a lesser gap hides counts as nothing.
 *
 * @returns [day × 24], unit of the readings
 * @throws {ShapeError} when centres and values differ in length
 */
export function hourlySums(readings: Readings, span: DaySpan): Float64Array {
  const { totals, minutes } = gather(readings, span, true);
  return totals.map((total, hour) => (covered(minutes[hour]) ? total : Number.NaN));
}

function covered(minutes: number): boolean {
  return minutes >= LEAST_PART_OF_HOUR * MINUTES_PER_HOUR - 1e-6;
}

/** Per hour: minutes covered, and the sum of value × minutes, or of the amounts. */
function gather({ centres, values, step }: Readings, span: DaySpan, amounts: boolean): { totals: Float64Array; minutes: Float64Array } {
  requireSameLength(centres, values);
  const count = span.dayCount * HOURS_PER_DAY;
  const totals = new Float64Array(count);
  const minutes = new Float64Array(count);
  const origin = span.firstDay * MINUTES_PER_DAY;
  const parts = Math.max(1, Math.round(step / MINUTES_PER_HOUR));
  const part = step / parts;
  for (let i = 0; i < centres.length; i++) {
    const value = values[i];
    if (Number.isNaN(value)) continue;
    const first = centres[i] - origin - step / 2 + part / 2;
    for (let p = 0; p < parts; p++) {
      const hour = Math.floor((first + p * part) / MINUTES_PER_HOUR);
      if (hour < 0 || hour >= count) continue;
      totals[hour] += amounts ? value / parts : value * part;
      minutes[hour] += part;
    }
  }
  return { totals, minutes };
}

function requireSameLength(centres: Float64Array, values: Float64Array): void {
  if (centres.length !== values.length)
    throw new ShapeError(`${centres.length} clock readings, ${values.length} values: give one value per reading`);
}

/**
 * Highest or lowest reading of each day.
 *
 * Missing: NaN for a day without a reading.
 *
 * @returns [day], unit of the readings
 * @throws {ShapeError} when centres and values differ in length
 */
export function dailyExtremes({ centres, values }: Readings, span: DaySpan, which: 'max' | 'min'): Float64Array {
  requireSameLength(centres, values);
  const extremes = new Float64Array(span.dayCount).fill(Number.NaN);
  for (let i = 0; i < centres.length; i++) {
    const value = values[i];
    const day = Math.floor(centres[i] / MINUTES_PER_DAY) - span.firstDay;
    if (Number.isNaN(value) || day < 0 || day >= span.dayCount) continue;
    const so = extremes[day];
    if (Number.isNaN(so) || (which === 'max' ? value > so : value < so)) extremes[day] = value;
  }
  return extremes;
}

/** Hours with a value on each day, [day]. */
export function usableHours(hours: Float64Array): Uint8Array {
  const counts = new Uint8Array(hours.length / HOURS_PER_DAY);
  for (let hour = 0; hour < hours.length; hour++) if (!Number.isNaN(hours[hour])) counts[Math.floor(hour / HOURS_PER_DAY)]++;
  return counts;
}

/**
 * Mean of the hours of each day that has at least `minimumHours` of them; else NaN.
 *
 * @returns [day], unit of the hours
 */
export function dailyMeans(hours: Float64Array, minimumHours: number): Float64Array {
  const counts = usableHours(hours);
  return dailySums(hours, minimumHours).map((sum, day) => sum / counts[day]);
}

/**
 * Sum of the hours of each day that has at least `minimumHours` of them; else NaN. Missing hours count nothing: bridge them first where a
 * missing hour is not nothing (`bridgeHours`).
 *
 * @returns [day], unit of the hours
 */
export function dailySums(hours: Float64Array, minimumHours: number): Float64Array {
  const counts = usableHours(hours);
  const sums = new Float64Array(counts.length);
  for (let hour = 0; hour < hours.length; hour++) if (!Number.isNaN(hours[hour])) sums[Math.floor(hour / HOURS_PER_DAY)] += hours[hour];
  return sums.map((sum, day) => (counts[day] >= minimumHours && counts[day] > 0 ? sum : Number.NaN));
}

/** Hours with their short gaps bridged. */
export interface BridgedHours {
  /** [day × 24] */
  readonly hours: Float64Array;
  /** hours bridged on each day, [day] */
  readonly bridged: Uint8Array;
}

/**
 * Fills the missing hours of days that lack at most `most` of them, each with the mean of the nearest hours before and after; a gap that
 * crosses midnight may be bridged from the next day. A gap longer than `most` hours, or at an end of the record, stays.
 *
 * Source: none; a straight bridge over an hour or two is common practice.
 */
export function bridgeHours(hours: Float64Array, most: number): BridgedHours {
  const counts = usableHours(hours);
  const filled = Float64Array.from(hours);
  const bridged = new Uint8Array(counts.length);
  let before = -1;
  for (let hour = 0; hour < hours.length; hour++) {
    if (Number.isNaN(hours[hour])) continue;
    const gap = hour - before - 1;
    if (before >= 0 && gap > 0 && gap <= most) bridgeGap(before, hour);
    before = hour;
  }
  return { hours: filled, bridged };

  function bridgeGap(from: number, to: number): void {
    for (let hour = from + 1; hour < to; hour++) {
      const day = Math.floor(hour / HOURS_PER_DAY);
      if (HOURS_PER_DAY - counts[day] > most) continue;
      filled[hour] = (hours[from] + hours[to]) / 2;
      bridged[day]++;
    }
  }
}
