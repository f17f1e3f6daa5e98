/** Reference ET of a site from its record as it stands: what a check or a correction is weighed by. */
import { seriesOf } from '../weather/quality/flag.ts';
import type { SiteObservations } from '../weather/variable.ts';
import { saturationVapourPressure } from './humidity.ts';
import { observedVapourPressure, type SiteSky } from './quality-sky.ts';
import { cappedAtClearSky, clearSkyRadiation, solarRadiationFromSunshine, solarRadiationFromTemperatureRange } from './radiation.ts';
import { referenceEtDays } from './reference-day.ts';
import { LOWEST_WIND_HEIGHT, windProfileFactor } from './wind.ts';

/** Wind where there is no record [m s⁻¹], height of an anemometer that does not state it [m]. Source: FAO-56 chapter 3; WMO-No. 8. */
const WIND_WITHOUT_RECORD = 2;
const STANDARD_HEIGHT = 10;

/** Vapour pressure to compute with: as observed, or that of saturation at the minimum temperature. */
export type HumidityTaken = 'observed' | 'saturated-at-minimum';

/**
 * Reference ET (FAO-56, short surface) on every day that has both extremes of temperature; radiation and wind from the best the site
 * reports, by the published estimates where it reports none. Nothing is carried over from other days or sites.
 *
 * @param radiationCoefficient kRs [°C⁻⁰·⁵]
 * @returns [day] mm d⁻¹; NaN without temperature
 * Source: FAO-56 Eq. 6, 35, 47, 48, 50.
 */
export function siteReferenceEt(
  observations: SiteObservations,
  sky: SiteSky,
  radiationCoefficient: number,
  humidity: HumidityTaken = 'observed',
): Float64Array {
  const of = (variable: Parameters<typeof seriesOf>[1]) => seriesOf(observations, variable, sky.site);
  const [airTemperatureMax, airTemperatureMin] = [of('air_temperature_max_c'), of('air_temperature_min_c')];
  const out = new Float64Array(observations.dayCount).fill(Number.NaN);
  if (!airTemperatureMax || !airTemperatureMin) return out;
  const vapour = humidity === 'observed' ? observedVapourPressure(observations, sky.site, sky.elevation) : out.slice();
  for (let day = 0; day < vapour.length; day++) {
    if (Number.isNaN(vapour[day])) vapour[day] = saturationVapourPressure(airTemperatureMin[day]);
  }
  const { dayOfYear, elevation, sun } = sky;
  const solarRadiation = radiationTaken(observations, sky, radiationCoefficient);
  const windSpeed2m = windTaken(observations, sky.site);
  const days = { dayOfYear, airTemperatureMax, airTemperatureMin, actualVapourPressure: vapour, solarRadiation, windSpeed2m };
  return referenceEtDays({ method: 'fao56', surface: 'short', sun, elevation, ...days }, out);
}

/** Rs as measured, else from sunshine, else from the range of temperature, held at the clear-sky value. */
function radiationTaken(observations: SiteObservations, sky: SiteSky, coefficient: number): Float64Array {
  const of = (variable: Parameters<typeof seriesOf>[1]) => seriesOf(observations, variable, sky.site);
  const [measured, sunshine] = [of('solar_radiation_mj_m2_d'), of('sunshine_duration_h')];
  const [max, min] = [of('air_temperature_max_c'), of('air_temperature_min_c')];
  const taken = measured?.slice() ?? new Float64Array(observations.dayCount).fill(Number.NaN);
  for (let day = 0; day < taken.length; day++) {
    const top = sky.extraterrestrial[day];
    if (Number.isNaN(taken[day]) && sunshine) taken[day] = solarRadiationFromSunshine(sunshine[day], sky.daylight[day], top);
    if (!Number.isNaN(taken[day]) || !max || !min) continue;
    const estimate = solarRadiationFromTemperatureRange(max[day], min[day], top, coefficient);
    taken[day] = cappedAtClearSky(estimate, clearSkyRadiation(top, sky.elevation));
  }
  return taken;
}

function windTaken(observations: SiteObservations, site: number): Float64Array {
  const { windHeight } = observations.sites[site];
  const factor = windProfileFactor(windHeight >= LOWEST_WIND_HEIGHT ? windHeight : STANDARD_HEIGHT);
  const wind = seriesOf(observations, 'wind_speed_m_s', site);
  return Float64Array.from({ length: observations.dayCount }, (_, day) =>
    wind && !Number.isNaN(wind[day]) ? wind[day] * factor : WIND_WITHOUT_RECORD,
  );
}
