/**
 * Short-wave and long-wave radiation at the surface. All fluxes [MJ m⁻² d⁻¹] unless stated; NaN in any input gives NaN out.
 */
import { LONGWAVE_KELVIN_OFFSET, REFERENCE_ALBEDO } from '../base/constants.ts';

/** Ångström coefficients where none were calibrated locally. Source: FAO-56 Eq. 35. */
export const ANGSTROM = { overcast: 0.25, sunshine: 0.5 } as const;

/** kRs of the temperature-range estimate [°C⁻⁰·⁵]. Source: FAO-56 Eq. 50. */
export const RADIATION_COEFFICIENT = { interior: 0.16, coastal: 0.19 } as const;

/**
 * Relative short-wave radiation where there is no clear-sky radiation to compare with (polar night): mid of the 0.7–0.8 that FAO-56 gives
 * for the nights of arid and semi-arid places. Source: FAO-56, hourly time steps.
 */
export const RELATIVE_SHORTWAVE_WITHOUT_SUN = 0.75;

/**
 * Solar radiation from hours of sunshine.
 *   Rs = (as + bs n / N) Ra
 *
 * @param sunshine n [h]; above N it counts as N
 * @param daylight N [h]; 0 in polar night, which gives 0
 * @param extraterrestrial Ra
 * @example solarRadiationFromSunshine(7.1, 10.9, 25.1) // 14.45
 * Source: FAO-56 Eq. 35, as = 0.25, bs = 0.50.
 */
export function solarRadiationFromSunshine(sunshine: number, daylight: number, extraterrestrial: number): number {
  const share = daylight <= 0 ? 0 * sunshine : Math.min(1, sunshine / daylight);
  return (ANGSTROM.overcast + ANGSTROM.sunshine * share) * extraterrestrial;
}

/**
 * Clear-sky solar radiation from elevation.
 *   Rso = (0.75 + 2 × 10⁻⁵ z) Ra
 *
 * @param extraterrestrial Ra
 * @param elevation z [m]
 * @example clearSkyRadiation(41.09, 100) // 30.9
 * Source: FAO-56 Eq. 37; ASCE 2005 Eq. 19 (recalled, not re-read).
 */
export function clearSkyRadiation(extraterrestrial: number, elevation: number): number {
  return (0.75 + 2e-5 * elevation) * extraterrestrial;
}

/**
 * Solar radiation from the daily range of temperature, not yet held at the clear-sky value.
 *   Rs = kRs √(Tmax − Tmin) Ra
 *
 * @param coefficient kRs, see `RADIATION_COEFFICIENT`
 * @returns Rs; NaN when Tmax is below Tmin
 * @example solarRadiationFromTemperatureRange(26.6, 14.8, 40.55, 0.16) // 22.29
 * Source: FAO-56 Eq. 50.
 */
export function solarRadiationFromTemperatureRange(
  airTemperatureMax: number,
  airTemperatureMin: number,
  extraterrestrial: number,
  coefficient: number,
): number {
  return coefficient * Math.sqrt(airTemperatureMax - airTemperatureMin) * extraterrestrial;
}

/**
 * Lesser of an estimated radiation and the clear-sky value.
 *
 * @example cappedAtClearSky(31, 30) // 30
 * Source: FAO-56, text to Eq. 50.
 */
export function cappedAtClearSky(solarRadiation: number, clearSky: number): number {
  return Math.min(solarRadiation, clearSky);
}

/**
 * Net short-wave radiation of the reference surface.
 *   Rns = (1 − 0.23) Rs
 *
 * @example netShortwave(22.07) // 17
 * Source: FAO-56 Eq. 38.
 */
export function netShortwave(solarRadiation: number): number {
  return (1 - REFERENCE_ALBEDO) * solarRadiation;
}

/**
 * Radiation of a black body at air temperature.
 *   σ TK⁴,  TK = T + 273.16
 *
 * @param airTemperature [°C]
 * @param stefanBoltzmann σ per period, see base/constants
 * @example blackBodyRadiation(25, 4.903e-9) // 38.75
 * Source: FAO-56 Eq. 39 and Annex 2 Table 2.8.
 */
export function blackBodyRadiation(airTemperature: number, stefanBoltzmann: number): number {
  const kelvin = airTemperature + LONGWAVE_KELVIN_OFFSET;
  const square = kelvin * kelvin;
  return stefanBoltzmann * square * square;
}

/**
 * Relative short-wave radiation, a measure of cloud, held between `lowest` and 1.
 *   Rs / Rso
 *
 * @param lowest 0 for FAO-56, 0.3 for ASCE 2005
 * @returns ratio [1]; `RELATIVE_SHORTWAVE_WITHOUT_SUN` where Rso is 0
 * @example relativeShortwave(22.07, 30.9, 0) // 0.714
 * Source: FAO-56 Eq. 39 (at most 1); ASCE 2005 Eq. 18 (0.3 … 1; recalled, not re-read).
 */
export function relativeShortwave(solarRadiation: number, clearSky: number, lowest: number): number {
  if (clearSky <= 0) return RELATIVE_SHORTWAVE_WITHOUT_SUN;
  const ratio = solarRadiation / clearSky;
  if (ratio > 1) return 1;
  return Math.max(ratio, lowest);
}

/**
 * Cloud factor of net long-wave radiation.
 *   fcd = 1.35 Rs/Rso − 0.35
 *
 * @example cloudFactor(1) // 1
 * Source: FAO-56 Eq. 39; ASCE 2005 Eq. 18 (recalled, not re-read).
 */
export function cloudFactor(relative: number): number {
  return 1.35 * relative - 0.35;
}

/**
 * Humidity factor of net long-wave radiation: how little the air's own radiation gives back.
 *   0.34 − 0.14 √ea
 *
 * @param actualVapourPressure [kPa]
 * @example humidityFactor(2.1) // 0.137
 * Source: FAO-56 Eq. 39.
 */
export function humidityFactor(actualVapourPressure: number): number {
  return 0.34 - 0.14 * Math.sqrt(actualVapourPressure);
}

/**
 * Net outgoing long-wave radiation.
 *   Rnl = σT⁴ (0.34 − 0.14 √ea) (1.35 Rs/Rso − 0.35)
 *
 * @param blackBody σT⁴ of the period: for a day the mean of σTmax⁴ and σTmin⁴
 * @param actualVapourPressure [kPa]
 * @param relative Rs/Rso, from `relativeShortwave`
 * @example netLongwave(34.76, 1.409, 0.7143) // 3.71
 * Source: FAO-56 Eq. 39.
 */
export function netLongwave(blackBody: number, actualVapourPressure: number, relative: number): number {
  return blackBody * humidityFactor(actualVapourPressure) * cloudFactor(relative);
}
