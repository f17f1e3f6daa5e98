/**
 * Salt in the root zone: what it costs in yield and water use, and the water that carries it off.
 */

/** Salt tolerance of a crop: threshold ECt [dS m⁻¹] and decline of yield b [% per dS m⁻¹]. */
export interface SaltTolerance {
  readonly threshold: number;
  readonly slope: number;
}

/**
 * Relative yield on a salty soil with enough water.
 *
 *   Ya / Ym = 1 − (ECe − ECt) b / 100 above the threshold, 1 up to it, not below 0
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param soil ECe, mean conductivity of the saturation extract of the root zone [dS m⁻¹]
 * @param tolerance ECt and b
 * @returns 0 … 1
 * @example relativeYieldInSalt(3.7, { threshold: 1.7, slope: 12 }) // 0.76
 * Source: FAO-56 Eq. 89 (Maas & Hoffman 1977, Ayers & Westcot 1985).
 */
export function relativeYieldInSalt(soil: number, tolerance: SaltTolerance): number {
  if (soil <= tolerance.threshold) return 1;
  return Math.max(0, 1 - ((soil - tolerance.threshold) * tolerance.slope) / 100);
}

/**
 * Water stress coefficient of salt, while the root zone is not short of water.
 *
 *   Ks = 1 − b (ECe − ECt) / (100 Ky) above the threshold, 1 up to it, not below 0
 *
 * Valid: ECe < ECt + 50 / b, where yield falls by half; beyond it FAO-56 advises against the equation, and the value is an extrapolation
 * (`saltStressIsValid` tells).
 * Missing: NaN in any input gives NaN out; where Ky is not listed, give 1.
 *
 * @param soil ECe [dS m⁻¹]
 * @param tolerance ECt and b
 * @param response Ky of the season [1], above 0
 * @returns 0 … 1
 * @example saltStress(3.7, { threshold: 1.7, slope: 12 }, 1.25) // 0.808
 * Source: FAO-56 Eq. 91.
 */
export function saltStress(soil: number, tolerance: SaltTolerance, response: number): number {
  if (soil <= tolerance.threshold) return Number.isNaN(response) ? Number.NaN : 1;
  return Math.max(0, 1 - (tolerance.slope * (soil - tolerance.threshold)) / (100 * response));
}

/**
 * Whether the salt stress lies within the range FAO-56 gives for it: ECe < ECt + 50 / b.
 *
 * @param soil ECe [dS m⁻¹]
 * @example saltStressIsValid(5.8, { threshold: 1.7, slope: 12 }) // true
 * Source: FAO-56, text of Eq. 91.
 */
export function saltStressIsValid(soil: number, tolerance: SaltTolerance): boolean {
  return soil < tolerance.threshold + 50 / tolerance.slope;
}

/**
 * Stress by salt and by shortage of water together: the product of the two.
 *
 *   Ks = [1 − b (ECe − ECt) / (100 Ky)] (TAW − Dr) / ((1 − p) TAW)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param salt Ks of Eq. 91
 * @param water Ks of Eq. 84
 * @returns 0 … 1
 * @example combinedStress(0.8, 0.5) // 0.4
 * Source: FAO-56 Eq. 92.
 */
export function combinedStress(salt: number, water: number): number {
  return salt * water;
}

/** Most of the applied water that leaching may take. Choice of the product: beyond it the water is too salty for the crop, and the formula leaves its range. */
export const MOST_LEACHING = 0.9;

/**
 * Leaching requirement: share of the applied water that must pass the root zone to hold its salt where the crop tolerates it.
 *
 *   LR = ECw / (5 ECe − ECw), held in 0 … 0.9
 *
 * With ECe at the crop's threshold (full yield) it is the usual design value; a higher ECe accepts a loss of yield. For surface and sprinkler
 * irrigation; drip with daily watering leaches differently (FAO-29 gives another formula).
 * Missing: NaN in any input gives NaN out.
 *
 * @param water ECw of the irrigation water [dS m⁻¹]
 * @param soil ECe tolerated by the crop [dS m⁻¹]
 * @returns 0 … 0.9
 * @example leachingRequirement(1.2, 1.7) // 0.1644
 * Source: FAO-29 rev. 1 (Ayers & Westcot 1985), from Rhoades 1974; the limit is the product's.
 */
export function leachingRequirement(water: number, soil: number): number {
  const surplus = 5 * soil - water;
  if (surplus <= 0) return MOST_LEACHING;
  return Math.min(MOST_LEACHING, Math.max(0, water / surplus));
}

/**
 * Water to apply so that a depth stays in the root zone and the leaching requirement passes it.
 *
 *   AW = ET / (1 − LR)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param depth ET, or the depth to refill [mm]
 * @param requirement LR, below 1
 * @returns [mm]
 * @example depthWithLeaching(800, 0.1) // 888.9
 * Source: FAO-29 rev. 1 (recalled, not re-read).
 */
export function depthWithLeaching(depth: number, requirement: number): number {
  return depth / (1 - requirement);
}

/**
 * Salinity that the root zone comes to under long irrigation with a water and a leaching fraction.
 *
 *   ECe = (1 + LF) / LF · ECiw / 5
 *
 * Valid: leaching fractions of 0.05 … 0.4 or so; without leaching there is no end to it (Infinity).
 * Missing: NaN in any input gives NaN out.
 *
 * @param water ECiw of the irrigation water [dS m⁻¹]
 * @param fraction LF, share of the applied water that leaves below the roots
 * @returns ECe [dS m⁻¹]
 * @example steadySoilSalinity(1, 0.2) // 1.2
 * Source: FAO-56 Eq. 93.
 */
export function steadySoilSalinity(water: number, fraction: number): number {
  return (((1 + fraction) / fraction) * water) / 5;
}
