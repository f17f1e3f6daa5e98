/**
 * Weather at a parcel from the sites around it, and the reference ET it drives.
 *
 * Temperatures are brought from the site's elevation to the parcel's by the lapse rate of the settings. A site without weather on a day drops out of
 * that day and the remaining weights are scaled up to 1.
 */
import { climateTerm, relativeHumidityMinimum } from '../crop/climate-adjustment.ts';
import { potentialRetention, surfaceRunoff } from '../crop/runoff.ts';
import { solarGeometry } from '../energy/sun.ts';
import { joinFlags, mixRows, openMix, weighDays } from './mix.ts';
import type { PackedSeason } from './pack.ts';
import { noWeather, placeReferenceDay, solveWithinSaturation } from './parcel-reference.ts';
import { placeSeries } from './series-weather.ts';
import type { ParcelInput } from './types.ts';

/**
 * Fills `season.weather` and `season.flags` for one parcel.
 *
 *   T = Σ w (T site + lapse · (z site − z parcel)) / Σ w; every other variable Σ w x / Σ w; flags: OR of the sites with a weight
 *
 * The vapour pressure is held at the saturation value of the parcel's own temperatures, es. Reference ET is computed at the parcel, from the
 * interpolated weather, by the solver behind `referenceEtDay`, which gives the same number to the last bit.
 *
 * Where series have weights of their own, or reference ET is carried from the sites, see `placeSeries`.
 *
 * @throws {RangeViolation} naming parcel and date when no site has weather that day
 * Source: FAO-56 Eq. 11, 12, 63 and 6; weights from `lib/weather`.
 */
export function placeWeather(season: PackedSeason, parcel: ParcelInput): void {
  if (season.sun.latitude !== parcel.latitude) solarGeometry(parcel.latitude, season.sun);
  placeReferenceDay(season.reference, parcel.elevation);
  if (parcel.series || season.input.weather.referenceEt) placeSeries(season, parcel);
  else {
    gather(season, parcel);
    finish(season, parcel);
  }
  rainOff(season, parcel);
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

function rainOff(season: PackedSeason, parcel: ParcelInput): void {
  const { precipitation, surfaceRunoff: runoff } = season.weather;
  runoff.fill(0);
  if (!season.input.settings.runoff || Number.isNaN(parcel.soil.curveNumber)) return;
  const retention = potentialRetention(parcel.soil.curveNumber);
  for (let d = 0; d < runoff.length; d++) runoff[d] = surfaceRunoff(precipitation[d], retention);
}
