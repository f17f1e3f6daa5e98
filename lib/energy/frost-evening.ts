/**
 * The evening before a frost night, estimated where a station has daily values only; and when the night begins and ends.
 */

import { daylightHours, sunDay } from './sun.ts';
import { solarNoon } from './sun-clock.ts';

/** Day and lag of the course of air temperature [h]. Source: Parton & Logan (1981), Table 1, air at 1.5 m (recalled). */
const [LAG_OF_MAXIMUM, LAG_OF_MINIMUM] = [1.86, -0.17];
/** Wind by day over wind by night where only the day's mean is known. Source: FAO Irrigation and Drainage Paper 24 (1977), usual ratio (recalled). */
export const DAY_TO_NIGHT_WIND = 2;

/**
 * Share of the day's range of temperature that is left at sunset, on the sine course of the day.
 *   s = sin[π (N − c) / (N + 2a)],  a = 1.86 h, c = −0.17 h
 *
 * @param daylight N [h]
 * @returns s [1]
 * @example sunsetShareOfRange(12) // 0.6514
 * Source: Parton & Logan (1981), Agricultural Meteorology 23, 205–216 (recalled).
 */
export function sunsetShareOfRange(daylight: number): number {
  return Math.sin((Math.PI * (daylight - LAG_OF_MINIMUM)) / (daylight + 2 * LAG_OF_MAXIMUM));
}

/**
 * Air temperature at sunset from the extremes of the day.
 *   T0 = Tmin + s (Tmax − Tmin)
 *
 * @returns T0 [°C]
 * @example sunsetTemperature(18, 2, 12) // 12.42
 * Source: Parton & Logan (1981), Agricultural Meteorology 23, 205–216 (recalled).
 */
export function sunsetTemperature(airTemperatureMax: number, airTemperatureMin: number, daylight: number): number {
  return airTemperatureMin + sunsetShareOfRange(daylight) * (airTemperatureMax - airTemperatureMin);
}

/**
 * Wind of the night from the mean of the day.
 *   un = 2 u / (r + 1),  r = 2
 *
 * @param windSpeed2m mean of the day u [m s⁻¹]
 * @returns un [m s⁻¹]
 * @example nightWind(3) // 2
 * Source: FAO Irrigation and Drainage Paper 24 (1977) (recalled): twelve hours each, by day r times the night.
 */
export function nightWind(windSpeed2m: number): number {
  return (2 * windSpeed2m) / (DAY_TO_NIGHT_WIND + 1);
}

/** A place and its clock. */
export interface NightPlace {
  /** degrees, north positive */
  readonly latitude: number;
  /** degrees, east positive */
  readonly longitude: number;
  /** standard time [h east of UTC] */
  readonly zoneHours: number;
}

/** The night that follows a day; clock hours are standard time. */
export interface NightTimes {
  /** [h] */
  readonly daylight: number;
  /** [h of the day] */
  readonly sunset: number;
  /** [h of the day after] */
  readonly sunrise: number;
  /** sunset to sunrise [h] */
  readonly nightLength: number;
}

/**
 * Sunset, the next sunrise and the time between. The day after is taken as long as the day.
 *   sunset = noon + N/2,  sunrise = noon − N/2,  h = 24 − N
 *
 * @param dayOfYear 1–366
 * @example nightTimes({ latitude: 0, longitude: 0, zoneHours: 0 }, 81).nightLength // 12
 * Source: FAO-56 Eq. 25, 31, 34.
 */
export function nightTimes({ latitude, longitude, zoneHours }: NightPlace, dayOfYear: number): NightTimes {
  const daylight = daylightHours(sunDay(latitude, dayOfYear).sunsetAngle);
  const noon = solarNoon(dayOfYear, longitude, zoneHours);
  return { daylight, sunset: noon + daylight / 2, sunrise: noon - daylight / 2, nightLength: 24 - daylight };
}

/** Clock of an hour of the day. @example clockOf(18.26) // '18:16' */
export function clockOf(hour: number): string {
  const minutes = (((Math.round(hour * 60) % 1440) + 1440) % 1440) as number;
  return `${String(Math.floor(minutes / 60)).padStart(2, '0')}:${String(minutes % 60).padStart(2, '0')}`;
}
