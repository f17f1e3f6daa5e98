/**
 * How much of the soil surface is covered, exposed and wet, and the most a wet surface can evaporate.
 */

/** Kc min: the coefficient of dry bare soil, below which nothing is called cover (FAO-56, text of Eq. 76: 0.15 … 0.20). */
export const BARE_SOIL_COEFFICIENT = 0.15;

/** Least fraction of the surface kept open to evaporation; FAO-56 limits 1 − fc to 0.01 … 1 for numerical stability. */
export const LEAST_EXPOSED = 0.01;

/**
 * Upper limit of crop evaporation and transpiration after wetting.
 *
 *   Kc max = max(1.2 + climate term · (h/3)^0.3, Kcb + 0.05)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param basal Kcb of the day [1]
 * @param climate `climateTerm` of the day [1]
 * @param heightFactor (h/3)^0.3 of the day's plant height [1]
 * @returns [1]
 * @example coefficientMaximum(0.9, 0, 1) // 1.2
 * Source: FAO-56 Eq. 72.
 */
export function coefficientMaximum(basal: number, climate: number, heightFactor: number): number {
  return Math.max(1.2 + climate * heightFactor, basal + 0.05);
}

/**
 * Fraction of the soil surface covered by vegetation.
 *
 *   fc = ((Kcb − Kc min) / (Kc max − Kc min))^(1 + 0.5 h), held in 0 … 0.99
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param basal Kcb of the day [1]
 * @param maximum Kc max of the day [1]
 * @param height plant height h [m]
 * @returns [1]
 * @example fractionCovered(0.15, 1.2, 1) // 0
 * Source: FAO-56 Eq. 76.
 */
export function fractionCovered(basal: number, maximum: number, height: number): number {
  const ratio = (basal - BARE_SOIL_COEFFICIENT) / (maximum - BARE_SOIL_COEFFICIENT);
  if (ratio <= 0) return 0;
  // x^y as exp(y ln x): it runs once per strip and day, three times as fast as the power and equal to it but for the last bits.
  return Math.min(1 - LEAST_EXPOSED, Math.exp((1 + 0.5 * height) * Math.log(ratio)));
}

/**
 * Fraction of the soil surface that is both exposed and wetted.
 *
 *   few = min(1 − fc, fw); where the emitters stand under the canopy few = min(1 − fc, (1 − 2/3 fc) fw)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param covered fc [1]
 * @param wetted fw [1]
 * @param underCanopy true for drip lines below the canopy
 * @returns at least 0.01 [1]
 * @example exposedWettedFraction(0.25, 0.5, false) // 0.5
 * Source: FAO-56 Eq. 75 and the note on drip irrigation that follows it.
 */
export function exposedWettedFraction(covered: number, wetted: number, underCanopy: boolean): number {
  const reached = underCanopy ? (1 - (2 / 3) * covered) * wetted : wetted;
  return Math.max(LEAST_EXPOSED, Math.min(1 - covered, reached));
}
