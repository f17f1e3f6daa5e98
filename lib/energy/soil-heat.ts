/**
 * Soil heat flux G: energy that goes into warming the ground instead of evaporating water.
 */
import { SOIL_HEAT_CAPACITY } from '../base/constants.ts';

/**
 * Soil heat flux of a period from the change in the temperature of a soil layer.
 *   G = cs (Ti − Ti−1) Δz / Δt
 *
 * @param temperatureChange of the air, taken to be that of the soil [°C]
 * @param duration [d]
 * @param depth effective soil depth: 0.10–0.20 m for a day or two, up to 2 m for a month [m]
 * @returns G [MJ m⁻² d⁻¹]
 * @example soilHeatFlux(1, 1, 0.1) // 0.21
 * Source: FAO-56 Eq. 41.
 */
export function soilHeatFlux(temperatureChange: number, duration: number, depth: number): number {
  return ((SOIL_HEAT_CAPACITY * temperatureChange) / duration) * depth;
}

/** Soil heat flux under the reference surface over one to ten days [MJ m⁻² d⁻¹]: small against Rn and left out. Source: FAO-56 Eq. 42. */
export const SOIL_HEAT_FLUX_DAY = 0;

/**
 * Soil heat flux of a month between two known months.
 *   G = 0.07 (Ti+1 − Ti−1)
 *
 * @param previous mean air temperature of the month before [°C]
 * @param next mean air temperature of the month after [°C]
 * @returns G [MJ m⁻² d⁻¹]
 * @example soilHeatFluxMonth(14.1, 18.8) // 0.33
 * Source: FAO-56 Eq. 43.
 */
export function soilHeatFluxMonth(previous: number, next: number): number {
  return 0.07 * (next - previous);
}

/**
 * Soil heat flux of a month whose successor is not known.
 *   G = 0.14 (Ti − Ti−1)
 *
 * @returns G [MJ m⁻² d⁻¹]
 * @example soilHeatFluxMonthFromPrevious(29.2, 30.2) // 0.14
 * Source: FAO-56 Eq. 44.
 */
export function soilHeatFluxMonthFromPrevious(previous: number, current: number): number {
  return 0.14 * (current - previous);
}

/** Share of Rn that enters the soil within an hour, by day and by night. */
export interface SoilHeatShare {
  readonly day: number;
  readonly night: number;
}

/** Grass, 0.12 m. Source: FAO-56 Eq. 45, 46; the same in ASCE 2005 for the short surface. */
export const SOIL_HEAT_SHARE_SHORT: SoilHeatShare = { day: 0.1, night: 0.5 };
/** Alfalfa, 0.50 m. Source: ASCE 2005 Eq. 66 (recalled, not re-read). */
export const SOIL_HEAT_SHARE_TALL: SoilHeatShare = { day: 0.04, night: 0.2 };

/**
 * Soil heat flux of an hour. Day is when net radiation is positive.
 *
 * @param netRadiation [MJ m⁻² h⁻¹]
 * @returns G [MJ m⁻² h⁻¹]; NaN in gives NaN out
 * @example soilHeatFluxHour(1.749, SOIL_HEAT_SHARE_SHORT) // 0.175
 * Source: FAO-56 Eq. 45, 46; the sign of Rn as the border of day and night from ASCE 2005 (recalled, not re-read).
 */
export function soilHeatFluxHour(netRadiation: number, share: SoilHeatShare): number {
  return (netRadiation > 0 ? share.day : share.night) * netRadiation;
}
