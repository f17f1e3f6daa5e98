/**
 * Weather at a parcel where a series has weights of its own, or where the reference ET is carried from the sites instead of being computed
 * at the parcel. The plain case, one set of weights for all, is in `parcel-weather.ts` and costs less.
 */
import { climateTerm, relativeHumidityMinimum } from '../crop/climate-adjustment.ts';
import { type CarriedSeries, COMPLETED_SERIES, FALLBACK, type SiteWeight } from '../weather/variable.ts';
import { lapseCorrection, openMix, weighDays } from './mix.ts';
import type { PackedSeason } from './pack.ts';
import { noWeather, solveWithinSaturation } from './parcel-reference.ts';
import type { ParcelInput } from './types.ts';

/** Least share of a series' own weights that must report on a day; below it the shared weights stand in. The product's own limit. */
const LEAST_OWN_SHARE = 0.5;

/** Series that cannot be negative: kriging weights can be, and a mix of them too. */
const NOT_NEGATIVE: ReadonlySet<CarriedSeries> = new Set([
  'actualVapourPressure',
  'solarRadiation',
  'windSpeed2m',
  'precipitation',
  'referenceEt',
]);

/** The climate of the crop tables, which leaves their coefficients as they are. Source: FAO-56 Table 12 and Eq. 62: u2 = 2 m/s, RHmin = 45 %. */
const STANDARD_WIND = 2;
const STANDARD_HUMIDITY = 45;

/** A site's part in one value of a parcel. */
export interface SeriesPart {
  readonly site: number;
  /** share among the sites that reported */
  readonly weight: number;
  /** what is added to the site's value for the difference in elevation, in the unit of the series */
  readonly shift: number;
}

/** The weights and gradient one series goes by on one day. */
interface Chosen {
  weights: readonly SiteWeight[];
  sum: number;
  own: boolean;
}

/**
 * Fills `season.weather` and `season.flags` for one parcel, each series by its own weights where it has some.
 *
 *   x = Σ w (x site + gradient (z parcel − z site)) / Σ w, over the sites that report the series that day
 *
 * Where less than half of a series' own weights reports on a day, the shared weights stand in (with the lapse rate, for temperature). Vapour pressure,
 * radiation, wind, rain and reference ET are held at 0 or above; where maximum and minimum temperature cross, both take their mean.
 *
 * With `weather.referenceEt` the reference ET is that mean and nothing is computed at the parcel; days without temperature are then possible:
 * the climate term is 0 and RHmin 45 % (flag `climateAssumedStandard`).
 *
 * @throws {RangeViolation} naming parcel and date when no site has the weather, or the reference ET and rain, of a day
 */
export function placeSeries(season: PackedSeason, parcel: ParcelInput): void {
  weighDays(openMix(season, parcel), season.weather.weightSum);
  season.flags.fill(0);
  for (const name of COMPLETED_SERIES) mixSeries(season, parcel, name, season.weather[name]);
  if (season.input.weather.referenceEt) mixSeries(season, parcel, 'referenceEt', season.weather.referenceEt);
  finishSeries(season, parcel);
}

const chosen: Chosen = { weights: [], sum: 0, own: false };

/** Which weights a series goes by on a day; left in `chosen`. Sum 0 when no site reports. */
function choose(season: PackedSeason, parcel: ParcelInput, name: CarriedSeries, day: number): Chosen {
  const own = parcel.series?.[name];
  if (own) {
    chosen.weights = own.weights;
    chosen.sum = sumReporting(season, own.weights, name, day, true);
    chosen.own = true;
    if (chosen.sum >= LEAST_OWN_SHARE) return chosen;
  }
  chosen.weights = parcel.weights;
  chosen.sum = sumReporting(season, parcel.weights, name, day, false);
  chosen.own = false;
  return chosen;
}

function sumReporting(season: PackedSeason, weights: readonly SiteWeight[], name: CarriedSeries, day: number, own: boolean): number {
  let sum = 0;
  for (const { site, weight } of weights) if (reports(season, name, site, day, own)) sum += weight;
  return sum;
}

/** By shared weights a site counts when its day is whole; by weights of its own, and where reference ET is carried, when it has the value. */
function reports(season: PackedSeason, name: CarriedSeries, site: number, day: number, own: boolean): boolean {
  const at = site * season.input.dayCount + day;
  const { weather } = season.input;
  const alone = own || name === 'referenceEt' || (name === 'precipitation' && Boolean(weather.referenceEt));
  return alone ? Number.isFinite(weather[name]?.[at] ?? Number.NaN) : season.present[at] === 1;
}

/** Change of a site's value towards the parcel's elevation. */
function shiftOf(season: PackedSeason, parcel: ParcelInput, name: CarriedSeries, site: number, own: boolean): number {
  const series = own ? parcel.series?.[name] : undefined;
  const { sites, settings } = season.input;
  if (series) return Number.isNaN(sites[site].elevation) ? 0 : series.gradient * (parcel.elevation - sites[site].elevation);
  if (name !== 'airTemperatureMax' && name !== 'airTemperatureMin') return 0;
  return lapseCorrection(sites[site], parcel, settings.lapseRate);
}

