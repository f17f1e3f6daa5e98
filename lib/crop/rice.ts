/**
 * Ponded rice.
 */

/** Least humidities between the climates of Table 14, halfway between the classes of Table 16 (30 and 45 %, 70 and 80 %). */
const HUMID_FROM = 37.5;
const VERY_HUMID_FROM = 75;
/** Limits of light, moderate and strong wind [m s⁻¹] (FAO-56 Table 14). */
const MODERATE_FROM = 2;
const STRONG_FROM = 5;

const TABLE_14 = [
  [1.1, 1.15, 1.2],
  [1.05, 1.1, 1.15],
  [1.0, 1.05, 1.1],
] as const;

/**
 * Kc ini of rice standing in water.
 *
 * Rows: arid to semi-arid, sub-humid to humid, very humid, told apart by RHmin; columns: light, moderate, strong wind. Missing: NaN takes the
 * sub-humid climate, or the moderate wind.
 *
 * @param windSpeed2m mean u2 of the initial stage [m s⁻¹]
 * @param humidityMinimum mean RHmin of the initial stage [%]
 * @returns [1]
 * @example riceInitialCoefficient(1, 25) // 1.1
 * Source: FAO-56 Table 14; the limits of humidity between its classes from Table 16.
 */
export function riceInitialCoefficient(windSpeed2m: number, humidityMinimum: number): number {
  const row = humidityMinimum < HUMID_FROM ? 0 : humidityMinimum > VERY_HUMID_FROM ? 2 : 1;
  const column = windSpeed2m < MODERATE_FROM ? 0 : windSpeed2m > STRONG_FROM ? 2 : 1;
  return TABLE_14[row][column];
}

/** Days of flooding, offsets: from `from`, to the day before `to`; the field drains on `to`. */
export interface Flooding {
  readonly from: number;
  readonly to: number;
}

/**
 * When a paddy stands in water.
 *
 *   from planting + floodFrom (negative: puddling before it) to harvest − drainBefore
 *
 * @param planting offset of the planting
 * @param harvest offset of the first day without the crop
 * @returns an empty span (to ≤ from) for a crop shorter than its drainage
 * @example floodingOf(30, 150, { floodFrom: -10, drainBefore: 14 }) // { from: 20, to: 136 }
 * Source: common practice, no source.
 */
export function floodingOf(
  planting: number,
  harvest: number,
  paddy: { readonly floodFrom: number; readonly drainBefore: number },
): Flooding {
  return { from: planting + paddy.floodFrom, to: harvest - paddy.drainBefore };
}
