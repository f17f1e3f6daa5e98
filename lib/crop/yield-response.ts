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

/** ET of one growth stage with the stage's yield response factor. */
export interface StageDeficit {
  /** Ky of the stage [1] */
  readonly response: number;
  /** ETc adj of the stage [mm] */
  readonly adjustedCropEt: number;
  /** ETc of the stage [mm] */
  readonly cropEt: number;
}

/**
 * Relative yield from the deficits of the growth stages, each weighing by its own response.
 *
 *   Ya / Ym = Π (1 − Ky,i (1 − ETc adj,i / ETc,i)), no factor below 0
 *
 * A stage without ET (not reached, or not in the run) leaves the product as it is.
 *
 * Missing: a stage whose response is NaN is not listed for the crop; the caller leaves it out.
 *
 * @returns 0 … 1; 1 without stages
 * @example relativeYieldOfStages([{ response: 1.5, adjustedCropEt: 90, cropEt: 100 }, { response: 0.5, adjustedCropEt: 40, cropEt: 50 }]) // 0.765
 * Source: response by stage of FAO-33 (Doorenbos & Kassam 1979), Table 24; product over the stages: Rao, Sarma & Chander (1988), Agricultural Water
 * Management 13 (recalled, not re-read).
 */
export function relativeYieldOfStages(stages: readonly StageDeficit[]): number {
  let product = 1;
  for (const { response, adjustedCropEt, cropEt } of stages) {
    if (cropEt > 0) product *= relativeYield(response, adjustedCropEt, cropEt);
  }
  return product;
}
