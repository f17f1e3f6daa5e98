/**
 * Runoff of a day's rain by the curve number.
 */

/**
 * Potential maximum retention of a curve number.
 *
 *   S = 25400 / CN − 254
 *
 * Missing: NaN gives NaN.
 *
 * @param curveNumber CN, 1 … 100
 * @returns [mm]
 * @example potentialRetention(50) // 254
 * Source: USDA-NRCS, National Engineering Handbook 630, chapter 10 (metric form of S = 1000/CN − 10 in).
 */
export function potentialRetention(curveNumber: number): number {
  return 25400 / curveNumber - 254;
}

/**
 * Surface runoff of a day's rain.
 *
 *   RO = (P − 0.2 S)² / (P + 0.8 S) where P > 0.2 S, else 0
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param precipitation P [mm d⁻¹]
 * @param retention S [mm]
 * @returns [mm d⁻¹]
 * @example surfaceRunoff(20, 100) // 0
 * Source: USDA-NRCS, National Engineering Handbook 630, chapter 10, Eq. 10-11 (equation number recalled, not re-read).
 */
export function surfaceRunoff(precipitation: number, retention: number): number {
  const beyond = precipitation - 0.2 * retention;
  if (beyond <= 0) return 0;
  return (beyond * beyond) / (precipitation + 0.8 * retention);
}
