/**
 * Snow on the ground: what falls as snow, and what of it melts.
 *
 * Sublimation, and melt water that the snow holds back, are left out.
 */

/**
 * Mean temperatures between which rain and snow are mixed [°C].
 * Source: US Army Corps of Engineers 1956, Snow Hydrology, as used by Wigmosta, Vail & Lettenmaier 1994 (recalled, not re-read).
 */
export const ALL_SNOW_AT = -1.1;
export const ALL_RAIN_AT = 3.3;

/**
 * Degree-day melt coefficient Cm [mm °C⁻¹ d⁻¹]: 0.06 inch per degree Fahrenheit and day, which NEH 630 gives where nothing better is known. Its range is
 * 1.6 … 6.0 mm °C⁻¹ d⁻¹, least under forest, most on rain.
 * Source: USDA-NRCS, National Engineering Handbook 630, chapter 11 (recalled, not re-read).
 */
export const MELT_COEFFICIENT = 0.06 * 25.4 * 1.8;

/** Mean temperature above which snow melts [°C]. Source: as `MELT_COEFFICIENT`. */
export const MELT_FROM = 0;

/**
 * Share of a day's precipitation that falls as snow, by the mean temperature.
 *
 *   fs = (3.3 − T) / (3.3 + 1.1), held in 0 … 1
 *
 * Missing: NaN temperature gives NaN.
 *
 * @param airTemperatureMean T [°C]
 * @returns 0 … 1
 * @example snowShare(1.1) // 0.5
 * Source: US Army Corps of Engineers 1956, Snow Hydrology (limits recalled, not re-read); linear between them.
 */
export function snowShare(airTemperatureMean: number): number {
  return Math.min(1, Math.max(0, (ALL_RAIN_AT - airTemperatureMean) / (ALL_RAIN_AT - ALL_SNOW_AT)));
}

/**
 * Snow that melts in a day.
 *
 *   M = Cm (T − 0 °C) where T > 0 °C, at most the snow that is there
 *
 * Missing: NaN in any input gives NaN.
 *
 * @param snowWater water of the snow on the ground, with that of the day [mm]
 * @param airTemperatureMean T [°C]
 * @returns [mm d⁻¹]
 * @example degreeDayMelt(20, 5) // 13.716
 * Source: USDA-NRCS, National Engineering Handbook 630, chapter 11 (recalled, not re-read).
 */
export function degreeDayMelt(snowWater: number, airTemperatureMean: number): number {
  return Math.min(snowWater, MELT_COEFFICIENT * Math.max(0, airTemperatureMean - MELT_FROM));
}
