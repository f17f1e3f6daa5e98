/**
 * Reference ET of the hours of a site's days, summed to the day.
 *
 * Hours run by the site's standard clock, each named by the hour that begins it; arrays of hours are [day × 24]. Missing is NaN.
 */
import { type DayNumber, dayOfYear } from '../base/civil-date.ts';
import { LATENT_HEAT } from '../base/constants.ts';
import { ShapeError } from '../base/errors.ts';
import { bridgeHours, HOURS_PER_DAY } from '../weather/hours.ts';
import type { HourVariable } from '../weather/variable.ts';
import type { CombinationMethod, ReferenceSurface } from './combination.ts';
import { actualVapourPressureFromDewPoint, saturationVapourPressure } from './humidity.ts';
import { clearSkyRadiation, RELATIVE_SHORTWAVE_WITHOUT_SUN } from './radiation.ts';
import { eveningRelativeShortwave, referenceEtHours } from './reference-hour.ts';
import { extraterrestrialRadiationPeriod, hourAngle, sunDay } from './sun.ts';
import { windProfileFactor } from './wind.ts';

/** Most hours of a day that are bridged by the mean of their neighbours. */
export const MOST_BRIDGED_HOURS = 2;

/** Where a site is, for its hours. */
export interface HourPlace {
  /** degrees, north positive */
  readonly latitude: number;
  /** degrees, east positive */
  readonly longitude: number;
  /** m */
  readonly elevation: number;
  /** height of the anemometer [m] */
  readonly windHeight: number;
  /** standard time of the site [h east of UTC] */
  readonly zoneHours: number;
}

/** Hours of a site over days, [day × 24] each. */
export interface SiteHours {
  readonly firstDay: DayNumber;
  readonly dayCount: number;
  /** °C */
  readonly airTemperature: Float64Array;
  /** kPa */
  readonly actualVapourPressure: Float64Array;
  /** MJ m⁻² h⁻¹ */
  readonly solarRadiation: Float64Array;
  /** m s⁻¹ at 2 m */
  readonly windSpeed2m: Float64Array;
}

/** Publication and surface. */
export interface HourlyEquation {
  readonly method: CombinationMethod;
  readonly surface: ReferenceSurface;
}

/** What stands in where a station reports no radiation or wind by the hour, [day]. */
export interface DayStandIns {
  /** MJ m⁻² d⁻¹; shared among the hours as extraterrestrial radiation is */
  readonly solarRadiation: Float64Array;
  /** m s⁻¹ at 2 m; the same all day */
  readonly windSpeed2m: Float64Array;
}

/** One solved hour: radiation and heat [MJ m⁻² h⁻¹], ET [mm h⁻¹]. */
export interface HourBudget {
  readonly extraterrestrialRadiation: number;
  readonly clearSkyRadiation: number;
  readonly netShortwave: number;
  readonly netLongwave: number;
  readonly netRadiation: number;
  readonly soilHeatFlux: number;
  readonly latentHeatFlux: number;
  /** H = Rn − G − λET */
  readonly sensibleHeatFlux: number;
  readonly referenceEt: number;
}

/**
 * Vapour pressure of an hour from whatever the station reports: the vapour pressure itself, the dew point, or humidity and temperature.
 *   ea = e°(T) RH / 100
 *
 * @returns [kPa]; NaN when the station reports none of them
 * Source: FAO-56 Eq. 14 and 54.
 */
export function hourVapourPressure(vapourPressure: number, dewPoint: number, relativeHumidity: number, airTemperature: number): number {
  if (!Number.isNaN(vapourPressure)) return vapourPressure;
  if (!Number.isNaN(dewPoint)) return actualVapourPressureFromDewPoint(dewPoint);
  return (saturationVapourPressure(airTemperature) * Math.min(relativeHumidity, 100)) / 100;
}

/**
 * The hours of a site as the equations take them, from its stored hours. Radiation and wind that the station does not report on any hour of a
 * day come from `standIns`; gaps of up to `MOST_BRIDGED_HOURS` hours a day are bridged.
 *
 * @param values stored hours by variable, [day × 24]; what is left out was not reported
 * @throws {ShapeError} when an array is not days × 24 long
 */
export function siteHours(
  place: HourPlace,
  days: { readonly firstDay: DayNumber; readonly dayCount: number },
  values: Partial<Record<HourVariable, Float64Array>>,
  standIns: DayStandIns | null,
): SiteHours {
  const length = days.dayCount * HOURS_PER_DAY;
  for (const [name, array] of Object.entries(values)) {
    if (array.length !== length) throw new ShapeError(`${name} has ${array.length} hours, expected ${days.dayCount} days × 24 = ${length}`);
  }
  const of = (name: HourVariable) => values[name] ?? new Float64Array(length).fill(Number.NaN);
  const [vapour, dew, humidity, temperature] = [
    of('hour_vapour_pressure_kpa'),
    of('hour_dew_point_c'),
    of('hour_relative_humidity_pct'),
    of('hour_air_temperature_c'),
  ];
  const pressure = temperature.map((t, hour) => hourVapourPressure(vapour[hour], dew[hour], humidity[hour], t));
  const factor = windProfileFactor(place.windHeight);
  const radiation = of('hour_solar_radiation_mj_m2').map((value) => Math.max(0, value));
  const wind = of('hour_wind_speed_m_s').map((value) => value * factor);
  if (standIns) {
    standInFor(radiation, (day) => distributedRadiation(place, days.firstDay + day, standIns.solarRadiation[day]));
    standInFor(wind, (day) => new Float64Array(HOURS_PER_DAY).fill(standIns.windSpeed2m[day]));
  }
  const bridged = (hours: Float64Array) => bridgeHours(hours, MOST_BRIDGED_HOURS).hours;
  return {
    ...days,
    airTemperature: bridged(temperature),
    actualVapourPressure: bridged(pressure),
    solarRadiation: bridged(radiation),
    windSpeed2m: bridged(wind),
  };
}

