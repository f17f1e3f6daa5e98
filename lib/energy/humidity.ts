/**
 * Water vapour in the air: saturation, slope, and the actual vapour pressure from whatever a station reports.
 *
 * Vapour pressures [kPa], temperatures [°C], relative humidities [%] as stations report them. NaN in any input gives NaN out.
 */
import { VAPOUR_WEIGHT_RATIO } from '../base/constants.ts';
import { exponential } from '../base/exponential.ts';

/**
 * Saturation vapour pressure over water at a temperature.
 *   e°(T) = 0.6108 exp[17.27 T / (T + 237.3)]
 *
 * @example saturationVapourPressure(24.5) // 3.075
 * Source: FAO-56 Eq. 11.
 */
export function saturationVapourPressure(airTemperature: number): number {
  return 0.6108 * exponential((17.27 * airTemperature) / (airTemperature + 237.3));
}

/**
 * Mean saturation vapour pressure of a day: the mean of e° at the two extremes, not e° of the mean.
 *   es = [e°(Tmax) + e°(Tmin)] / 2
 *
 * @example meanSaturationVapourPressure(24.5, 15) // 2.39
 * Source: FAO-56 Eq. 12.
 */
export function meanSaturationVapourPressure(airTemperatureMax: number, airTemperatureMin: number): number {
  return (saturationVapourPressure(airTemperatureMax) + saturationVapourPressure(airTemperatureMin)) / 2;
}

/**
 * Slope of the saturation vapour pressure curve.
 *   Δ = 4098 e°(T) / (T + 237.3)²
 *
 * @returns Δ [kPa °C⁻¹]
 * @example vapourPressureSlope(30.2) // 0.246
 * Source: FAO-56 Eq. 13.
 */
export function vapourPressureSlope(airTemperature: number): number {
  const t = airTemperature + 237.3;
  return (4098 * saturationVapourPressure(airTemperature)) / (t * t);
}

/**
 * Actual vapour pressure from dew point.
 *   ea = e°(Tdew)
 *
 * @example actualVapourPressureFromDewPoint(12.07) // 1.409
 * Source: FAO-56 Eq. 14.
 */
export function actualVapourPressureFromDewPoint(dewPoint: number): number {
  return saturationVapourPressure(dewPoint);
}

/**
 * Dew point from actual vapour pressure: the exact inverse of `actualVapourPressureFromDewPoint`.
 *   Tdew = 237.3 x / (17.27 − x),  x = ln(ea / 0.6108)
 *
 * @returns Tdew [°C]; −∞ … for ea = 0 the limit −237.3
 * @example dewPointFromActualVapourPressure(1.409) // 12.07
 * Source: FAO-56 Eq. 11, solved for T.
 */
export function dewPointFromActualVapourPressure(actualVapourPressure: number): number {
  if (actualVapourPressure === 0) return -237.3;
  const x = Math.log(actualVapourPressure / 0.6108);
  return (237.3 * x) / (17.27 - x);
}

/**
 * Dew point from actual vapour pressure in the printed form with rounded coefficients; differs from the exact inverse by about 0.01 °C.
 *   Tdew = (116.91 + 237.3 ln ea) / (16.78 − ln ea)
 *
 * @example dewPointShortForm(1.409) // 12.063
 * Source: FAO-56 Annex 3 Eq. 3-11.
 */
export function dewPointShortForm(actualVapourPressure: number): number {
  const x = Math.log(actualVapourPressure);
  return (116.91 + 237.3 * x) / (16.78 - x);
}

/** Psychrometer coefficient apsy by ventilation [°C⁻¹]. Source: FAO-56 Eq. 16. */
export const PSYCHROMETER_COEFFICIENT = { ventilated: 0.000662, natural: 0.0008, indoor: 0.0012 } as const;

/**
 * Actual vapour pressure from a psychrometer.
 *   ea = e°(Twet) − apsy P (Tdry − Twet)
 *
 * @param dryBulb [°C]
 * @param wetBulb [°C]
 * @param pressure [kPa]
 * @param coefficient apsy, see `PSYCHROMETER_COEFFICIENT` [°C⁻¹]
 * @example actualVapourPressureFromPsychrometer(25.6, 19.5, 87.9, 0.000662) // 1.91
 * Source: FAO-56 Eq. 15, 16.
 */
