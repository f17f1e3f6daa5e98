/**
 * Weather at a parcel from the sites around it, and the reference ET it drives.
 *
 * Temperatures are brought from the site's elevation to the parcel's by the lapse rate of the settings. A site without weather on a day drops out of
 * that day and the remaining weights are scaled up to 1.
 */
import { isoDate } from '../base/civil-date.ts';
import { RangeViolation } from '../base/errors.ts';
import { climateTerm, relativeHumidityMinimum } from '../crop/climate-adjustment.ts';
import { potentialRetention, surfaceRunoff } from '../crop/runoff.ts';
import { atmosphericPressure, psychrometricConstant } from '../energy/air.ts';
import { type ReferenceDay, solveReferenceDay } from '../energy/combination.ts';
import { solarGeometry } from '../energy/sun.ts';
import type { Site } from '../weather/variable.ts';
import type { Mix, PackedSeason } from './pack.ts';
import type { ParcelInput } from './types.ts';

/**
 * Fills `season.weather` and `season.flags` for one parcel.
 *
 *   T = Σ w (T site + lapse · (z site − z parcel)) / Σ w; every other variable Σ w x / Σ w; flags: OR of the sites with a weight
 *
 * The vapour pressure is held at the saturation value of the parcel's own temperatures, es. Reference ET is computed at the parcel, from the
 * interpolated weather, by the solver behind `referenceEtDay`, which gives the same number to the last bit.
 *
 * @throws {RangeViolation} naming parcel and date when no site has weather that day
 * Source: FAO-56 Eq. 11, 12, 63 and 6; weights from `lib/weather`.
 */
export function placeWeather(season: PackedSeason, parcel: ParcelInput): void {
  gather(season, parcel);
  if (season.sun.latitude !== parcel.latitude) solarGeometry(parcel.latitude, season.sun);
  placeReferenceDay(season.reference, parcel.elevation);
  finish(season, parcel);
  rainOff(season, parcel);
}

/**
 * Correction of a site's temperature to the parcel's elevation.
 *   ΔT = Γ (zsite − zparcel)
 *
 * @param lapseRate Γ [°C m⁻¹], positive when it gets colder upwards; 0.0065 in the standard atmosphere
 * @returns ΔT [°C]; 0 where the site's elevation is unknown
 * Source: ISO 2533:1975, Standard Atmosphere, for the value 0.0065.
 */
export function lapseCorrection(site: Site, parcel: ParcelInput, lapseRate: number): number {
  return Number.isNaN(site.elevation) ? 0 : lapseRate * (site.elevation - parcel.elevation);
}

function gather(season: PackedSeason, parcel: ParcelInput): void {
  const { weather } = season;
  const from = season.input.weather;
  const mix = openMix(season, parcel);
  weighDays(mix, weather.weightSum);
  mixRows(mix, from.airTemperatureMax, mix.lapse, weather.airTemperatureMax);
  mixRows(mix, from.airTemperatureMin, mix.lapse, weather.airTemperatureMin);
  mixRows(mix, from.actualVapourPressure, mix.none, weather.actualVapourPressure);
  mixRows(mix, from.solarRadiation, mix.none, weather.solarRadiation);
  mixRows(mix, from.windSpeed2m, mix.none, weather.windSpeed2m);
  mixRows(mix, from.precipitation, mix.none, weather.precipitation);
  joinFlags(mix, from.flags, season.flags);
}

/** Sets up the mix of a parcel: its sites with a weight. */
function openMix(season: PackedSeason, parcel: ParcelInput): Mix {
  const { input, mix } = season;
  mix.count = 0;
  mix.complete = true;
  for (const { site, weight } of parcel.weights) {
    if (weight === 0) continue;
    mix.start[mix.count] = site * mix.days;
    mix.weight[mix.count] = weight;
    mix.lapse[mix.count] = lapseCorrection(input.sites[site], parcel, input.settings.lapseRate);
    mix.count++;
    mix.complete &&= season.complete[site];
  }
  return mix;
}

/** Sum of the weights of the sites present on each day. */
function weighDays(mix: Mix, into: Float64Array): void {
  into.fill(0);
  if (mix.complete) {
    let sum = 0;
    for (let k = 0; k < mix.count; k++) sum += mix.weight[k];
    into.fill(sum);
    return;
  }
  for (let k = 0; k < mix.count; k++) {
    for (let d = 0, i = mix.start[k]; d < mix.days; d++, i++) if (mix.present[i] === 1) into[d] += mix.weight[k];
  }
}

/** OR of the flags of the sites present on each day. */
function joinFlags(mix: Mix, from: Uint16Array, into: Uint16Array): void {
  const { days, present } = mix;
  into.fill(0);
  for (let k = 0; k < mix.count; k++) {
    for (let d = 0, i = mix.start[k]; d < days; d++, i++) into[d] |= from[i] & -present[i];
  }
}

