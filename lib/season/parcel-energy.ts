/**
 * Reference ET and what the crops need of the climate, for all days of a parcel in one loop.
 *
 * The same equations in the same order as `solveReferenceDay`, so that both give one number to the last bit; here every quantity lives in a local,
 * which is several times faster over many parcels. `solveReferenceDay` keeps the intermediate quantities and tells the working. The exponentials are taken
 * row by row first, in short loops of their own: in one long loop the compiler calls them instead of laying them in line.
 */
import { AERODYNAMIC_KELVIN_OFFSET, EVAPORATED_DEPTH_PER_ENERGY } from '../base/constants.ts';
import { exponential } from '../base/exponential.ts';
import { climateTerm, relativeHumidityMinimum } from '../crop/climate-adjustment.ts';
import { atmosphericPressure, psychrometricConstant } from '../energy/air.ts';
import { saturationVapourPressure } from '../energy/humidity.ts';
import { blackBodyRadiation, clearSkyRadiation, netLongwave, netShortwave, relativeShortwave } from '../energy/radiation.ts';
import { SOIL_HEAT_FLUX_DAY } from '../energy/soil-heat.ts';
import type { PackedSeason } from './pack.ts';
import type { ParcelInput } from './types.ts';

/**
 * Fills reference ET, RHmin, the climate term and the running sums from the parcel's own temperatures, vapour pressure, radiation and wind, which are in
 * `season.weather` already. The vapour pressure is held at es of the parcel.
 *
 *   ET = [0.408 Δ (Rn − G) + γ Cn/(T + 273) u2 (es − ea)] / [Δ + γ (1 + Cd u2)], not below 0
 *
 * Missing: the caller has refused days without weather before.
 * Source: FAO-56 Eq. 6 and 63, or ASCE 2005 Eq. 1, as `dailyConstants` says.
 */
export function solveParcelDays(season: PackedSeason, parcel: ParcelInput): void {
  const { elevation } = parcel;
  const { numerator, denominator, slope: slopeFactor, stefanBoltzmann, lowestRelativeShortwave, lowestWind } = season.constants;
  const gamma = psychrometricConstant(atmosphericPressure(elevation));
  const { dayOfYear } = season;
  const ra = season.sun.extraterrestrialRadiation;
  const w = season.weather;
  const { airTemperatureMax, airTemperatureMin, airTemperatureMean, actualVapourPressure, solarRadiation, windSpeed2m } = w;
  const { referenceEt, humidityMinimum, climate, windSum, humiditySum } = w;
  const days = referenceEt.length;
  // rows that are written last hold what comes first: e° of the two extremes and Δ
  fillSaturation(airTemperatureMax, humidityMinimum);
  fillSaturation(airTemperatureMin, climate);
  fillSlope(airTemperatureMax, airTemperatureMin, slopeFactor, referenceEt);
  let wind = 0;
  let humidity = 0;
  for (let d = 0; d < days; d++) {
    const maximum = airTemperatureMax[d];
    const minimum = airTemperatureMin[d];
    const mean = (maximum + minimum) / 2;
    const saturationAtMax = humidityMinimum[d];
    const saturation = (saturationAtMax + climate[d]) / 2;
    const slope = referenceEt[d];
    const brought = actualVapourPressure[d];
    const vapour = saturation - brought >= 0 ? brought : saturation;
    const shortwave = solarRadiation[d];
    const relative = relativeShortwave(shortwave, clearSkyRadiation(ra[dayOfYear[d]], elevation), lowestRelativeShortwave);
    const blackBody = (blackBodyRadiation(maximum, stefanBoltzmann) + blackBodyRadiation(minimum, stefanBoltzmann)) / 2;
    const netRadiation = netShortwave(shortwave) - netLongwave(blackBody, vapour, relative);
    const blown = windSpeed2m[d];
    const used = Math.max(blown, lowestWind);
    const fromRadiation = EVAPORATED_DEPTH_PER_ENERGY * slope * (netRadiation - SOIL_HEAT_FLUX_DAY);
    const fromWind = ((gamma * numerator) / (mean + AERODYNAMIC_KELVIN_OFFSET)) * used * (saturation - vapour);
    const combination = (fromRadiation + fromWind) / (slope + gamma * (1 + denominator * used));
    const dryness = relativeHumidityMinimum(vapour, saturationAtMax);
    airTemperatureMean[d] = mean;
    actualVapourPressure[d] = vapour;
    referenceEt[d] = Math.max(combination, 0);
    humidityMinimum[d] = dryness;
    climate[d] = climateTerm(blown, dryness);
    wind += blown;
    humidity += dryness;
    windSum[d + 1] = wind;
    humiditySum[d + 1] = humidity;
  }
}

function fillSaturation(airTemperature: Float64Array, into: Float64Array): void {
  for (let d = 0; d < into.length; d++) into[d] = saturationVapourPressure(airTemperature[d]);
}

/** Δ at the mean temperature, by the constant of the publication. Source: FAO-56 Eq. 13; ASCE 2005 Eq. 5. */
function fillSlope(airTemperatureMax: Float64Array, airTemperatureMin: Float64Array, factor: number, into: Float64Array): void {
  for (let d = 0; d < into.length; d++) {
    const mean = (airTemperatureMax[d] + airTemperatureMin[d]) / 2;
    const t = mean + 237.3;
    into[d] = (factor * exponential((17.27 * mean) / t)) / (t * t);
  }
}
