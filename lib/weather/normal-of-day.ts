/**
 * Normals of the days to come: what the same days were like on the mean of the years on record.
 *
 * Source: WMO-No. 1203, Guidelines on the Calculation of Climate Normals, for means over the years of record. The window of 15 days, which smooths the
 * march of a short record, is the product's own.
 */
import { civilFromDayNumber, type DayNumber, dayNumberOf } from '../base/civil-date.ts';

/** Days on either side of the calendar day that make up its normal: a window of 15 days. */
export const NORMAL_HALF_WINDOW = 7;
export const NORMAL_WINDOW = 2 * NORMAL_HALF_WINDOW + 1;

/** Days, by the day number of the first. */
export interface DaySpan {
  readonly first: DayNumber;
  readonly dayCount: number;
}

/** Sums behind the normals of some days at one or more sites; parts of a record are added one after the other. */
export interface NormalSums {
  /** unit of the series, [site × day] */
  readonly sum: Float64Array;
  /** values in each sum */
  readonly count: Uint32Array;
}

export function emptyNormalSums(siteCount: number, dayCount: number): NormalSums {
  return { sum: new Float64Array(siteCount * dayCount), count: new Uint32Array(siteCount * dayCount) };
}

/**
 * Adds part of one site's record: for each day wanted, the values within ± 7 days of the same calendar day in every other year. Parts may be added in any
 * order; they must not overlap.
 *
 * 29 February is taken as 1 March in common years. The year of the day itself is left out: it is the year that is being told ahead.
 *
 * @param sums of all sites
 * @param at site and days wanted
 * @param series the site's values [day of the part]; NaN where missing
 * @param part days of the series
 */
export function addToNormals(
  sums: NormalSums,
  at: { readonly site: number; readonly days: DaySpan },
  series: ArrayLike<number>,
  part: DaySpan,
): void {
  const { total, known } = runningSums(series, part.dayCount);
  const [firstYear, lastYear] = [
    civilFromDayNumber(part.first - NORMAL_HALF_WINDOW).year,
    civilFromDayNumber(part.first + part.dayCount + NORMAL_HALF_WINDOW).year,
  ];
  for (let day = 0; day < at.days.dayCount; day++) {
    const own = civilFromDayNumber(at.days.first + day);
    const place = at.site * at.days.dayCount + day;
    for (let year = firstYear; year <= lastYear; year++) {
      if (year === own.year) continue;
      const centre = dayNumberOf(year, own.month, own.day) - part.first;
      const from = Math.max(0, centre - NORMAL_HALF_WINDOW);
      const end = Math.min(part.dayCount, centre + NORMAL_HALF_WINDOW + 1);
      if (from >= end) continue;
      sums.sum[place] += total[end] - total[from];
      sums.count[place] += known[end] - known[from];
    }
  }
}

/** Sums of the values before each day, and how many there are. */
function runningSums(series: ArrayLike<number>, dayCount: number): { total: Float64Array; known: Uint32Array } {
  const [total, known] = [new Float64Array(dayCount + 1), new Uint32Array(dayCount + 1)];
  for (let day = 0; day < dayCount; day++) {
    const missing = Number.isNaN(series[day]);
    total[day + 1] = total[day] + (missing ? 0 : series[day]);
    known[day + 1] = known[day] + (missing ? 0 : 1);
  }
  return { total, known };
}

/**
 * The normals themselves.
 *
 * @returns mean in the unit of the series [site × day]; NaN where no other year has a value
 */
export function normalsOf({ sum, count }: NormalSums): Float64Array {
  return sum.map((total, at) => (count[at] === 0 ? Number.NaN : total / count[at]));
}

/**
 * Normals of some days of one site from its whole record.
 *
 * @param series [day of the record]; NaN where missing
 * @param record days of the series
 * @param days the days wanted
 * @returns mean in the unit of the series [day]; NaN where no other year has a value
 */
export function normalOfDays(series: ArrayLike<number>, record: DaySpan, days: DaySpan): Float64Array {
  const sums = emptyNormalSums(1, days.dayCount);
  addToNormals(sums, { site: 0, days }, series, record);
  return normalsOf(sums);
}
