/**
 * Reference ET from temperature alone: a check on the combination equation, and a last resort.
 */
import { EVAPORATED_DEPTH_PER_ENERGY } from '../base/constants.ts';

/**
 * Reference ET from the daily temperature range.
 *   ETo = 0.0023 (Tmean + 17.8) √(Tmax − Tmin) 0.408 Ra
 *
 * It reads low where wind is above 3 m s⁻¹ and high in humid air; it wants calibration against the combination equation.
 *
 * @param airTemperatureMax [°C]
 * @param airTemperatureMin [°C]
 * @param extraterrestrial Ra [MJ m⁻² d⁻¹]
 * @returns ETo [mm d⁻¹]; NaN in, or Tmax below Tmin, gives NaN out
 * @example hargreavesReferenceEt(26.6, 14.8, 40.555) // 5.03
 * Source: Hargreaves & Samani (1985), Applied Engineering in Agriculture 1(2), 96–99; FAO-56 Eq. 52.
 */
export function hargreavesReferenceEt(airTemperatureMax: number, airTemperatureMin: number, extraterrestrial: number): number {
  const mean = (airTemperatureMax + airTemperatureMin) / 2;
  return 0.0023 * (mean + 17.8) * Math.sqrt(airTemperatureMax - airTemperatureMin) * EVAPORATED_DEPTH_PER_ENERGY * extraterrestrial;
}