function mixSeries(season: PackedSeason, parcel: ParcelInput, name: CarriedSeries, into: Float64Array): void {
  const { dayCount, weather } = season.input;
  const from = weather[name] as Float64Array;
  for (let day = 0; day < dayCount; day++) {
    const { weights, sum, own } = choose(season, parcel, name, day);
    if (!(sum > 0)) {
      into[day] = Number.NaN;
      continue;
    }
    let total = 0;
    for (const { site, weight } of weights) {
      if (weight === 0 || !reports(season, name, site, day, own)) continue;
      total += weight * (from[site * dayCount + day] + shiftOf(season, parcel, name, site, own));
      season.flags[day] |= weather.flags[site * dayCount + day] & BITS_OF[name];
    }
    const value = total / sum;
    into[day] = value < 0 && NOT_NEGATIVE.has(name) ? 0 : value;
  }
}

/**
 * The sites behind one value of a parcel, as `placeSeries` took them that day.
 *
 * @returns parts whose weights sum to 1; none when no site reported
 */
export function seriesParts(season: PackedSeason, parcel: ParcelInput, name: CarriedSeries, day: number): SeriesPart[] {
  const { weights, sum, own } = choose(season, parcel, name, day);
  return weights
    .filter(({ site, weight }) => weight !== 0 && reports(season, name, site, day, own))
    .map(({ site, weight }) => ({ site, weight: weight / sum, shift: shiftOf(season, parcel, name, site, own) }));
}

/** What the crops need of the day: vapour pressure within es, RHmin, climate term, reference ET where it is not carried. */
function finishSeries(season: PackedSeason, parcel: ParcelInput): void {
  const w = season.weather;
  const carried = Boolean(season.input.weather.referenceEt);
  for (let d = 0; d < season.input.dayCount; d++) {
    const whole = uncross(season, d);
    if (Number.isNaN(w.precipitation[d]) || (carried ? Number.isNaN(w.referenceEt[d]) : !whole)) throw noWeather(season, parcel, d);
    if (whole) deriveAt(season, d, carried);
    else {
      w.humidityMinimum[d] = STANDARD_HUMIDITY;
      w.climate[d] = 0;
      season.flags[d] |= FALLBACK.climateAssumedStandard;
    }
    w.windSum[d + 1] = w.windSum[d] + (whole ? w.windSpeed2m[d] : STANDARD_WIND);
    w.humiditySum[d + 1] = w.humiditySum[d] + w.humidityMinimum[d];
  }
}

/** Brings crossed temperatures together; false when the day lacks temperature, humidity, radiation or wind. */
function uncross(season: PackedSeason, d: number): boolean {
  const w = season.weather;
  if (w.airTemperatureMax[d] < w.airTemperatureMin[d]) {
    w.airTemperatureMax[d] = (w.airTemperatureMax[d] + w.airTemperatureMin[d]) / 2;
    w.airTemperatureMin[d] = w.airTemperatureMax[d];
  }
  w.airTemperatureMean[d] = (w.airTemperatureMax[d] + w.airTemperatureMin[d]) / 2;
  return Number.isFinite(
    w.airTemperatureMax[d] + w.airTemperatureMin[d] + w.actualVapourPressure[d] + w.solarRadiation[d] + w.windSpeed2m[d],
  );
}

function deriveAt(season: PackedSeason, d: number, carried: boolean): void {
  const w = season.weather;
  const day = season.reference;
  day.extraterrestrialRadiation = season.sun.extraterrestrialRadiation[season.dayOfYear[d]];
  day.airTemperatureMax = w.airTemperatureMax[d];
  day.airTemperatureMin = w.airTemperatureMin[d];
  day.actualVapourPressure = w.actualVapourPressure[d];
  day.solarRadiation = w.solarRadiation[d];
  day.windSpeed2m = w.windSpeed2m[d];
  solveWithinSaturation(season, day);
  w.actualVapourPressure[d] = day.actualVapourPressure;
  if (!carried) w.referenceEt[d] = day.referenceEt;
  w.humidityMinimum[d] = relativeHumidityMinimum(day.actualVapourPressure, day.saturationAtMax);
  w.climate[d] = climateTerm(day.windSpeed2m, w.humidityMinimum[d]);
}

const TEMPERATURE_BITS =
  FALLBACK.temperatureFilledInTime |
  FALLBACK.temperatureFromNormal |
  FALLBACK.temperatureExtremesFromMean |
  FALLBACK.temperatureFromNeighbour |
  FALLBACK.temperatureFromSource;
const RAIN_BITS = FALLBACK.precipitationAssumedZero | FALLBACK.precipitationFromNeighbour;

/** What of a site's flags a series brings along: humidity and radiation may have been estimated from temperature. */
const BITS_OF: Readonly<Record<CarriedSeries, number>> = {
  airTemperatureMax: TEMPERATURE_BITS | FALLBACK.elevationAssumed,
  airTemperatureMin: TEMPERATURE_BITS | FALLBACK.elevationAssumed,
  actualVapourPressure:
    FALLBACK.humidityFromDewPoint |
    FALLBACK.humidityFromRhMax |
    FALLBACK.humidityFromRhMean |
    FALLBACK.humidityFromMinimumTemperature |
    FALLBACK.humidityFromNeighbour |
    FALLBACK.humidityFromSource,
  solarRadiation:
    FALLBACK.radiationFromSunshine |
    FALLBACK.radiationFromTemperatureRange |
    FALLBACK.radiationCappedAtClearSky |
    FALLBACK.radiationFromNeighbour |
    FALLBACK.radiationFromSource,
  windSpeed2m:
    FALLBACK.windAssumed | FALLBACK.windHeightAssumed | FALLBACK.windFromNeighbour | FALLBACK.windFromSource | FALLBACK.windFromNormal,
  precipitation: RAIN_BITS,
  referenceEt: ~RAIN_BITS,
};
