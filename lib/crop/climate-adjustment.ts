/**
 * Adjustment of tabulated crop coefficients from the standard climate (u2 = 2 m s⁻¹, RHmin = 45 %) to the climate of a place.
 */

const WIND_LOW = 1;
const WIND_HIGH = 6;
const HUMIDITY_LOW = 20;
const HUMIDITY_HIGH = 80;
const HEIGHT_LOW = 0.1;
const HEIGHT_HIGH = 10;

/** An end-of-season coefficient below this is for a crop drying in the field and is not adjusted (FAO-56, text of Eq. 65 and 70). */
export const END_ADJUSTED_FROM = 0.45;

/**
 * Minimum relative humidity of a day from its vapour pressure and the saturation vapour pressure at the maximum temperature.
 *
 *   RHmin = 100 · ea / e0(Tmax), with ea standing for e0(Tdew)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param actualVapourPressure ea [kPa]
 * @param saturationAtMaximum e0(Tmax) [kPa]
 * @returns [%]
 * @example relativeHumidityMinimum(1, 2) // 50
 * Source: FAO-56 Eq. 63.
 */
export function relativeHumidityMinimum(actualVapourPressure: number, saturationAtMaximum: number): number {
  return (100 * actualVapourPressure) / saturationAtMaximum;
}

/**
 * The climate part of the adjustment: how far wind and dryness depart from the standard climate.
 *
 *   0.04 (u2 − 2) − 0.004 (RHmin − 45), u2 held in 1 … 6 m s⁻¹ and RHmin in 20 … 80 %
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param windSpeed2m u2 [m s⁻¹]
 * @param humidityMinimum RHmin [%]
 * @returns [1]
 * @example climateTerm(2, 45) // 0
 * Source: FAO-56 Eq. 62, 65, 70 and 72, and the limits stated with Eq. 62.
 */
export function climateTerm(windSpeed2m: number, humidityMinimum: number): number {
  const u = Math.min(WIND_HIGH, Math.max(WIND_LOW, windSpeed2m));
  const rh = Math.min(HUMIDITY_HIGH, Math.max(HUMIDITY_LOW, humidityMinimum));
  return 0.04 * (u - 2) - 0.004 * (rh - 45);
}

/**
 * The height part of the adjustment, (h/3)^0.3.
 *
 * Missing: NaN gives NaN.
 *
 * @param height mean plant height h [m]
 * @returns [1]
 * @example heightFactor(3) // 1
 * Source: FAO-56 Eq. 62, 65, 70 and 72.
 */
export function heightFactor(height: number): number {
  return (height / 3) ** 0.3;
}

/**
 * A tabulated crop coefficient adjusted to the climate of a stage.
 *
 *   Kc = Kc(table) + [0.04 (u2 − 2) − 0.004 (RHmin − 45)] (h/3)^0.3, h held in 0.1 … 10 m
 *
 * The same form serves Kc mid and end (Eq. 62, 65) and Kcb mid and end (Eq. 70). Missing: NaN wind or humidity gives the table value back,
 * because a stage outside the run has no climate to adjust to.
 *
 * @param table coefficient of the table [1]
 * @param windSpeed2m mean u2 of the stage [m s⁻¹]
 * @param humidityMinimum mean RHmin of the stage [%]
 * @param height mean plant height of the stage [m]
 * @returns adjusted coefficient, never below zero [1]
 * @example adjustedCoefficient(1.2, 2, 45, 2) // 1.2
 * Source: FAO-56 Eq. 62, 65 and 70.
 */
export function adjustedCoefficient(table: number, windSpeed2m: number, humidityMinimum: number, height: number): number {
  const term = climateTerm(windSpeed2m, humidityMinimum);
  if (Number.isNaN(term)) return table;
  return Math.max(0, table + term * heightFactor(Math.min(HEIGHT_HIGH, Math.max(HEIGHT_LOW, height))));
}

/**
 * Ratio of tall (alfalfa) to short (grass) reference ET, which turns a coefficient of one surface into that of the other.
 *
 *   K = 1.2 + [0.04 (u2 − 2) − 0.004 (RHmin − 45)] (h/3)^0.3 with h = 0.5 m
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param windSpeed2m u2 [m s⁻¹]
 * @param humidityMinimum RHmin [%]
 * @returns [1]
 * @example tallToShortRatio(2, 45) // 1.2
 * Source: FAO-56 Eq. 68.
 */
export function tallToShortRatio(windSpeed2m: number, humidityMinimum: number): number {
  return 1.2 + climateTerm(windSpeed2m, humidityMinimum) * heightFactor(0.5);
}
