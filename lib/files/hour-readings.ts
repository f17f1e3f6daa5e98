/**
 * Humidity and temperature read at fixed hours → the vapour pressure of the day.
 */
import { meanSaturationVapourPressure, saturationVapourPressure } from '../energy/humidity.ts';

export interface HourReading {
  /** °C */
  readonly airTemperature: number;
  /** % */
  readonly relativeHumidity: number;
}

/**
 * Actual vapour pressure of a day from readings at several hours: the mean over the hours of RH/100 · e°(T).
 *
 *   ea = 1/n Σ e°(Thr) · RHhr / 100
 *
 * Missing: an hour with NaN is left out; NaN when none is complete.
 *
 * @param readings one per hour [°C, %]
 * @returns actual vapour pressure [kPa]
 * @example vapourPressureFromHours([{ airTemperature: 20, relativeHumidity: 50 }]) // 1.169
 * Source: FAO-56 (1998) Eq. 54 (ea of an hour from e°(Thr) and RHhr), averaged over the hours read.
 */
export function vapourPressureFromHours(readings: readonly HourReading[]): number {
  let sum = 0;
  let count = 0;
  for (const { airTemperature, relativeHumidity } of readings) {
    const pressure = (saturationVapourPressure(airTemperature) * relativeHumidity) / 100;
    if (!Number.isFinite(pressure)) continue;
    sum += pressure;
    count++;
  }
  return count > 0 ? sum / count : Number.NaN;
}

/**
 * Actual vapour pressure of a day from its mean vapour pressure deficit.
 *
 *   ea = es − VPD, es = (e°(Tmax) + e°(Tmin)) / 2, or e°(Tmean) when the day has only a mean temperature
 *
 * Missing: NaN without a temperature. A deficit above saturation gives 0.
 *
 * @param deficit [kPa]
 * @param temperature max, min and mean of the day [°C], NaN where unknown
 * @returns actual vapour pressure [kPa]
 * Source: FAO-56 (1998) Eq. 11 and 12; the definition of the deficit.
 */
export function vapourPressureFromDeficit(deficit: number, temperature: { max: number; min: number; mean: number }): number {
  const both = meanSaturationVapourPressure(temperature.max, temperature.min);
  const saturation = Number.isFinite(both) ? both : saturationVapourPressure(temperature.mean);
  return Math.max(0, saturation - deficit);
}
