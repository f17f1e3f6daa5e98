/**
 * Weather at a parcel from the sites around it, and the reference ET it drives.
 *
 * Temperatures are brought from the site's elevation to the parcel's by the lapse rate of the settings. A site without weather on a day drops out of
 * that day and the remaining weights are scaled up to 1.
 */
import { solarGeometry } from '../energy/sun.ts';
import { placeGroundWater } from './ground-water.ts';
import { joinFlags, MOST_TOGETHER, meanRow, mixRows, openMix, openTogether, weighDays } from './mix.ts';
import type { Mix, PackedSeason } from './pack.ts';
import { solveParcelDays } from './parcel-energy.ts';
import { noWeather, placeReferenceDay } from './parcel-reference.ts';
import { placeSeries } from './series-weather.ts';
import type { ParcelInput } from './types.ts';

/**
 * Fills `season.weather` and `season.flags` for one parcel: `placeAtmosphere`, then `placeGroundWater`.
 *
 * @throws {RangeViolation} naming parcel and date when no site has weather that day
 */
export function placeWeather(season: PackedSeason, parcel: ParcelInput): void {
  placeAtmosphere(season, parcel);
  placeGroundWater(season, parcel);
}

/**
 * Fills what the sky brings to a parcel: everything in `season.weather` but `liquid`, `snowWater`, `frozen` and `surfaceRunoff`; and `season.flags`.
 * It depends on weights, series, elevation and latitude alone, so parcels that agree in these may share it.
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
export function placeAtmosphere(season: PackedSeason, parcel: ParcelInput): void {
  if (season.sun.latitude !== parcel.latitude) solarGeometry(parcel.latitude, season.sun);
  placeReferenceDay(season.reference, parcel.elevation);
  if (parcel.series || season.input.weather.referenceEt) placeSeries(season, parcel);
  else {
    gather(season, parcel);
    solveParcelDays(season, parcel);
  }
}

/** Means of the sites' values by the weights present; sites without gaps go the short way. */
function gather(season: PackedSeason, parcel: ParcelInput): void {
  const mix = openMix(season, parcel);
  weighDays(mix, season.weather.weightSum);
  joinFlags(mix, season.input.weather.flags, season.flags);
  if (mix.complete && mix.count <= MOST_TOGETHER) gatherTogether(season, mix);
  else {
    gatherPresent(season, mix);
    scale(season, parcel);
  }
}

function gatherTogether({ weather, input: { weather: from } }: PackedSeason, mix: Mix): void {
  const sites = openTogether(mix);
  meanRow(sites, from.airTemperatureMax, sites.lapse, weather.airTemperatureMax);
  meanRow(sites, from.airTemperatureMin, sites.lapse, weather.airTemperatureMin);
  meanRow(sites, from.actualVapourPressure, 0, weather.actualVapourPressure);
  meanRow(sites, from.solarRadiation, 0, weather.solarRadiation);
  meanRow(sites, from.windSpeed2m, 0, weather.windSpeed2m);
  meanRow(sites, from.precipitation, 0, weather.precipitation);
}

function gatherPresent({ weather, input: { weather: from } }: PackedSeason, mix: Mix): void {
  mixRows(mix, from.airTemperatureMax, mix.lapse, weather.airTemperatureMax);
  mixRows(mix, from.airTemperatureMin, mix.lapse, weather.airTemperatureMin);
  mixRows(mix, from.actualVapourPressure, mix.none, weather.actualVapourPressure);
  mixRows(mix, from.solarRadiation, mix.none, weather.solarRadiation);
  mixRows(mix, from.windSpeed2m, mix.none, weather.windSpeed2m);
  mixRows(mix, from.precipitation, mix.none, weather.precipitation);
}

/** Divides by the weights present. */
function scale(season: PackedSeason, parcel: ParcelInput): void {
  const w = season.weather;
  for (let d = 0; d < season.input.dayCount; d++) {
    if (w.weightSum[d] === 0) throw noWeather(season, parcel, d);
    const scale = 1 / w.weightSum[d];
    w.airTemperatureMax[d] *= scale;
    w.airTemperatureMin[d] *= scale;
    w.actualVapourPressure[d] *= scale;
    w.solarRadiation[d] *= scale;
    w.windSpeed2m[d] *= scale;
    w.precipitation[d] *= scale;
  }
}
