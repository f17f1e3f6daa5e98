/** What is filled in time, from the record of the site itself: the limits of it, and the normal of a day. */
import { civilFromDayNumber, type DayNumber, dayNumberOf } from '../base/civil-date.ts';
import { NORMAL_HALF_WINDOW } from './normal-of-day.ts';

/** Longest gap of temperature that is bridged by a straight line between its neighbours [d]. The product's own limit. */
export const LONGEST_GAP_IN_TIME = 5;

/**
 * Normal of a day: mean of the observed values within ± 7 days of the same calendar day in every other year of the record.
 *
 * @param observed one site's series [day]
 * @param first day number of its first day
 * @param day offset of the day wanted
 * @returns mean in the unit of the series, NaN when no other year has a value. 29 February is taken as 1 March in common years.
 * Source: WMO-No. 1203, Guidelines on the Calculation of Climate Normals, for means of the other years; the window is the product's own.
 */
export function normalOfDay(observed: Float64Array, first: DayNumber, day: number): number {
  const own = civilFromDayNumber(first + day);
  const firstYear = civilFromDayNumber(first).year;
  const lastYear = civilFromDayNumber(first + observed.length - 1).year;
  let sum = 0;
  let count = 0;
  for (let year = firstYear - 1; year <= lastYear + 1; year++) {
    if (year === own.year) continue;
    const centre = dayNumberOf(year, own.month, own.day) - first;
    const last = Math.min(observed.length - 1, centre + NORMAL_HALF_WINDOW);
    for (let i = Math.max(0, centre - NORMAL_HALF_WINDOW); i <= last; i++) {
      if (Number.isNaN(observed[i])) continue;
      sum += observed[i];
      count++;
    }
  }
  return count === 0 ? Number.NaN : sum / count;
}
