/** What the checks of a site's record are held against: sun, clear sky and the humidity that was observed, day by day. */
import { dayNumber, dayOfYear } from '../base/civil-date.ts';
import { seriesOf } from '../weather/quality/flag.ts';
import type { SiteObservations } from '../weather/variable.ts';
import { atmosphericPressure } from './air.ts';
import { BEAM_ASCE2005, beamShare, diffuseShare, meanSunElevationSine } from './clear-sky.ts';
import {
  actualVapourPressureFromDewPoint,
  actualVapourPressureFromExtremes,
  actualVapourPressureFromRhMax,
  actualVapourPressureFromRhMean,
  actualVapourPressureFromSpecificHumidity,
  dewPointFromActualVapourPressure,
} from './humidity.ts';
import { clearSkyRadiation } from './radiation.ts';
import { daylightHours, type SolarGeometry, solarGeometry } from './sun.ts';

/** One site under its sky; every array is [day], NaN where it cannot be said. */
export interface SiteSky {
  readonly site: number;
  readonly latitude: number;
  /** m, the district's setting where the site has none */
  readonly elevation: number;
  readonly elevationKnown: boolean;
  readonly sun: SolarGeometry;
  readonly dayOfYear: Uint16Array;
  /** Ra [MJ m⁻² d⁻¹] */
  readonly extraterrestrial: Float64Array;
  /** Rso [MJ m⁻² d⁻¹], the higher of the two published forms where humidity lets both be computed */
  readonly clearSky: Float64Array;
  /** the lower of the two */
  readonly clearSkyLow: Float64Array;
  /** N [h] */
  readonly daylight: Float64Array;
  /** ea from whatever humidity was observed [kPa]; never estimated */
  readonly vapourPressure: Float64Array;
  /** Tdew [°C] of that vapour pressure */
  readonly dewPoint: Float64Array;
}

/** Lowest sun for which the beam and diffuse form holds: below it the path through the air is too long. */
const LEAST_SINE = 0.1;

/**
 * Clear-sky radiation of a day: beam and diffuse shares with the day's water vapour where humidity was observed, else from elevation.
 *   Rso = (KB + KD) Ra with clean air, Kt = 1; or Rso = (0.75 + 2 × 10⁻⁵ z) Ra
 *
 * @param vapourPressure ea [kPa], NaN where there is none
 * @returns Rso [MJ m⁻² d⁻¹]
 * Source: ASCE-EWRI 2005 Appendix D (recalled); FAO-56 Eq. 37.
 */
export function clearSkyOfDay(input: {
  readonly extraterrestrial: number;
  readonly elevation: number;
  readonly latitude: number;
  readonly dayOfYear: number;
  readonly vapourPressure: number;
}): number {
  const { extraterrestrial, elevation, vapourPressure } = input;
  const sine = meanSunElevationSine(input.latitude, input.dayOfYear);
  if (Number.isNaN(vapourPressure) || sine < LEAST_SINE) return clearSkyRadiation(extraterrestrial, elevation);
  const air = { pressure: atmosphericPressure(elevation), actualVapourPressure: vapourPressure, sine, turbidity: 1 };
  const beam = beamShare(air, BEAM_ASCE2005);
  return (beam + diffuseShare(beam, BEAM_ASCE2005)) * extraterrestrial;
}

/** The sky over a site of the observations. */
export function siteSky(observations: SiteObservations, site: number, defaultElevation: number): SiteSky {
  const { dayCount, startDate, sites } = observations;
  const { latitude, elevation: stated } = sites[site];
  const elevation = Number.isNaN(stated) ? defaultElevation : stated;
  const geometry = solarGeometry(latitude);
  const first = dayNumber(startDate);
  const vapourPressure = observedVapourPressure(observations, site, elevation);
  const days = Uint16Array.from({ length: dayCount }, (_, day) => dayOfYear(first + day));
  const extraterrestrial = Float64Array.from(days, (day) => geometry.extraterrestrialRadiation[day]);
  const [clearSky, clearSkyLow] = [new Float64Array(dayCount), new Float64Array(dayCount)];
  for (let i = 0; i < dayCount; i++) {
    const byElevation = clearSkyRadiation(extraterrestrial[i], elevation);
    const place = { extraterrestrial: extraterrestrial[i], elevation, latitude, dayOfYear: days[i] };
    const byVapour = clearSkyOfDay({ ...place, vapourPressure: vapourPressure[i] });
    clearSky[i] = Math.max(byElevation, byVapour);
    clearSkyLow[i] = Math.min(byElevation, byVapour);
  }
  const daylight = Float64Array.from(days, (day) => daylightHours(geometry.sunsetAngle[day]));
  const dewPoint = vapourPressure.map((pressure) => (pressure > 0 ? dewPointFromActualVapourPressure(pressure) : Number.NaN));
  return {
    site,
    latitude,
    elevation,
    elevationKnown: !Number.isNaN(stated),
    sun: geometry,
    dayOfYear: days,
    extraterrestrial,
    clearSky,
    clearSkyLow,
    daylight,
    vapourPressure,
    dewPoint,
  };
}

/**
 * Vapour pressure from the humidity that was observed, in the published order; nothing is estimated where there is none.
 *
 * @returns ea [day] in kPa, NaN without humidity
 * Source: FAO-56 Eq. 14, 17, 18, 19; definition of specific humidity.
 */
export function observedVapourPressure(observations: SiteObservations, site: number, elevation: number): Float64Array {
  const of = (variable: Parameters<typeof seriesOf>[1]) => seriesOf(observations, variable, site);
  const [given, dew] = [of('vapour_pressure_kpa'), of('dew_point_c')];
  const [max, min] = [of('air_temperature_max_c'), of('air_temperature_min_c')];
  const [rhMax, rhMin, rhMean] = [of('relative_humidity_max_pct'), of('relative_humidity_min_pct'), of('relative_humidity_mean_pct')];
  const [specific, pressure] = [of('specific_humidity_kg_kg'), of('pressure_kpa')];
  const at = (series: Float64Array | null, day: number) => series?.[day] ?? Number.NaN;
  const standard = atmosphericPressure(elevation);
  const ways: ((day: number) => number)[] = [];
  if (given) ways.push((day) => given[day]);
  if (dew) ways.push((day) => actualVapourPressureFromDewPoint(dew[day]));
  if (rhMax && rhMin) ways.push((day) => actualVapourPressureFromExtremes(at(max, day), at(min, day), rhMax[day], rhMin[day]));
  if (rhMax) ways.push((day) => actualVapourPressureFromRhMax(at(min, day), rhMax[day]));
  if (rhMean) ways.push((day) => actualVapourPressureFromRhMean(at(max, day), at(min, day), rhMean[day]));
  if (specific) {
    ways.push((day) =>
      actualVapourPressureFromSpecificHumidity(specific[day], Number.isNaN(at(pressure, day)) ? standard : at(pressure, day)),
    );
  }
  const out = new Float64Array(observations.dayCount);
  for (let day = 0; day < out.length; day++) out[day] = firstKnown(ways, day);
  return out;
}

function firstKnown(ways: readonly ((day: number) => number)[], day: number): number {
  for (const way of ways) {
    const value = way(day);
    if (!Number.isNaN(value)) return value;
  }
  return Number.NaN;
}