/** Writes a day's hours where the station reported none at all. */
function standInFor(hours: Float64Array, ofDay: (day: number) => Float64Array): void {
  for (let start = 0; start < hours.length; start += HOURS_PER_DAY) {
    if (hours.subarray(start, start + HOURS_PER_DAY).every(Number.isNaN)) hours.set(ofDay(start / HOURS_PER_DAY), start);
  }
}

/**
 * A day's solar radiation shared among its hours in proportion to extraterrestrial radiation: the sky is taken to be equally clear all day.
 *
 * @param solarRadiation [MJ m⁻² d⁻¹]
 * @returns [MJ m⁻² h⁻¹], 24 values that sum to the day's
 * Source: FAO-56 Eq. 28 for the hours' share; the constant ratio is common practice, no source.
 */
export function distributedRadiation(place: HourPlace, day: DayNumber, solarRadiation: number): Float64Array {
  const hours = hourlyExtraterrestrialRadiation(place, dayOfYear(day));
  const total = hours.reduce((sum, value) => sum + value, 0);
  return hours.map((value) => (total > 0 ? (solarRadiation * value) / total : 0 * solarRadiation));
}

/**
 * Extraterrestrial radiation of the 24 hours of a day; over the day they sum to that of the day.
 *
 * @returns [MJ m⁻² h⁻¹]
 * Source: FAO-56 Eq. 28–33.
 */
export function hourlyExtraterrestrialRadiation(place: HourPlace, day: number): Float64Array {
  const sun = sunDay(place.latitude, day);
  return Float64Array.from({ length: HOURS_PER_DAY }, (_, hour) =>
    extraterrestrialRadiationPeriod(sun, hourAngle(day, hour + 0.5, place.longitude, 15 * place.zoneHours), 1),
  );
}

/**
 * The 24 solved hours of one day: radiation, heat and reference ET. The hours before sunrise go by the sky of the evening before, where
 * `hours` begin earlier than that.
 *
 * Missing: an hour that lacks any of its four values is NaN in what hangs on it.
 *
 * @param offset day from the first of `hours`
 * @throws {RangeViolation} for `fao56` with the tall surface
 * Source: FAO-56 Eq. 53, 45, 46; ASCE 2005 Eq. 1 with hourly constants and its night rules (recalled, not re-read).
 */
export function hourlyBudget(place: HourPlace, hours: SiteHours, offset: number, equation: HourlyEquation): HourBudget[] {
  const evening =
    offset > 0 ? eveningRelativeShortwave(placeOn(place, hours, offset - 1, equation), weatherOn(place, hours, offset - 1)) : Number.NaN;
  return referenceEtHours(placeOn(place, hours, offset, equation), weatherOn(place, hours, offset), evening).map((hour) => {
    const latentHeatFlux = hour.referenceEt * LATENT_HEAT;
    return { ...hour, latentHeatFlux, sensibleHeatFlux: hour.netRadiation - hour.soilHeatFlux - latentHeatFlux };
  });
}

function placeOn(
  { latitude, longitude, elevation, zoneHours }: HourPlace,
  { firstDay }: SiteHours,
  offset: number,
  equation: HourlyEquation,
) {
  return {
    ...equation,
    latitude,
    longitude,
    elevation,
    dayOfYear: dayOfYear(firstDay + offset),
    zoneLongitude: 15 * zoneHours,
    periodLength: 1,
  };
}

function weatherOn(place: HourPlace, hours: SiteHours, offset: number) {
  const carriedRelativeShortwave = relativeShortwaveOfDay(place, hours, offset, dayOfYear(hours.firstDay + offset));
  const first = offset * HOURS_PER_DAY;
  return Array.from({ length: HOURS_PER_DAY }, (_, hour) => ({
    clockHour: hour + 0.5,
    airTemperature: hours.airTemperature[first + hour],
    actualVapourPressure: hours.actualVapourPressure[first + hour],
    solarRadiation: hours.solarRadiation[first + hour],
    windSpeed2m: hours.windSpeed2m[first + hour],
    carriedRelativeShortwave,
  }));
}

/** Rs/Rso over the whole day, for days on which no single hour can tell it. */
function relativeShortwaveOfDay(place: HourPlace, hours: SiteHours, offset: number, day: number): number {
  const clear = clearSkyRadiation(sunDay(place.latitude, day).extraterrestrialRadiation, place.elevation);
  const first = offset * HOURS_PER_DAY;
  const measured = hours.solarRadiation.subarray(first, first + HOURS_PER_DAY).reduce((sum, value) => sum + value, 0);
  return clear > 0 ? Math.min(1, measured / clear) : RELATIVE_SHORTWAVE_WITHOUT_SUN;
}

/**
 * Reference ET of days as the sum of their hours. Hours of dew (below 0) count in the sum; a day below 0 is taken as 0.
 *
 * Missing: a day on which an hour cannot be solved is NaN.
 *
 * @returns [day], mm d⁻¹
 * @throws {RangeViolation} for `fao56` with the tall surface
 * Source: as `hourlyBudget`.
 */
export function hourlySumReferenceEt(place: HourPlace, hours: SiteHours, equation: HourlyEquation): Float64Array {
  return Float64Array.from({ length: hours.dayCount }, (_, offset) => {
    const sum = hourlyBudget(place, hours, offset, equation).reduce((total, hour) => total + hour.referenceEt, 0);
    return Number.isNaN(sum) ? Number.NaN : Math.max(0, sum);
  });
}
