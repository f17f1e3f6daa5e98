/**
 * Runoff of a day's rain by the curve number, as it is or by how wet the ground was before.
 */

/** Share of the retention that rain must fill before any runs off: Ia = 0.2 S. Source: NEH 630 chapter 10. */
const ABSTRACTION = 0.2;

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
 * @param precipitation P, or rain and melt that reach the ground [mm d⁻¹]
 * @param retention S [mm]
 * @returns [mm d⁻¹]
 * @example surfaceRunoff(20, 100) // 0
 * Source: USDA-NRCS, National Engineering Handbook 630, chapter 10, Eq. 10-11 (equation number recalled, not re-read).
 */
export function surfaceRunoff(precipitation: number, retention: number): number {
  const beyond = precipitation - ABSTRACTION * retention;
  if (beyond <= 0) return 0;
  return (beyond * beyond) / (precipitation + 0.8 * retention);
}

/**
 * Retention to go with an initial abstraction of 0.05 S, from that which goes with 0.2 S.
 *
 *   S05 = 1.33 S20^1.15 in inches
 *
 * Missing: NaN gives NaN.
 *
 * @param retention S20 [mm]
 * @returns S05 [mm]
 * @example retentionAtLowAbstraction(25.4) // 33.78
 * Source: Woodward, Hawkins, Jiang, Hjelmfelt, Van Mullem & Quan 2003, Runoff curve number method: examination of the initial abstraction ratio (recalled,
 * not re-read).
 */
export function retentionAtLowAbstraction(retention: number): number {
  return 25.4 * 1.33 * (retention / 25.4) ** 1.15;
}

/**
 * Surface runoff with the initial abstraction of 0.05 S. A comparison beside `surfaceRunoff`: more runs off of small rains, less of large ones.
 *
 *   RO = (P − 0.05 S05)² / (P + 0.95 S05) where P > 0.05 S05, else 0
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param precipitation P [mm d⁻¹]
 * @param retention S05 of `retentionAtLowAbstraction` [mm]
 * @returns [mm d⁻¹]
 * @example surfaceRunoffAtLowAbstraction(20, 100) // 1.957
 * Source: as `retentionAtLowAbstraction`.
 */
export function surfaceRunoffAtLowAbstraction(precipitation: number, retention: number): number {
  const beyond = precipitation - 0.05 * retention;
  if (beyond <= 0) return 0;
  return (beyond * beyond) / (precipitation + 0.95 * retention);
}

/** Curve number of the three antecedent conditions: dry (I), average (II), wet (III). */
export interface CurveNumbers {
  readonly dry: number;
  readonly average: number;
  readonly wet: number;
}

/**
 * Curve numbers of dry and wet ground from that of average ground.
 *
 *   CN I = CN / (2.281 − 0.01281 CN);   CN III = CN / (0.427 + 0.00573 CN)
 *
 * Missing: NaN gives NaN.
 *
 * @param curveNumber CN of antecedent condition II, 1 … 100
 * @example curveNumbers(80).wet // 90.4
 * Source: Hawkins, Hjelmfelt & Zevenbergen 1985, Journal of Irrigation and Drainage Engineering 111(4), fitted to the table of NEH 630 chapter 10 for CN
 * 55 … 95.
 */
export function curveNumbers(curveNumber: number): CurveNumbers {
  return {
    dry: curveNumber / (2.281 - 0.01281 * curveNumber),
    average: curveNumber,
    wet: curveNumber / (0.427 + 0.00573 * curveNumber),
  };
}

/** Rain of five days that parts the antecedent conditions [mm]: below the first dry, above the second wet. Source: NEH chapter 4 of 1964 (recalled). */
export const FIVE_DAY_LIMITS = {
  dormant: { dry: 12.7, wet: 27.9 },
  growing: { dry: 35.6, wet: 53.3 },
} as const;

/** Antecedent condition: 1 dry (I), 2 average (II), 3 wet (III). */
export type AntecedentCondition = 1 | 2 | 3;

/**
 * Antecedent condition from the rain of the five days before.
 *
 *   growing season: I below 35.6 mm, III above 53.3 mm; dormant: I below 12.7 mm, III above 27.9 mm; else II
 *
 * Missing: NaN counts as average.
 *
 * @param fiveDayRain rain and melt of the five days before [mm]
 * @param growing whether the growing season is on
 * @example antecedentCondition(20, true) // 1
 * Source: USDA-SCS, National Engineering Handbook section 4, Table 4.2 (recalled, not re-read). The handbook's later editions no longer print it.
 */
export function antecedentCondition(fiveDayRain: number, growing: boolean): AntecedentCondition {
  const limits = growing ? FIVE_DAY_LIMITS.growing : FIVE_DAY_LIMITS.dormant;
  if (fiveDayRain < limits.dry) return 1;
  return fiveDayRain > limits.wet ? 3 : 2;
}

/**
 * Curve number of a day from how dry the surface layer is.
 *
 *   CN III while De ≤ 0.5 REW, CN I from De = 0.7 REW + 0.3 TEW on, linear in De between
 *
 * With REW = TEW, where the two bounds would cross, the layer is dry from the wet bound on.
 * Missing: NaN in any input gives NaN out.
 *
 * @param numbers CN I, II and III of the ground
 * @param depletion De as the day began, before its rain [mm]
 * @param readily REW [mm]
 * @param total TEW [mm]
 * @returns CN of the day, CN I … CN III
 * @example curveNumberOfSurface({ dry: 60, average: 78, wet: 90 }, 7.8, 8, 20) // 75
 * Source: ASCE Manual of Practice 70, 2nd edition 2016, chapter on effective precipitation (recalled, not re-read).
 */
export function curveNumberOfSurface(numbers: CurveNumbers, depletion: number, readily: number, total: number): number {
  const wetTo = 0.5 * readily;
  const dryFrom = 0.7 * readily + 0.3 * total;
  if (depletion <= wetTo) return numbers.wet;
  if (depletion >= dryFrom) return numbers.dry;
  return numbers.wet + ((numbers.dry - numbers.wet) * (depletion - wetTo)) / (dryFrom - wetTo);
}
