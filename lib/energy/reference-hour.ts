/**
 * Reference ET of an hour or a shorter period, and of the hours of a day.
 */
import {
  AERODYNAMIC_KELVIN_OFFSET,
  EVAPORATED_DEPTH_PER_ENERGY,
  STEFAN_BOLTZMANN_HOUR_ASCE2005,
  STEFAN_BOLTZMANN_HOUR_FAO56,
} from '../base/constants.ts';
import { RangeViolation } from '../base/errors.ts';
import { atmosphericPressure, psychrometricConstant } from './air.ts';
import type { CombinationMethod, ReferenceSurface } from './combination.ts';
import { saturationVapourPressure, vapourPressureSlope } from './humidity.ts';
import { blackBodyRadiation, clearSkyRadiation, netLongwave, netShortwave, relativeShortwave } from './radiation.ts';
import { SOIL_HEAT_SHARE_SHORT, SOIL_HEAT_SHARE_TALL, type SoilHeatShare, soilHeatFluxHour } from './soil-heat.ts';
import { extraterrestrialRadiationPeriod, hourAngle, type SunDay, sunDay, sunElevation } from './sun.ts';

/** What one publication fixes for one surface and an hourly step. Cn [K mm s³ Mg⁻¹ h⁻¹], Cd [s m⁻¹]. */
interface HourlyConstants {
  readonly numerator: number;
  readonly denominatorDay: number;
  readonly denominatorNight: number;
  readonly stefanBoltzmann: number;
  readonly soilHeatShare: SoilHeatShare;
  readonly lowestRelativeShortwave: number;
  readonly lowestWind: number;
  /** lowest sun [rad] at which Rs/Rso of the hour itself is used */
  readonly lowestSun: number;
}

/**
 * Source: FAO-56 Eq. 53, 45, 46. Rs/Rso lies between about 0.33 under dense cloud and 1 (FAO-56 chapter 3, relative short-wave radiation, recalled).
 * For the night FAO-56 takes Rs/Rso of two to three hours before sunset; the sun then stands at about 0.3 rad or more in middle latitudes, the limit
 * that ASCE 2005 gives, which is used here too. Lower, a ratio of two small numbers would rule the whole night.
 */
const FAO56_SHORT: HourlyConstants = {
  numerator: 37,
  denominatorDay: 0.34,
  denominatorNight: 0.34,
  stefanBoltzmann: STEFAN_BOLTZMANN_HOUR_FAO56,
  soilHeatShare: SOIL_HEAT_SHARE_SHORT,
  lowestRelativeShortwave: 0.33,
  lowestWind: 0.5,
  lowestSun: 0.3,
};

/** Source: ASCE 2005 Table 1 and Eq. 44–46 (recalled, not re-read; Cd confirmed by rs · u2 / ra). */
const ASCE2005_SHORT: HourlyConstants = {
  numerator: 37,
  denominatorDay: 0.24,
  denominatorNight: 0.96,
  stefanBoltzmann: STEFAN_BOLTZMANN_HOUR_ASCE2005,
  soilHeatShare: SOIL_HEAT_SHARE_SHORT,
  lowestRelativeShortwave: 0.3,
  lowestWind: 0,
  lowestSun: 0.3,
};

const ASCE2005_TALL: HourlyConstants = {
  ...ASCE2005_SHORT,
  numerator: 66,
  denominatorDay: 0.25,
  denominatorNight: 1.7,
  soilHeatShare: SOIL_HEAT_SHARE_TALL,
};

/**
 * Constants of a publication and surface for an hourly step.
 *
 * @throws {RangeViolation} for FAO-56 with the tall surface, which that paper does not define
 * @example hourlyConstants('asce2005', 'tall').denominatorNight // 1.7
 */
export function hourlyConstants(method: CombinationMethod, surface: ReferenceSurface): HourlyConstants {
  if (method === 'asce2005') return surface === 'tall' ? ASCE2005_TALL : ASCE2005_SHORT;
  if (surface === 'tall') {
    throw new RangeViolation('reference surface "tall" is not defined by method "fao56": use method "asce2005" or surface "short"');
  }
  return FAO56_SHORT;
}

/** Where and when the hours are. */
interface HourlyPlace {
  readonly method: CombinationMethod;
  readonly surface: ReferenceSurface;
  /** whole number 1–366 */
  readonly dayOfYear: number;
  /** degrees, north positive */
  readonly latitude: number;
  /** degrees, east positive */
  readonly longitude: number;
  /** centre of the time zone, 15 × UTC offset in hours [degrees, east positive] */
  readonly zoneLongitude: number;
  /** m */
  readonly elevation: number;
  /** length of one period [h], above 0 and at most 24 */
  readonly periodLength: number;
}

/** Weather of one period. */
interface HourWeather {
  /** standard clock time in the middle of the period [h] */
  readonly clockHour: number;
  /** °C */
  readonly airTemperature: number;
  /** kPa */
  readonly actualVapourPressure: number;
  /** MJ m⁻² per hour */
  readonly solarRadiation: number;
  /** m s⁻¹ */
  readonly windSpeed2m: number;
  /** Rs/Rso to use when the sun is too low for one of its own */
  readonly carriedRelativeShortwave: number;
}

/** A solved hour; radiation per hour [MJ m⁻² h⁻¹], ET [mm h⁻¹]. */
interface ReferenceHour {
  readonly extraterrestrialRadiation: number;
  readonly clearSkyRadiation: number;
  readonly relativeShortwave: number;
  readonly netShortwave: number;
  readonly netLongwave: number;
  readonly netRadiation: number;
  readonly soilHeatFlux: number;
  /** as the equation gives it; slightly negative at night when dew forms */
  readonly referenceEt: number;
}

