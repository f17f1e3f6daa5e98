/**
 * Completes the weather of a site-day: the six values the energy balance needs, each from the best thing the site reports, by the published
 * order of fallbacks. What was estimated is flagged, never hidden.
 *
 * Source: FAO-56 chapter 3, "Calculation procedures" and "Estimating missing climatic data".
 */
import { dayNumber, dayOfYear } from '../base/civil-date.ts';
import { RangeViolation, ShapeError } from '../base/errors.ts';
import type { Trace } from '../base/working.ts';
import type { FilledObservations } from '../weather/gaps-fill.ts';
import { type CompletedWeather, FALLBACK, type SiteObservations, type WeatherVariable } from '../weather/variable.ts';
import { completePrecipitation, completeRadiation, completeVapourPressure, completeWind, type SiteDay } from './site-day.ts';
import { solarGeometry } from './sun.ts';
import { LOWEST_WIND_HEIGHT } from './wind.ts';

/** Height of the anemometer where a site does not state it [m]. Source: WMO-No. 8, Guide to Instruments, chapter 5: 10 m over open ground. */
export const STANDARD_WIND_HEIGHT = 10;

/** What the district decides for sites that do not say. */
interface CompletionOptions {
  /** elevation of a site that does not state its own [m] */
  readonly defaultElevation: number;
  /** kRs of the temperature-range estimate of radiation [°C⁻⁰·⁵]: 0.16 interior, 0.19 coastal */
  readonly radiationCoefficient: number;
}

/** The bits that speak of temperature alone: they fall away where the extremes could not be used. */
const TEMPERATURE_BITS =
  FALLBACK.temperatureFilledInTime | FALLBACK.temperatureFromNormal | FALLBACK.temperatureFromNeighbour | FALLBACK.temperatureFromSource;

/**
 * Completes the weather of all sites and days of a source. Observations that went through `fillGaps` bring their bits along: a value that was filled
 * stands before the published estimate and is flagged by its method.
 *
 * A site-day that has a mean temperature, radiation and humidity but no usable extremes takes the mean for both (flag
 * `temperatureExtremesFromMean`): saturation is then low by the spread of the day unless the vapour pressure came from a measured deficit.
 *
 * Missing: a site-day without usable temperature has NaN in every temperature-bound value, no flags, and carries no weight. Humidity is held at saturation, the mean of e° at
 * both extremes: a mean above it is a sensor's error.
 *
 * @returns arrays [site × day] with bits of FALLBACK
 * @throws {ShapeError} when an array is not sites × days long
 * @throws {RangeViolation} when the anemometer of a site stands below 0.5 m, or the default elevation or kRs is not a number
 */
export function completeWeather(observations: SiteObservations | FilledObservations, options: CompletionOptions): CompletedWeather {
  checkInput(observations, options);
  const siteCount = observations.sites.length;
  const { dayCount } = observations;
  const completed = emptyCompleted(siteCount, dayCount);
  const daysOfYear = daysOfYearOf(observations);
  for (let site = 0; site < siteCount; site++) {
    const day = siteReader(observations, site, options);
    for (let offset = 0; offset < dayCount; offset++) {
      moveTo(day, site * dayCount + offset, daysOfYear[offset]);
      storeSiteDay(completed, day, null);
    }
  }
  return completed;
}

/**
 * Tells how each of the six values of one site-day was got; the same code as `completeWeather`.
 *
 * @param site index into the sites of the observations
 * @param day offset from the first day of the observations
 * @throws as `completeWeather`, and {RangeViolation} when site or day lie outside the observations
 */
export function traceCompletion(
  observations: SiteObservations | FilledObservations,
  site: number,
  day: number,
  options: CompletionOptions,
  trace: Trace,
): CompletedWeather {
  checkInput(observations, options);
  if (!(observations.sites[site] && Number.isInteger(day) && day >= 0 && day < observations.dayCount)) {
    throw new RangeViolation(
      `site ${site}, day ${day} outside limits of ${observations.sites.length} sites and ${observations.dayCount} days counted from 0`,
    );
  }
  const reader = siteReader(observations, site, options);
  moveTo(reader, site * observations.dayCount + day, dayOfYear(dayNumber(observations.startDate) + day));
  const completed = emptyCompleted(1, 1);
  reader.outIndex = 0;
  storeSiteDay(completed, reader, trace);
  return completed;
}

function storeSiteDay(completed: CompletedWeather, day: SiteDay, trace: Trace | null): void {
  const i = day.outIndex;
  traceTemperatures(day, trace);
  completed.airTemperatureMax[i] = day.airTemperatureMax;
  completed.airTemperatureMin[i] = day.airTemperatureMin;
  completed.actualVapourPressure[i] = completeVapourPressure(day, trace);
  completed.solarRadiation[i] = completeRadiation(day, trace);
  completed.windSpeed2m[i] = completeWind(day, trace);
  completed.precipitation[i] = completePrecipitation(day, trace);
  completed.flags[i] = Number.isNaN(day.airTemperatureMax) ? 0 : day.flags;
}

function traceTemperatures(day: SiteDay, trace: Trace | null): void {
  if (trace === null) return;
  const how = temperatureOrigin(day.flags);
  const named = [
    ['Tmax', 'Maximum air temperature', day.airTemperatureMax],
    ['Tmin', 'Minimum air temperature', day.airTemperatureMin],
  ] as const;
  for (const [symbol, name, result] of named) {
    trace.step({ part: 'weather', symbol, name, expression: symbol, inputs: [], result, unit: '°C', source: how });
  }
}