export function actualVapourPressureFromPsychrometer(dryBulb: number, wetBulb: number, pressure: number, coefficient: number): number {
  return saturationVapourPressure(wetBulb) - coefficient * pressure * (dryBulb - wetBulb);
}

/**
 * Actual vapour pressure from both extremes of relative humidity.
 *   ea = [e°(Tmin) RHmax / 100 + e°(Tmax) RHmin / 100] / 2
 *
 * @example actualVapourPressureFromExtremes(25, 18, 82, 54) // 1.70
 * Source: FAO-56 Eq. 17.
 */
export function actualVapourPressureFromExtremes(
  airTemperatureMax: number,
  airTemperatureMin: number,
  relativeHumidityMax: number,
  relativeHumidityMin: number,
): number {
  const atNight = (saturationVapourPressure(airTemperatureMin) * relativeHumidityMax) / 100;
  const byDay = (saturationVapourPressure(airTemperatureMax) * relativeHumidityMin) / 100;
  return (atNight + byDay) / 2;
}

/**
 * Actual vapour pressure from maximum relative humidity, for when the minimum is doubtful.
 *   ea = e°(Tmin) RHmax / 100
 *
 * @example actualVapourPressureFromRhMax(18, 82) // 1.69
 * Source: FAO-56 Eq. 18.
 */
export function actualVapourPressureFromRhMax(airTemperatureMin: number, relativeHumidityMax: number): number {
  return (saturationVapourPressure(airTemperatureMin) * relativeHumidityMax) / 100;
}

/**
 * Actual vapour pressure from mean relative humidity, the least preferred of the humidity forms.
 *   ea = (RHmean / 100) [e°(Tmax) + e°(Tmin)] / 2
 *
 * @example actualVapourPressureFromRhMean(25, 18, 68) // 1.78
 * Source: FAO-56 Eq. 19.
 */
export function actualVapourPressureFromRhMean(airTemperatureMax: number, airTemperatureMin: number, relativeHumidityMean: number): number {
  return (relativeHumidityMean / 100) * meanSaturationVapourPressure(airTemperatureMax, airTemperatureMin);
}

/**
 * Actual vapour pressure from specific humidity.
 *   ea = q P / (0.622 + 0.378 q)
 *
 * @param specificHumidity q [kg kg⁻¹]
 * @param pressure [kPa]
 * @example actualVapourPressureFromSpecificHumidity(0.01, 101.3) // 1.619
 * Source: definition of specific humidity with ε = 0.622 (FAO-56 Eq. 8); WMO-No. 8, Guide to Instruments, Annex 4.B.
 */
export function actualVapourPressureFromSpecificHumidity(specificHumidity: number, pressure: number): number {
  return (specificHumidity * pressure) / (VAPOUR_WEIGHT_RATIO + (1 - VAPOUR_WEIGHT_RATIO) * specificHumidity);
}

/**
 * Specific humidity from actual vapour pressure; the inverse of `actualVapourPressureFromSpecificHumidity`.
 *   q = 0.622 ea / (P − 0.378 ea)
 *
 * @returns q [kg kg⁻¹]
 * Source: as its inverse.
 */
export function specificHumidityFromActualVapourPressure(actualVapourPressure: number, pressure: number): number {
  return (VAPOUR_WEIGHT_RATIO * actualVapourPressure) / (pressure - (1 - VAPOUR_WEIGHT_RATIO) * actualVapourPressure);
}

/**
 * Actual vapour pressure where no humidity was measured: the night is taken to cool to dew point.
 *   ea = e°(Tmin − reduction)
 *
 * @param airTemperatureMin [°C]
 * @param reduction 0 in humid and well watered surroundings, 2–3 °C at arid sites
 * @example actualVapourPressureFromMinimumTemperature(14.8, 0) // 1.68
 * Source: FAO-56 Eq. 48.
 */
export function actualVapourPressureFromMinimumTemperature(airTemperatureMin: number, reduction: number): number {
  return saturationVapourPressure(airTemperatureMin - reduction);
}

/**
 * Relative humidity of air at a temperature.
 *   RH = 100 ea / e°(T)
 *
 * @returns RH [%]
 * @example relativeHumidity(1.68, 26.6) // 48.2
 * Source: FAO-56 Eq. 10.
 */
export function relativeHumidity(actualVapourPressure: number, airTemperature: number): number {
  return (100 * actualVapourPressure) / saturationVapourPressure(airTemperature);
}
