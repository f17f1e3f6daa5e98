/**
 * Water that reaches the ground of a parcel and what of it runs off: snow kept and melted, frozen ground, runoff by the curve number.
 */
import { frozenGroundIndex, isGroundFrozen } from '../crop/frozen-ground.ts';
import { type AntecedentCondition, antecedentCondition, curveNumbers, potentialRetention, surfaceRunoff } from '../crop/runoff.ts';
import { degreeDayMelt, snowShare } from '../crop/snow.ts';
import type { PackedSeason, ParcelWeather } from './pack.ts';
import type { ParcelInput } from './types.ts';

/** Days whose rain makes the antecedent condition. Source: NEH section 4, Table 4.2 (recalled, not re-read). */
export const ANTECEDENT_DAYS = 5;

/** Mean temperature of those days from which the growing season is taken to be on [°C]. Common practice, no source. */
const GROWING_FROM = 5;

/**
 * Fills `liquid`, `snowWater`, `frozen` and `surfaceRunoff` of `season.weather`, from its precipitation and mean temperature.
 *
 *   snow on: S = S before + fs P − M, liquid = (1 − fs) P + M; off: liquid = P
 *   runoff by the curve number of the soil, as it is or by the rain of five days before; all of `liquid` on frozen ground
 *
 * With antecedent moisture by the surface layer the runoff of days that are not frozen is left at 0: it differs by strip, and the loop over the days
 * reckons it. A day without temperature has rain and no melt, and leaves the frost index as it was. Snow of the parcel's initial water counts only where
 * snow is kept. The ground begins thawed.
 *
 * Source: see `lib/crop/{snow,frozen-ground,runoff}`.
 */
export function placeGroundWater(season: PackedSeason, parcel: ParcelInput): void {
  const { settings, dayCount } = season.input;
  const { weather } = season;
  if (settings.snow) keepSnow(weather, openingSnow(parcel));
  else weather.liquid.set(weather.precipitation);
  if (settings.frozenGround) freezeGround(season, parcel, dayCount);
  runOff(season, parcel);
  if (settings.frozenGround) shedFrozen(weather);
}

/** Snow on the ground before the first day [mm]. */
export function openingSnow(parcel: ParcelInput): number {
  return Math.max(0, parcel.initialWater?.snow ?? 0);
}

function keepSnow(weather: ParcelWeather, opening: number): void {
  const { precipitation, airTemperatureMean, liquid, snowWater } = weather;
  let snow = opening;
  for (let d = 0; d < liquid.length; d++) {
    const temperature = airTemperatureMean[d];
    let rain = precipitation[d];
    if (!Number.isNaN(temperature)) {
      const fallen = rain > 0 ? snowShare(temperature) * rain : 0;
      const lying = snow + fallen;
      const melt = lying > 0 ? degreeDayMelt(lying, temperature) : 0;
      rain = rain - fallen + melt;
      snow = lying - melt;
    }
    liquid[d] = rain;
    snowWater[d] = snow;
  }
}

/**
 * Fills `frozen` up to a day, from the mean temperature and the snow that lay as each day began.
 *
 * @param days how many days are gone through
 * @returns frost index of the last of them [°C d]; 0 for none
 */
export function freezeGround(season: PackedSeason, parcel: ParcelInput, days: number): number {
  const { airTemperatureMean, snowWater, frozen } = season.weather;
  let index = 0;
  let was = false;
  let snow = season.input.settings.snow ? openingSnow(parcel) : 0;
  for (let d = 0; d < days; d++) {
    const temperature = airTemperatureMean[d];
    if (!Number.isNaN(temperature)) index = frozenGroundIndex(index, temperature, snow);
    was = isGroundFrozen(index, was);
    frozen[d] = was ? 1 : 0;
    snow = snowWater[d];
  }
  return index;
}

/** Whether the loop over the days reckons the runoff, from the surface layer of each strip. */
export function runoffByStrip(season: PackedSeason, parcel: ParcelInput): boolean {
  const { runoff, antecedentMoisture } = season.input.settings;
  return runoff && antecedentMoisture === 'surface-layer' && !Number.isNaN(parcel.soil.curveNumber);
}

function runOff(season: PackedSeason, parcel: ParcelInput): void {
  const { settings } = season.input;
  const { weather } = season;
  const { liquid, surfaceRunoff: runoff } = weather;
  const { curveNumber } = parcel.soil;
  if (!settings.runoff || Number.isNaN(curveNumber) || settings.antecedentMoisture === 'surface-layer') {
    runoff.fill(0);
    return;
  }
  const average = potentialRetention(curveNumber);
  if (settings.antecedentMoisture !== 'five-day-rain') {
    for (let d = 0; d < runoff.length; d++) runoff[d] = surfaceRunoff(liquid[d], average);
    return;
  }
  const numbers = curveNumbers(curveNumber);
  const dry = potentialRetention(numbers.dry);
  const wet = potentialRetention(numbers.wet);
  for (let d = 0; d < runoff.length; d++) {
    if (liquid[d] === 0) {
      runoff[d] = 0;
      continue;
    }
    const condition = conditionBefore(weather, d);
    runoff[d] = surfaceRunoff(liquid[d], condition === 1 ? dry : condition === 2 ? average : wet);
  }
}

/**
 * Antecedent condition of a day: by the rain and melt of the five days before, in the growing season where their mean temperature is 5 °C or more (or
 * unknown). Average on the first five days of the record.
 */
export function conditionBefore(weather: ParcelWeather, day: number): AntecedentCondition {
  if (day < ANTECEDENT_DAYS) return 2;
  return antecedentCondition(fiveDayRain(weather, day), isGrowing(weather, day));
}

/** Rain and melt of the five days before a day [mm]. */
export function fiveDayRain({ liquid }: ParcelWeather, day: number): number {
  let sum = 0;
  for (let d = day - ANTECEDENT_DAYS; d < day; d++) sum += liquid[d];
  return sum;
}

/** Whether the five days before a day were warm enough for growth; true where their temperature is not known. */
export function isGrowing({ airTemperatureMean }: ParcelWeather, day: number): boolean {
  let sum = 0;
  for (let d = day - ANTECEDENT_DAYS; d < day; d++) sum += airTemperatureMean[d];
  return !(sum < ANTECEDENT_DAYS * GROWING_FROM);
}

function shedFrozen({ liquid, frozen, surfaceRunoff: runoff }: ParcelWeather): void {
  for (let d = 0; d < runoff.length; d++) if (frozen[d] === 1) runoff[d] = liquid[d];
}
