/**
 * Clear-sky radiation where turbidity and water vapour matter. The daily reference ET uses the elevation form in radiation.ts; these check
 * a pyranometer.
 */
import { radiansFromDegrees } from './sun.ts';

/**
 * Sine of the sun's mean elevation over a day, weighted by radiation.
 *   sin φ24 = sin[0.85 + 0.3 φ sin(2πJ/365 − 1.39) − 0.42 φ²]
 *
 * @param latitude [degrees]
 * @example meanSunElevationSine(50.8, 187) // 0.7011
 * Source: FAO-56 Annex 3 Eq. 3-16.
 */
export function meanSunElevationSine(latitude: number, dayOfYear: number): number {
  const phi = radiansFromDegrees(latitude);
  return Math.max(0, Math.sin(0.85 + 0.3 * phi * Math.sin(((2 * Math.PI) / 365) * dayOfYear - 1.39) - 0.42 * phi * phi));
}

/**
 * Share of extraterrestrial radiation that reaches the ground under a clear sky, from turbidity alone.
 *   Rso / Ra = exp(−0.0018 P / (Kt sin φ))
 *
 * @param pressure [kPa]
 * @param sine of the sun's elevation
 * @param turbidity Kt, 1.0 for clean air
 * @example clearSkyShareByTurbidity(100.12, 0.7011, 1) // 0.773
 * Source: FAO-56 Annex 3 Eq. 3-14.
 */
export function clearSkyShareByTurbidity(pressure: number, sine: number, turbidity: number): number {
  return Math.exp((-0.0018 * pressure) / (turbidity * sine));
}

/** Coefficients of the beam and diffuse shares; the two publications use different exponents, which must not be mixed (5 % of Rso). */
interface BeamCoefficients {
  readonly vapour: number;
  readonly exponent: number;
  readonly diffuse: number;
}

/** Source: FAO-56 Annex 3 Eq. 3-18, 3-20. */
export const BEAM_FAO56: BeamCoefficients = { vapour: 0.091, exponent: 0.25, diffuse: 0.33 };
/** Source: ASCE 2005 Appendix D (recalled, not re-read). */
export const BEAM_ASCE2005: BeamCoefficients = { vapour: 0.075, exponent: 0.4, diffuse: 0.36 };

/**
 * Precipitable water of the column.
 *   W = 0.14 ea P + 2.1
 *
 * @returns W [mm]
 * @example precipitableWater(1.409, 100.12) // 21.85
 * Source: FAO-56 Annex 3 Eq. 3-19.
 */
export function precipitableWater(actualVapourPressure: number, pressure: number): number {
  return 0.14 * actualVapourPressure * pressure + 2.1;
}

/** The air above a pyranometer. */
interface ClearAir {
  readonly pressure: number;
  readonly actualVapourPressure: number;
  readonly sine: number;
  readonly turbidity: number;
}

/**
 * Share of the beam that reaches the ground under a clear sky.
 *   KB = 0.98 exp[−0.00146 P/(Kt sin φ) − a (W/sin φ)^b]
 *
 * @returns KB [1]; 0 with the sun on or below the horizon
 * Source: as the coefficients.
 */
export function beamShare(air: ClearAir, coefficients: BeamCoefficients): number {
  if (air.sine <= 0) return 0;
  const water = precipitableWater(air.actualVapourPressure, air.pressure) / air.sine;
  const mass = (0.00146 * air.pressure) / (air.turbidity * air.sine);
  return 0.98 * Math.exp(-mass - coefficients.vapour * water ** coefficients.exponent);
}

/**
 * Share that reaches the ground as diffuse light under a clear sky.
 *   KD = 0.35 − c KB for KB ≥ 0.15, else 0.18 + 0.82 KB
 *
 * Source: as the coefficients.
 */
export function diffuseShare(beam: number, coefficients: BeamCoefficients): number {
  return beam >= 0.15 ? 0.35 - coefficients.diffuse * beam : 0.18 + 0.82 * beam;
}
