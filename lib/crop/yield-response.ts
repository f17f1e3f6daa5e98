/**
 * Yield lost to a shortage of water, and the shortage that a loss implies.
 */

/**
 * Relative yield of a season from its evapotranspiration deficit.
 *
 *   Ya / Ym = 1 − Ky (1 − ETc adj / ETc), not below 0
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param response Ky of the season [1]
 * @param adjustedCropEt ETc adj of the season [mm]
 * @param cropEt ETc of the season [mm]
 * @returns 0 … 1
 * @example relativeYield(1.25, 80, 100) // 0.75
 * Source: FAO-56 Eq. 90 (from FAO-33).
 */
export function relativeYield(response: number, adjustedCropEt: number, cropEt: number): number {
  return Math.max(0, 1 - response * (1 - adjustedCropEt / cropEt));
}

/**
 * Seasonal stress coefficient implied by a relative yield; the inverse of `relativeYield`.
 *
 *   Ks = 1 − (1 / Ky) (1 − Ya / Ym)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param response Ky of the season [1]
 * @param yieldFraction Ya / Ym [1]
 * @returns [1]
 * @example stressFromRelativeYield(1.25, 0.75) // 0.8
 * Source: FAO-56 Eq. 103.
 */
export function stressFromRelativeYield(response: number, yieldFraction: number): number {
  return 1 - (1 - yieldFraction) / response;
}
