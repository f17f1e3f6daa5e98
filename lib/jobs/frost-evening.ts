/** Evenings of a station out of its record, and what its past nights say of the night that is asked for. */
import { civilFromDayNumber, dayNumber, dayOfYear } from '../base/civil-date.ts';
import { quantity, type Trace } from '../base/working.ts';
import { degreeDaysOfMean } from '../crop/thermal-time.ts';
import { type NightTimes, nightTimes, nightWind, sunsetTemperature } from '../energy/frost-evening.ts';
import { type Evening, isClearNight, type NightOptions, nightEstimate, type StationRecord } from '../energy/frost-night.ts';
import { type EstimateError, estimateError, fitMinimumLine } from '../energy/frost-regression.ts';
import { dewPointFromActualVapourPressure } from '../energy/humidity.ts';
import { clearSkyRadiation, cloudFactor, relativeShortwave } from '../energy/radiation.ts';
import { sunDay } from '../energy/sun.ts';
import type { FrostRecord } from './frost-weather.ts';

/** How an evening was got: from the hour of sunset, from the day's values, or as the reader gave it. */
export type EveningSource = 'hours' | 'daily' | 'given';

/** Days of the year on either side of the night whose evenings are alike enough to fit a line to. Choice of ours. */
export const ALIKE_DAYS = 45;
/** Least cloud factor: even a covered sky lets something through. Source: FAO-56 Eq. 39, as ASCE 2005 holds it. */
const LEAST_CLOUD_FACTOR = 0.05;
const HOURS = 24;
const YEAR = 365.25;

/** A station of a record, on one of its days. */
export interface StationDay {
  readonly record: FrostRecord;
  readonly station: number;
  /** from the first day of the record */
  readonly day: number;
}

/** Sunset, sunrise and length of the night after a day. */
export function timesOf({ record, station, day }: StationDay): NightTimes {
  const { site, zoneHours } = record.stations[station];
  const { latitude, longitude } = site;
  return nightTimes({ latitude, longitude, zoneHours }, dayOfYear(dayNumber(record.observed.startDate) + day));
}

/** The evening of a day; NaN where the day is not known. `daily` makes it from the day's values even where there are hours. */
export function eveningOf(at: StationDay): { evening: Evening; from: EveningSource } {
  const { record, station, day } = at;
  const { completed } = record;
  const place = station * completed.dayCount + day;
  const times = timesOf(at);
  const factor = dayCloudFactor(at);
  const hour = hourAtSunset(at, times);
  if (hour) return { evening: { ...hour, cloudFactor: factor }, from: 'hours' };
  const evening = {
    airTemperature: sunsetTemperature(completed.airTemperatureMax[place], completed.airTemperatureMin[place], times.daylight),
    dewPoint: dewPointFromActualVapourPressure(completed.actualVapourPressure[place]),
    windSpeed: nightWind(completed.windSpeed2m[place]),
    cloudFactor: factor,
  };
  // air that would be more than saturated at sunset has the dew point of its temperature
  return { evening: { ...evening, dewPoint: lesser(evening.dewPoint, evening.airTemperature) }, from: 'daily' };
}

/** Temperature, dew point and wind at sunset, between the middles of the hours around it; null where the station has no such hours. */
function hourAtSunset({ record, station, day }: StationDay, { sunset }: NightTimes): Omit<Evening, 'cloudFactor'> | null {
  const { hours } = record.stations[station];
  if (!hours) return null;
  const after = sunset - 0.5;
  const first = day * HOURS + Math.floor(after);
  const share = after - Math.floor(after);
  const at = (series: Float64Array) => (1 - share) * (series[first] ?? Number.NaN) + share * (series[first + 1] ?? Number.NaN);
  const airTemperature = at(hours.airTemperature);
  const dewPoint = dewPointFromActualVapourPressure(at(hours.actualVapourPressure));
  const windSpeed = at(hours.windSpeed2m);
  if (Number.isNaN(airTemperature + dewPoint + windSpeed)) return null;
  return { airTemperature, dewPoint: lesser(dewPoint, airTemperature), windSpeed };
}

