/** Weather of a place moved to another height. */
import type { CompletedWeather } from '../weather/variable.ts';
import { meanSaturationVapourPressure } from './humidity.ts';

/**
 * Moves the temperatures of one site-day up or down by a lapse rate, in place, and holds the vapour pressure at saturation, es = [e°(Tmax) + e°(Tmin)] / 2.
 *
 *   T = T − Γ Δz
 *
 * Missing: NaN temperatures stay so, and the vapour pressure is then left alone.
 *
 * @param at index of the site-day
 * @param rise height of the new place above the old one [m]
 * @param lapseRate Γ [°C m⁻¹]
 * Source: es by FAO-56 Eq. 12; Γ as given (0.0065 °C m⁻¹ in the ICAO standard atmosphere).
 */
export function moveSiteDay(weather: CompletedWeather, at: number, rise: number, lapseRate: number): void {
  weather.airTemperatureMax[at] -= lapseRate * rise;
  weather.airTemperatureMin[at] -= lapseRate * rise;
  holdAtSaturation(weather, at);
}

/** Holds the vapour pressure of a site-day at saturation. A mean of moist days can lie above the saturation of their mean temperature. */
export function holdAtSaturation(weather: CompletedWeather, at: number): void {
  const saturation = meanSaturationVapourPressure(weather.airTemperatureMax[at], weather.airTemperatureMin[at]);
  if (weather.actualVapourPressure[at] > saturation) weather.actualVapourPressure[at] = saturation;
}