/**
 * Reference ET of one hour.
 *   ET = [0.408 Δ (Rn − G) + γ Cn/(T + 273) u2 (e°(T) − ea)] / [Δ + γ (1 + Cd u2)]
 *
 * Missing: NaN in any input gives NaN out. The result is not floored: negative hours belong to the sum of a day.
 * Source: FAO-56 Eq. 53; ASCE 2005 Eq. 1 with hourly constants (recalled, not re-read).
 */
export function referenceEtHour(place: HourlyPlace, weather: HourWeather): ReferenceHour {
  const constants = hourlyConstants(place.method, place.surface);
  const radiation = hourRadiation(place, weather, constants);
  const { netRadiation, soilHeatFlux } = radiation;
  const temperature = weather.airTemperature;
  const slope = vapourPressureSlope(temperature);
  const gamma = psychrometricConstant(atmosphericPressure(place.elevation));
  const wind = Math.max(weather.windSpeed2m, constants.lowestWind);
  const deficit = saturationVapourPressure(temperature) - weather.actualVapourPressure;
  const resistance = netRadiation > 0 ? constants.denominatorDay : constants.denominatorNight;
  const energyTerm = EVAPORATED_DEPTH_PER_ENERGY * slope * (netRadiation - soilHeatFlux);
  const windTerm = ((gamma * constants.numerator) / (temperature + AERODYNAMIC_KELVIN_OFFSET)) * wind * deficit;
  return { ...radiation, referenceEt: (energyTerm + windTerm) / (slope + gamma * (1 + resistance * wind)) };
}

function hourRadiation(place: HourlyPlace, weather: HourWeather, constants: HourlyConstants): Omit<ReferenceHour, 'referenceEt'> {
  const sun = sunDay(place.latitude, place.dayOfYear);
  const omega = hourAngle(place.dayOfYear, weather.clockHour, place.longitude, place.zoneLongitude);
  const extraterrestrial = extraterrestrialRadiationPeriod(sun, omega, place.periodLength) / place.periodLength;
  const clearSky = clearSkyRadiation(extraterrestrial, place.elevation);
  const own = sunElevation(sun, omega) >= constants.lowestSun;
  const relative = own
    ? relativeShortwave(weather.solarRadiation, clearSky, constants.lowestRelativeShortwave)
    : weather.carriedRelativeShortwave;
  const shortwave = netShortwave(weather.solarRadiation);
  const longwave = netLongwave(
    blackBodyRadiation(weather.airTemperature, constants.stefanBoltzmann),
    weather.actualVapourPressure,
    relative,
  );
  return {
    extraterrestrialRadiation: extraterrestrial,
    clearSkyRadiation: clearSky,
    relativeShortwave: relative,
    netShortwave: shortwave,
    netLongwave: longwave,
    netRadiation: shortwave - longwave,
    soilHeatFlux: soilHeatFluxHour(shortwave - longwave, constants.soilHeatShare),
  };
}

/**
 * Reference ET of the periods of one day in clock order. Rs/Rso is carried from the last period with the sun high enough; into the hours
 * before the first such period from the evening before, or from that first one where the evening is not known; on a day without sun the
 * caller's value holds.
 *
 * @param hours [hour], in clock order; `carriedRelativeShortwave` is used only on days on which the sun never stands high enough
 * @param evening Rs/Rso of the evening before, from `eveningRelativeShortwave`; NaN when it is not known
 * @returns one solved hour each
 * Source: as `referenceEtHour`; carrying of the cloud factor from ASCE 2005, hourly net radiation (recalled, not re-read).
 */
export function referenceEtHours(place: HourlyPlace, hours: readonly HourWeather[], evening: number = Number.NaN): ReferenceHour[] {
  const own = ownRelativeShortwaves(place, hours);
  let carried = Number.isNaN(evening) ? (own.find((ratio) => !Number.isNaN(ratio)) ?? Number.NaN) : evening;
  return hours.map((hour, i) => {
    if (!Number.isNaN(own[i])) carried = own[i];
    return referenceEtHour(place, Number.isNaN(carried) ? hour : { ...hour, carriedRelativeShortwave: carried });
  });
}

/**
 * Rs/Rso of the last period of a day with the sun high enough for one: what the night after it goes by.
 *
 * @returns [1]; NaN for a day on which the sun never stands high enough, or without radiation then
 * Source: as `referenceEtHours`.
 */
export function eveningRelativeShortwave(place: HourlyPlace, hours: readonly HourWeather[]): number {
  return ownRelativeShortwaves(place, hours).findLast((ratio) => !Number.isNaN(ratio)) ?? Number.NaN;
}

function ownRelativeShortwaves(place: HourlyPlace, hours: readonly HourWeather[]): number[] {
  const constants = hourlyConstants(place.method, place.surface);
  const sun = sunDay(place.latitude, place.dayOfYear);
  return hours.map((hour) => ownRelativeShortwave(place, hour, constants, sun));
}

function ownRelativeShortwave(place: HourlyPlace, hour: HourWeather, constants: HourlyConstants, sun: SunDay): number {
  const omega = hourAngle(place.dayOfYear, hour.clockHour, place.longitude, place.zoneLongitude);
  if (!(sunElevation(sun, omega) >= constants.lowestSun)) return Number.NaN;
  const extraterrestrial = extraterrestrialRadiationPeriod(sun, omega, place.periodLength) / place.periodLength;
  return relativeShortwave(hour.solarRadiation, clearSkyRadiation(extraterrestrial, place.elevation), constants.lowestRelativeShortwave);
}