function temperatureOrigin(flags: number): string {
  if (flags & FALLBACK.temperatureExtremesFromMean) return 'no extremes at the site: the daily mean stands for both';
  if (flags & FALLBACK.temperatureFromNeighbour) return 'regression on a neighbouring site, FAO-56 Annex 4';
  if (flags & FALLBACK.temperatureFromSource) return 'another weather source, its mean difference taken off';
  if (flags & FALLBACK.temperatureFromNormal) return 'mean of the same calendar day ± 7 days in other years of the site';
  if (flags & FALLBACK.temperatureFilledInTime) return 'straight line between neighbouring days (a gap of at most five days)';
  return 'observed at the site';
}

function daysOfYearOf(observations: SiteObservations): Uint16Array {
  const first = dayNumber(observations.startDate);
  return Uint16Array.from({ length: observations.dayCount }, (_, offset) => dayOfYear(first + offset));
}

/** A reader over one site, standing on no day yet. */
function siteReader(observations: SiteObservations | FilledObservations, site: number, options: CompletionOptions): SiteDay {
  const { elevation, windHeight, latitude } = observations.sites[site];
  const elevationKnown = !Number.isNaN(elevation);
  const height = Number.isNaN(windHeight) ? STANDARD_WIND_HEIGHT : windHeight;
  return {
    values: observations.values,
    temperatures: temperaturesOf(observations),
    sun: solarGeometry(latitude),
    elevation: elevationKnown ? elevation : options.defaultElevation,
    siteFlags: elevationKnown ? 0 : FALLBACK.elevationAssumed,
    windHeight: height,
    windHeightFlag: Number.isNaN(windHeight) ? FALLBACK.windHeightAssumed : 0,
    radiationCoefficient: options.radiationCoefficient,
    index: 0,
    outIndex: 0,
    dayOfYear: 0,
    airTemperatureMax: Number.NaN,
    airTemperatureMin: Number.NaN,
    value: Number.NaN,
    flags: 0,
  };
}

function temperaturesOf(observations: SiteObservations | FilledObservations): SiteDay['temperatures'] {
  const length = observations.sites.length * observations.dayCount;
  return {
    flags: 'flags' in observations ? observations.flags : new Uint32Array(length),
    airTemperatureMax: observations.values.air_temperature_max_c ?? new Float64Array(length).fill(Number.NaN),
    airTemperatureMin: observations.values.air_temperature_min_c ?? new Float64Array(length).fill(Number.NaN),
  };
}

function moveTo(day: SiteDay, index: number, dayOfYearThen: number): void {
  const max = day.temperatures.airTemperatureMax[index];
  const min = day.temperatures.airTemperatureMin[index];
  const usable = max >= min;
  // without extremes the mean stands for both; NaN where there is no mean either
  const mean = usable ? Number.NaN : meanTemperature(day.values, index);
  day.index = index;
  day.outIndex = index;
  day.dayOfYear = dayOfYearThen;
  day.airTemperatureMax = usable ? max : mean;
  day.airTemperatureMin = usable ? min : mean;
  const filled = day.temperatures.flags[index];
  day.flags = day.siteFlags | (usable ? filled : (filled & ~TEMPERATURE_BITS) | FALLBACK.temperatureExtremesFromMean);
}

/** Variables that give radiation, and humidity, without the spread of temperature. */
const RADIATION_WITHOUT_EXTREMES = ['solar_radiation_mj_m2_d', 'sunshine_duration_h'] as const;
const HUMIDITY_WITHOUT_EXTREMES = [
  'vapour_pressure_kpa',
  'dew_point_c',
  'relative_humidity_max_pct',
  'relative_humidity_mean_pct',
  'specific_humidity_kg_kg',
] as const;

/** Mean temperature of a day whose radiation and humidity do not have to be guessed from the spread of temperature; else NaN. */
function meanTemperature(values: SiteObservations['values'], index: number): number {
  const reported = (variable: WeatherVariable) => !Number.isNaN(values[variable]?.[index] ?? Number.NaN);
  if (!RADIATION_WITHOUT_EXTREMES.some(reported) || !HUMIDITY_WITHOUT_EXTREMES.some(reported)) return Number.NaN;
  return values.air_temperature_mean_c?.[index] ?? Number.NaN;
}

function emptyCompleted(siteCount: number, dayCount: number): CompletedWeather {
  const length = siteCount * dayCount;
  return {
    siteCount,
    dayCount,
    airTemperatureMax: new Float64Array(length),
    airTemperatureMin: new Float64Array(length),
    actualVapourPressure: new Float64Array(length),
    solarRadiation: new Float64Array(length),
    windSpeed2m: new Float64Array(length),
    precipitation: new Float64Array(length),
    flags: new Uint32Array(length),
  };
}

function checkInput(observations: SiteObservations, options: CompletionOptions): void {
  const { sites, dayCount, values } = observations;
  for (const name of Object.keys(values) as WeatherVariable[]) {
    const length = values[name]?.length ?? sites.length * dayCount;
    if (length !== sites.length * dayCount) {
      throw new ShapeError(`${name} has ${length} values, expected ${sites.length} sites × ${dayCount} days = ${sites.length * dayCount}`);
    }
  }
  for (const { code, windHeight } of sites) {
    if (windHeight < LOWEST_WIND_HEIGHT) {
      throw new RangeViolation(
        `wind height ${windHeight} m below limit ${LOWEST_WIND_HEIGHT} m (site ${code}): give the height of the anemometer above ground`,
      );
    }
  }
  if (Number.isNaN(options.defaultElevation)) throw new RangeViolation('default elevation is not a number: give metres above sea level');
  if (!(options.radiationCoefficient > 0 && options.radiationCoefficient <= 0.3)) {
    throw new RangeViolation(`radiation coefficient ${options.radiationCoefficient} outside limits 0–0.3: 0.16 interior, 0.19 coastal`);
  }
}
