/**
 * Effective rain of a month by the older monthly rules. The season reckons it day by day from the soil; these stand beside it for comparison.
 */

const MM_PER_INCH = 25.4;

/**
 * Factor of the usable soil water storage.
 *
 *   SF = 0.531747 + 0.295164 D − 0.057697 D² + 0.003804 D³, D in inches
 *
 * Valid: D 0.75 … 7 inches (19 … 178 mm), the range of the handbook's table; outside it the end values are taken.
 * Missing: NaN gives NaN.
 *
 * @param storage D, usable storage: usually 40 … 60 % of the available water of the root zone [mm]
 * @returns 1 at 3 inches
 * @example storageFactor(76.2) // 1.001
 * Source: USDA-SCS 1970, Technical Release 21; National Engineering Handbook 623, chapter 2 (recalled, not re-read).
 */
export function storageFactor(storage: number): number {
  const d = Math.min(7, Math.max(0.75, storage / MM_PER_INCH));
  return 0.531747 + 0.295164 * d - 0.057697 * d * d + 0.003804 * d * d * d;
}

/**
 * Effective rain of a month, from its rain, the crop's use and the soil.
 *
 *   Pe = SF (0.70917 P^0.82416 − 0.11556) 10^(0.02426 ETc) in inches, at least 0, at most the smaller of P and ETc
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param precipitation P of the month [mm]
 * @param cropEt ETc of the month [mm]
 * @param storage usable storage D [mm]
 * @returns [mm per month]
 * @example effectiveRainOfMonth(100, 150, 76.2) // 73.48
 * Source: USDA-SCS 1970, Technical Release 21; National Engineering Handbook 623, chapter 2 (recalled, not re-read).
 */
export function effectiveRainOfMonth(precipitation: number, cropEt: number, storage: number): number {
  const p = precipitation / MM_PER_INCH;
  const et = cropEt / MM_PER_INCH;
  const inches = storageFactor(storage) * (0.70917 * p ** 0.82416 - 0.11556) * 10 ** (0.02426 * et);
  return Math.min(precipitation, cropEt, Math.max(0, inches * MM_PER_INCH));
}

/**
 * Effective rain of a month from its rain alone.
 *
 *   Pe = P (125 − 0.2 P) / 125 up to 250 mm, 125 + 0.1 P above
 *
 * Missing: NaN gives NaN.
 *
 * @param precipitation P of the month [mm]
 * @returns [mm per month]
 * @example simpleEffectiveRainOfMonth(100) // 84
 * Source: USDA Soil Conservation Service method in its simple form (recalled, not re-read).
 */
export function simpleEffectiveRainOfMonth(precipitation: number): number {
  if (precipitation > 250) return 125 + 0.1 * precipitation;
  return (precipitation * (125 - 0.2 * precipitation)) / 125;
}