function lesser(a: number, b: number): number {
  return Number.isNaN(a) ? a : Math.min(a, b);
}

/** Radiation of the day and of a clear day [MJ m⁻² d⁻¹]. */
function dayRadiation({ record, station, day }: StationDay): { radiation: number; clear: number } {
  const { completed, observed, stations } = record;
  const { site, elevation } = stations[station];
  const ra = sunDay(site.latitude, dayOfYear(dayNumber(observed.startDate) + day)).extraterrestrialRadiation;
  const radiation = completed.solarRadiation[station * completed.dayCount + day] ?? Number.NaN;
  return { radiation, clear: clearSkyRadiation(ra, elevation) };
}

/** Cloud of the day, which is taken for the night's. */
function dayCloudFactor(at: StationDay): number {
  const { radiation, clear } = dayRadiation(at);
  if (Number.isNaN(radiation)) return Number.NaN;
  return Math.max(LEAST_CLOUD_FACTOR, cloudFactor(relativeShortwave(radiation, clear, 0)));
}

/** Minimum of the morning after, as measured; NaN where it is not. */
export function morningMinimum({ record, station, day }: StationDay): number {
  const { values, dayCount } = record.observed;
  return day + 1 < dayCount ? (values.air_temperature_min_c?.[station * dayCount + day + 1] ?? Number.NaN) : Number.NaN;
}

/** What a station's past nights say. */
export interface PastNights extends StationRecord {
  readonly brunt: EstimateError;
}

/**
 * The station's line and the error of the square-root law, from the nights within 45 days of the year of the night, which is left out itself.
 * Nights are of the night's own kind, clear and calm or not, and their evenings from hours or from days as its own, so that the line is used on what
 * it was fitted to.
 */
export function pastNights(at: StationDay, tonight: { evening: Evening; from: EveningSource }, options: NightOptions): PastNights {
  const kind = tonight.from === 'hours' ? 'hours' : 'daily';
  const clear = isClearNight(tonight.evening);
  const nights = { airTemperature: [] as number[], dewPoint: [] as number[], minimum: [] as number[], brunt: [] as number[] };
  const none: StationRecord = { line: null, bruntError: Number.NaN };
  const { elevation } = at.record.stations[at.station];
  for (let day = 0; day + 1 < at.record.observed.dayCount; day++) {
    if (day === at.day || !isAlike(day - at.day)) continue;
    const past = { ...at, day };
    const minimum = morningMinimum(past);
    if (Number.isNaN(minimum)) continue;
    const { evening, from: made } = eveningOf(past);
    if (made !== kind || isClearNight(evening) !== clear) continue;
    nights.airTemperature.push(evening.airTemperature);
    nights.dewPoint.push(evening.dewPoint);
    nights.minimum.push(minimum);
    const place = { elevation, nightLength: timesOf(past).nightLength };
    nights.brunt.push(nightEstimate(evening, place, none, { ...options, method: 'brunt' }).minimum);
  }
  const brunt = estimateError(nights.brunt, nights.minimum);
  return { line: fitMinimumLine(nights), bruntError: brunt.error, brunt };
}

/** Within 45 days of the same day of another year. */
function isAlike(days: number): boolean {
  const rest = Math.abs(days) % YEAR;
  return Math.min(rest, YEAR - rest) <= ALIKE_DAYS;
}

/** Days at the end of the count that may be missing before it is not given at all. */
const MOST_MISSING = 7;

/**
 * Thermal time of buds at a station: sum above the base from the first of January to the evening, both included; south of the equator from July.
 *
 * @returns [°C d]; NaN where more than seven days are missing; a missing day counts as the mean of the others
 */
