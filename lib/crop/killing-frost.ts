/**
 * The frost that ends a growing season.
 */

export interface KillingFrost {
  /** °C */
  readonly threshold: number;
  /** days from the start of the crop before which no frost ends it */
  readonly notBefore: number;
  /** days the crop goes on after the frost; left out: 0 */
  readonly after?: number;
}

/**
 * First day on which the crop no longer grows because of a killing frost.
 *
 *   the first day from `start + notBefore` on with Tmin ≤ threshold, and `after` days more
 *
 * Missing: NaN is no frost.
 *
 * @param minimum Tmin [day], °C
 * @param start first day of the crop, offset; may be negative
 * @param rule threshold and days
 * @returns offset of the day, Infinity when no such frost comes in the run
 * @example killingFrostDay(Float64Array.of(2, -5, 3, -6), 0, { threshold: -4, notBefore: 2 }) // 3
 * Source: FAO-56 chapter 6, growing seasons of alfalfa (to the first −4 °C) and pasture (seven days after it).
 */
export function killingFrostDay(minimum: Float64Array, start: number, rule: KillingFrost): number {
  for (let d = Math.max(0, start + rule.notBefore); d < minimum.length; d++) {
    if (minimum[d] <= rule.threshold) return d + (rule.after ?? 0);
  }
  return Number.POSITIVE_INFINITY;
}
