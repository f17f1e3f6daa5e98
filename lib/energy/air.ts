/**
 * The air as a body: pressure, density and the psychrometric constant.
 */
import { PSYCHROMETRIC_RATIO } from '../base/constants.ts';

/**
 * Atmospheric pressure from elevation, for a standard atmosphere at 20 °C.
 *   P = 101.3 ((293 − 0.0065 z) / 293)^5.26
 *
 * @param elevation above sea level [m]
 * @returns P [kPa]; NaN in gives NaN out
 * @example atmosphericPressure(1800) // 81.8
 * Source: FAO-56 Eq. 7.
 */
export function atmosphericPressure(elevation: number): number {
  return 101.3 * ((293 - 0.0065 * elevation) / 293) ** 5.26;
}

/**
 * Elevation at which the standard atmosphere has a given pressure; the inverse of `atmosphericPressure`.
 *
 * @param pressure [kPa]
 * @returns z [m]
 * @example elevationFromPressure(101.3) // 0
 * Source: FAO-56 Eq. 7, solved for z.
 */
export function elevationFromPressure(pressure: number): number {
  return (293 * (1 - (pressure / 101.3) ** (1 / 5.26))) / 0.0065;
}

/**
 * Psychrometric constant.
 *   γ = cp P / (ε λ) = 0.665 × 10⁻³ P
 *
 * @param pressure [kPa]
 * @returns γ [kPa °C⁻¹]; NaN in gives NaN out
 * @example psychrometricConstant(81.8) // 0.054
 * Source: FAO-56 Eq. 8.
 */
export function psychrometricConstant(pressure: number): number {
  return PSYCHROMETRIC_RATIO * pressure;
}

/**
 * Latent heat of vaporisation at a temperature. The reference equations take 2.45 MJ kg⁻¹ throughout.
 *   λ = 2.501 − 2.361 × 10⁻³ T
 *
 * @param airTemperature [°C]
 * @returns λ [MJ kg⁻¹]
 * @example latentHeatOfVaporisation(20) // 2.4538
 * Source: FAO-56 Annex 3 Eq. 3-1.
 */
export function latentHeatOfVaporisation(airTemperature: number): number {
  return 2.501 - 2.361e-3 * airTemperature;
}

/**
 * Virtual temperature: the temperature dry air would need to be as light as the moist air.
 *   TKv = TK / (1 − 0.378 ea / P)
 *
 * @param absoluteTemperature [K]
 * @param actualVapourPressure [kPa]
 * @param pressure [kPa]
 * @returns TKv [K]
 * Source: FAO-56 Annex 3 Eq. 3-6.
 */
export function virtualTemperature(absoluteTemperature: number, actualVapourPressure: number, pressure: number): number {
  return absoluteTemperature / (1 - (0.378 * actualVapourPressure) / pressure);
}

/**
 * Virtual temperature of average moist air, when vapour pressure is not at hand.
 *   TKv ≈ 1.01 (T + 273)
 *
 * @example virtualTemperatureShort(20) // 295.93
 * Source: FAO-56 Annex 3 Eq. 3-7.
 */
export function virtualTemperatureShort(airTemperature: number): number {
  return 1.01 * (airTemperature + 273);
}

/**
 * Density of the air.
 *   ρ = 3.486 P / TKv
 *
 * @param pressure [kPa]
 * @param virtual virtual temperature [K]
 * @returns ρ [kg m⁻³]
 * @example airDensity(101.3, 294.81) // 1.198
 * Source: FAO-56 Annex 3 Eq. 3-5.
 */
export function airDensity(pressure: number, virtual: number): number {
  return (3.486 * pressure) / virtual;
}