export function budThermalTime({ record, station, day }: StationDay, base: number): number {
  const { completed, observed, stations } = record;
  const first = dayNumber(observed.startDate);
  const start = countStart(first + day, stations[station].site.latitude) - first;
  let [sum, known] = [0, 0];
  for (let d = Math.max(0, start); d <= day && d < completed.dayCount; d++) {
    const at = station * completed.dayCount + d;
    const degrees = degreeDaysOfMean(completed.airTemperatureMax[at], completed.airTemperatureMin[at], base);
    if (Number.isNaN(degrees)) continue;
    sum += degrees;
    known++;
  }
  const all = day - start + 1;
  return all - known > MOST_MISSING ? Number.NaN : (sum / Math.max(1, known)) * all;
}

/** First of January, or of July in the south, on or before a day. */
export function countStart(day: number, latitude: number): number {
  const { year } = civilFromDayNumber(day);
  const south = latitude < 0;
  const start = dayNumber(`${year}-${south ? '07' : '01'}-01`);
  return start <= day ? start : dayNumber(`${year - 1}-07-01`);
}

/** Whether the leaves are off: November and December, south of the equator May and June. Common practice, no source. */
export function isLeafless(date: string, latitude: number): boolean {
  const month = Number(date.slice(5, 7));
  return latitude < 0 ? month === 5 || month === 6 : month >= 11;
}

/** How the evening was got from the record: the estimates of a day, or the hour of sunset; nothing for one that was given. */
export function traceEvening(at: StationDay, tonight: { evening: Evening; from: EveningSource }, trace: Trace, strip: string): void {
  const { evening, from } = tonight;
  if (from === 'given') return;
  const { completed } = at.record;
  const place = at.station * completed.dayCount + at.day;
  const times = timesOf(at);
  const common = { part: 'evening', strip };
  if (from === 'daily') {
    const [high, low] = [completed.airTemperatureMax[place], completed.airTemperatureMin[place]];
    trace.step({
      ...{ ...common, symbol: 'T0', name: 'air temperature at sunset, estimated from the day' },
      expression: 'Tn + (Tx − Tn) sin[π (N + 0.17) / (N + 3.72)]',
      inputs: [quantity('Tn', low, '°C'), quantity('Tx', high, '°C'), quantity('N', times.daylight, 'h')],
      ...{ result: evening.airTemperature, unit: '°C', source: 'Parton & Logan (1981), Agricultural Meteorology 23, 205–216 (recalled)' },
    });
    trace.step({
      ...{ ...common, symbol: 'Td', name: 'dew point at sunset, from the vapour pressure of the day, not above T0' },
      expression: '237.3 x / (17.27 − x), x = ln(e / 0.6108)',
      inputs: [quantity('e', completed.actualVapourPressure[place], 'kPa'), quantity('T0', evening.airTemperature, '°C')],
      ...{ result: evening.dewPoint, unit: '°C', source: 'FAO-56 Eq. 11, solved for T' },
    });
    trace.step({
      ...{ ...common, symbol: 'u', name: 'wind of the night, estimated from the mean of the day' },
      expression: '2 u2 / 3',
      inputs: [quantity('u2', completed.windSpeed2m[place], 'm s⁻¹')],
      ...{
        result: evening.windSpeed,
        unit: 'm s⁻¹',
        source: 'FAO Irrigation and Drainage Paper 24 (1977) (recalled): by day twice the night',
      },
    });
  }
  const { radiation, clear } = dayRadiation(at);
  trace.step({
    ...{ ...common, symbol: 'f', name: 'cloud factor of the day, taken for the night; Rs / Rso counts as at most 1, f as at least 0.05' },
    expression: '1.35 Rs / Rso − 0.35',
    inputs: [quantity('Rs', radiation, 'MJ m⁻² d⁻¹'), quantity('Rso', clear, 'MJ m⁻² d⁻¹')],
    ...{ result: evening.cloudFactor, unit: '1', source: 'FAO-56 Eq. 37, 39' },
  });
}