/** Σ w (x + shift) of one variable over the sites of a parcel, day by day; four sites at a time where none has gaps. */
function mixRows(mix: Mix, from: Float64Array, shift: Float64Array, into: Float64Array): void {
  into.fill(0);
  let k = 0;
  if (mix.complete) for (; k + 3 < mix.count; k += 4) addFour(mix, k, from, into);
  for (; k < mix.count; k++) addOne(mix, k, from, into);
  let constant = 0;
  for (k = 0; k < mix.count; k++) constant += mix.weight[k] * shift[k];
  if (shift !== mix.none) shiftRow(mix, shift, constant, into);
}

function addFour(mix: Mix, k: number, from: Float64Array, into: Float64Array): void {
  const { days, weight, start } = mix;
  const [a, b, c, d] = [weight[k], weight[k + 1], weight[k + 2], weight[k + 3]];
  const [rowB, rowC, rowD] = [start[k + 1] - start[k], start[k + 2] - start[k], start[k + 3] - start[k]];
  for (let day = 0, i = start[k]; day < days; day++, i++) {
    into[day] += a * from[i] + b * from[i + rowB] + (c * from[i + rowC] + d * from[i + rowD]);
  }
}

function addOne(mix: Mix, k: number, from: Float64Array, into: Float64Array): void {
  const { days, present } = mix;
  const weight = mix.weight[k];
  for (let d = 0, i = mix.start[k]; d < days; d++, i++) if (present[i] === 1) into[d] += weight * from[i];
}

/** Adds Σ w shift: the same every day where no site has gaps, else over the sites present. */
function shiftRow(mix: Mix, shift: Float64Array, constant: number, into: Float64Array): void {
  const { days, present } = mix;
  if (mix.complete) {
    for (let d = 0; d < days; d++) into[d] += constant;
    return;
  }
  for (let k = 0; k < mix.count; k++) {
    const part = mix.weight[k] * shift[k];
    for (let d = 0, i = mix.start[k]; d < days; d++, i++) if (present[i] === 1) into[d] += part;
  }
}

/** Divides by the weights present, and derives what the crops need: vapour pressure within es, RHmin, climate term, reference ET. */
function finish(season: PackedSeason, parcel: ParcelInput): void {
  const w = season.weather;
  const day = season.reference;
  const ra = season.sun.extraterrestrialRadiation;
  for (let d = 0; d < season.input.dayCount; d++) {
    if (w.weightSum[d] === 0) throw noWeather(season, parcel, d);
    const scale = 1 / w.weightSum[d];
    w.airTemperatureMax[d] *= scale;
    w.airTemperatureMin[d] *= scale;
    w.actualVapourPressure[d] *= scale;
    w.solarRadiation[d] *= scale;
    w.windSpeed2m[d] *= scale;
    w.precipitation[d] *= scale;
    day.extraterrestrialRadiation = ra[season.dayOfYear[d]];
    day.airTemperatureMax = w.airTemperatureMax[d];
    day.airTemperatureMin = w.airTemperatureMin[d];
    day.actualVapourPressure = w.actualVapourPressure[d];
    day.solarRadiation = w.solarRadiation[d];
    day.windSpeed2m = w.windSpeed2m[d];
    solveWithinSaturation(season, day);
    w.actualVapourPressure[d] = day.actualVapourPressure;
    w.referenceEt[d] = day.referenceEt;
    w.humidityMinimum[d] = relativeHumidityMinimum(day.actualVapourPressure, day.saturationAtMax);
    w.climate[d] = climateTerm(day.windSpeed2m, w.humidityMinimum[d]);
    w.windSum[d + 1] = w.windSum[d] + day.windSpeed2m;
    w.humiditySum[d + 1] = w.humiditySum[d] + w.humidityMinimum[d];
  }
}

/** Solves the reference day; where the sites' vapour pressure exceeds es at the parcel, again with es in its place. */
function solveWithinSaturation(season: PackedSeason, day: ReferenceDay): void {
  solveReferenceDay(day, season.constants);
  if (day.vapourPressureDeficit >= 0) return;
  day.actualVapourPressure = day.saturationVapourPressure;
  solveReferenceDay(day, season.constants);
}

function placeReferenceDay(day: ReferenceDay, elevation: number): void {
  day.elevation = elevation;
  day.pressure = atmosphericPressure(elevation);
  day.psychrometricConstant = psychrometricConstant(day.pressure);
}

function rainOff(season: PackedSeason, parcel: ParcelInput): void {
  const { precipitation, surfaceRunoff: runoff } = season.weather;
  runoff.fill(0);
  if (!season.input.settings.runoff || Number.isNaN(parcel.soil.curveNumber)) return;
  const retention = potentialRetention(parcel.soil.curveNumber);
  for (let d = 0; d < runoff.length; d++) runoff[d] = surfaceRunoff(precipitation[d], retention);
}

function noWeather(season: PackedSeason, parcel: ParcelInput, day: number): RangeViolation {
  const sites = parcel.weights.map(({ site }) => season.input.sites[site].code).join(', ');
  return new RangeViolation(
    `no weather for parcel ${parcel.code} on ${isoDate(season.firstDay + day)}: none of its sites (${sites}) has a complete day; fill the gap or add a site`,
  );
}
