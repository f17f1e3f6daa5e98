/**
 * Basal coefficients from the cover and height of a canopy: orchards, vineyards, wide rows, and whatever the tables do not list.
 *
 * Source of all: FAO-56 chapter 9 (recalled, numbers of the equations as remembered).
 */
import { BARE_SOIL_COEFFICIENT } from './cover.ts';

/** Kcb of a tall, dense, well-watered canopy is no higher than this in the standard climate (FAO-56 Eq. 100). */
const TALLEST_FULL = 1.2;

/** Cover of a mature orchard, taken for trees whose table value has no cover printed. Common practice, no source. */
export const MATURE_COVER = 0.7;

/**
 * Kcb of full cover by height, in the standard climate.
 *
 *   Kcb,h = 1.0 + 0.1 h, at most 1.20
 *
 * Missing: NaN gives NaN.
 *
 * @param height h [m]
 * @returns [1]
 * @example fullCoverBasal(1) // 1.1
 * Source: FAO-56 Eq. 100 (recalled).
 */
export function fullCoverBasal(height: number): number {
  return Math.min(TALLEST_FULL, 1 + 0.1 * height);
}

/**
 * Kcb of full cover in the climate of a stage.
 *
 *   Kcb full = Kcb,h + [0.04 (u2 − 2) − 0.004 (RHmin − 45)] (h/3)^0.3
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param height h [m]
 * @param climate `climateTerm` of the stage [1]
 * @returns [1]
 * @example fullCoverBasalInClimate(3, 0.1) // 1.3
 * Source: FAO-56 Eq. 99 (recalled).
 */
export function fullCoverBasalInClimate(height: number, climate: number): number {
  return fullCoverBasal(height) + climate * (height / 3) ** 0.3;
}

/**
 * Density coefficient: how near a canopy comes to full cover as the air sees it.
 *
 *   Kd = min(1, 2 fc, fc eff^(1 / (1 + h)))
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param covered fc, here also fc eff (ground covered or shaded at noon) [1]
 * @param height h [m]
 * @returns 0 … 1
 * @example densityCoefficient(0.36, 1) // 0.6
 * Source: FAO-56 Eq. 98 (recalled); Allen & Pereira (2009), Irrigation Science 28, 17–34, Eq. 10 (recalled).
 */
export function densityCoefficient(covered: number, height: number): number {
  return Math.min(1, 2 * covered, covered ** (1 / (1 + height)));
}

/**
 * Density coefficient from the leaf area index.
 *
 *   Kd = 1 − exp(−0.7 LAI)
 *
 * Missing: NaN gives NaN.
 *
 * @param leafAreaIndex LAI [m² m⁻²]
 * @returns 0 … 1
 * @example densityFromLeafArea(0) // 0
 * Source: FAO-56 Eq. 97 (recalled).
 */
export function densityFromLeafArea(leafAreaIndex: number): number {
  return 1 - Math.exp(-0.7 * leafAreaIndex);
}

/**
 * Fraction of ground shaded with the sun off the zenith.
 *
 *   fc eff = fc / sin η, at most 1
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param covered fc, seen from above [1]
 * @param sunElevation mean angle of the sun above the horizon around noon, η [rad]
 * @returns 0 … 1
 * @example effectiveCover(0.4, Math.PI / 2) // 0.4
 * Source: FAO-56 Eq. 101 (recalled).
 */
export function effectiveCover(covered: number, sunElevation: number): number {
  return Math.min(1, covered / Math.sin(sunElevation));
}

/**
 * Reduction of Kcb full by leaves that hold water back more than an annual crop does.
 *
 *   Fr = [Δ + γ (1 + 0.34 u2)] / [Δ + γ (1 + 0.34 u2 rl / 100)]
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param weather slope Δ and psychrometric constant γ [kPa °C⁻¹], u2 [m s⁻¹]
 * @param leafResistance rl [s m⁻¹]; 100 for most annual crops
 * @returns [1]
 * @example stomatalFactor({ slope: 0.2, psychrometric: 0.067, windSpeed2m: 2 }, 100) // 1
 * Source: FAO-56 Eq. 102 (recalled).
 */
export function stomatalFactor(
  { slope, psychrometric, windSpeed2m }: { readonly slope: number; readonly psychrometric: number; readonly windSpeed2m: number },
  leafResistance: number,
): number {
  const aerodynamic = 0.34 * windSpeed2m;
  return (slope + psychrometric * (1 + aerodynamic)) / (slope + psychrometric * (1 + (aerodynamic * leafResistance) / 100));
}

export interface CanopyShape {
  /** fc eff [1] */
  readonly cover: number;
  /** h [m] */
  readonly height: number;
  /** Kcb of the ground between the plants; left out: bare, Kc min */
  readonly groundBasal?: number;
  /** Fr; left out: 1 */
  readonly stomatalFactor?: number;
}

/**
 * Mid-season Kcb of a canopy.
 *
 *   Kcb mid = Kcb ground + Kd · max(Fr Kcb full − Kcb ground, (Fr Kcb full − Kcb ground) / 2)
 *
 * Over bare ground Kcb ground is Kc min and this is Eq. 98. The second member of the maximum holds where a green ground cover uses more water than the
 * trees would at full cover: shading it then saves only half of the difference.
 * Missing: NaN in any input gives NaN out.
 *
 * @param canopy cover, height, ground and stomatal control
 * @param climate `climateTerm` of the mid season; 0 in the standard climate
 * @returns [1]
 * @example canopyBasal({ cover: 0.36, height: 1 }, 0) // 0.72
 * Source: FAO-56 Eq. 98 and 99 (recalled); ground cover: Allen & Pereira (2009), Irrigation Science 28, 17–34, Eq. 5 and 6 (recalled).
 */
export function canopyBasal(canopy: CanopyShape, climate: number): number {
  const ground = canopy.groundBasal ?? BARE_SOIL_COEFFICIENT;
  const full = (canopy.stomatalFactor ?? 1) * fullCoverBasalInClimate(canopy.height, climate);
  return ground + densityCoefficient(canopy.cover, canopy.height) * Math.max(full - ground, (full - ground) / 2);
}

/**
 * The stomatal factor that makes a canopy of known cover reproduce the coefficient of the table.
 *
 *   Fr = [(Kcb mid − Kc min) / Kd + Kc min] / Kcb,h, at most 1
 *
 * For trees that the table lists for a mature orchard: a younger or wider one then falls below the table, never above it.
 * Missing: NaN in any input gives NaN out.
 *
 * @param basalMid Kcb mid of the table [1]
 * @param height h the table gives [m]
 * @param cover cover the table value stands for [1]
 * @returns [1]
 * @example fittedStomatalFactor(1.2, 3, 1) // 1
 * Source: Eq. 98 turned round; the cover of a mature orchard is common practice, no source.
 */
export function fittedStomatalFactor(basalMid: number, height: number, cover: number): number {
  const full = (basalMid - BARE_SOIL_COEFFICIENT) / densityCoefficient(cover, height) + BARE_SOIL_COEFFICIENT;
  return Math.min(1, full / fullCoverBasal(height));
}
