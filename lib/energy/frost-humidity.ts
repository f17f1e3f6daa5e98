/**
 * Moisture of cold air: frost point, wet bulb, and the air temperature at which a wet surface stands at a chosen temperature.
 *
 * Temperatures [°C], vapour pressures and pressures [kPa]. NaN in any input gives NaN out.
 */
import { actualVapourPressureFromDewPoint, saturationVapourPressure } from './humidity.ts';

/** Standard atmosphere, at which the printed tables of start and stop temperatures hold [kPa]. */
export const STANDARD_PRESSURE = 101.3;

/**
 * Saturation vapour pressure over ice.
 *   ei(T) = 0.6108 exp[21.875 T / (T + 265.5)]
 *
 * @returns ei [kPa]
 * @example saturationVapourPressureOverIce(-10) // 0.2595
 * Source: Murray (1967), Journal of Applied Meteorology 6, 203–204 (recalled): Tetens' form for ice.
 */
export function saturationVapourPressureOverIce(airTemperature: number): number {
  return 0.6108 * Math.exp((21.875 * airTemperature) / (airTemperature + 265.5));
}

/**
 * Temperature at which cooling air reaches saturation: its dew point, or, below 0 °C, its frost point, which lies a little higher.
 *   Tf = 265.5 x / (21.875 − x),  x = ln(ea / 0.6108)
 *
 * @param dewPoint over water [°C]
 * @returns dew point from 0 °C up, frost point below [°C]
 * @example saturationPoint(-10) // -8.91
 * Source: Murray (1967) (recalled), solved for T.
 */
export function saturationPoint(dewPoint: number): number {
  if (!(dewPoint < 0)) return dewPoint;
  const x = Math.log(actualVapourPressureFromDewPoint(dewPoint) / 0.6108);
  return (265.5 * x) / (21.875 - x);
}

/**
 * Psychrometric slope of a ventilated wet bulb.
 *   γw = 0.000660 (1 + 0.00115 Tw) P
 *
 * @param wetBulb Tw [°C]
 * @param pressure P [kPa]
 * @returns γw [kPa °C⁻¹]
 * @example wetBulbSlope(0, 101.3) // 0.06686
 * Source: Fritschen & Gay (1979), Environmental Instrumentation, as used in Snyder & de Melo-Abreu (2005), Frost Protection, FAO (recalled).
 */
export function wetBulbSlope(wetBulb: number, pressure: number): number {
  return 0.00066 * (1 + 0.00115 * wetBulb) * pressure;
}

/**
 * Air temperature at which a wet surface has a chosen wet-bulb temperature: where sprinkling may start and stop.
 *   T = Tw + [e°(Tw) − e°(Td)] / γw
 *
 * @param wetBulb wanted temperature of the wet surface: the melting point 0 °C, or the critical temperature of the plant
 * @param dewPoint Td [°C]
 * @returns T [°C]; NaN when the dew point is above the wet bulb, which cannot be
 * @example airTemperatureOfWetBulb(0, -4, 101.3) // 2.3
 * Source: psychrometer equation, FAO-56 Eq. 15, solved for T; slope as `wetBulbSlope`.
 */
export function airTemperatureOfWetBulb(wetBulb: number, dewPoint: number, pressure: number): number {
  if (dewPoint > wetBulb) return Number.NaN;
  const deficit = saturationVapourPressure(wetBulb) - actualVapourPressureFromDewPoint(dewPoint);
  return wetBulb + deficit / wetBulbSlope(wetBulb, pressure);
}

/**
 * Wet-bulb temperature of air, by halving the interval between dew point and air temperature.
 *
 * @returns Tw [°C], to 10⁻⁶ °C; the air temperature itself where the dew point is not below it
 * @example wetBulbTemperature(2.3, -4, 101.3) // 0
 * Source: psychrometer equation, FAO-56 Eq. 15; the inverse of `airTemperatureOfWetBulb`.
 */
export function wetBulbTemperature(airTemperature: number, dewPoint: number, pressure: number): number {
  if (Number.isNaN(airTemperature + dewPoint + pressure)) return Number.NaN;
  let [low, high] = [Math.min(dewPoint, airTemperature), airTemperature];
  while (high - low > 1e-6) {
    const middle = (low + high) / 2;
    if (airTemperatureOfWetBulb(middle, dewPoint, pressure) < airTemperature) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
