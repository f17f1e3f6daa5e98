/**
 * The combination equation for the two reference surfaces: the constants of each publication, and one day solved step by step.
 */
import {
  AERODYNAMIC_KELVIN_OFFSET,
  EVAPORATED_DEPTH_PER_ENERGY,
  STEFAN_BOLTZMANN_DAY_ASCE2005,
  STEFAN_BOLTZMANN_DAY_FAO56,
} from '../base/constants.ts';
import { RangeViolation } from '../base/errors.ts';
import { exponential } from '../base/exponential.ts';
import { saturationVapourPressure } from './humidity.ts';
import { blackBodyRadiation, clearSkyRadiation, netLongwave, netShortwave, relativeShortwave } from './radiation.ts';
import { SOIL_HEAT_FLUX_DAY } from './soil-heat.ts';
import type { SunDay } from './sun.ts';

export type CombinationMethod = 'fao56' | 'asce2005';
export type ReferenceSurface = 'short' | 'tall';

/** What one publication fixes for one surface and a daily step. */
export interface DailyConstants {
  readonly method: CombinationMethod;
  readonly surface: ReferenceSurface;
  /** Cn [K mm s³ Mg⁻¹ d⁻¹] */
  readonly numerator: number;
  /** Cd [s m⁻¹] */
  readonly denominator: number;
  /** coefficient of Δ, which multiplies exp[17.27 T/(T + 237.3)]/(T + 237.3)² */
  readonly slope: number;
  /** σ [MJ K⁻⁴ m⁻² d⁻¹] */
  readonly stefanBoltzmann: number;
  /** lowest Rs/Rso in the cloud factor */
  readonly lowestRelativeShortwave: number;
  /** lowest u2 [m s⁻¹] */
  readonly lowestWind: number;
}

/** Source: FAO-56 Eq. 6, 13, 39; u2 of at least 0.5 m s⁻¹ as that paper advises. */
const FAO56_SHORT: DailyConstants = {
  method: 'fao56',
  surface: 'short',
  numerator: 900,
  denominator: 0.34,
  slope: 4098 * 0.6108,
  stefanBoltzmann: STEFAN_BOLTZMANN_DAY_FAO56,
  lowestRelativeShortwave: 0,
  lowestWind: 0.5,
};

/** Source: ASCE 2005 Table 1 and Eq. 5, 17, 18 (recalled, not re-read; Cd confirmed by rs · u2 / ra). */
const ASCE2005_SHORT: DailyConstants = {
  method: 'asce2005',
  surface: 'short',
  numerator: 900,
  denominator: 0.34,
  slope: 2503,
  stefanBoltzmann: STEFAN_BOLTZMANN_DAY_ASCE2005,
  lowestRelativeShortwave: 0.3,
  lowestWind: 0,
};

const ASCE2005_TALL: DailyConstants = { ...ASCE2005_SHORT, surface: 'tall', numerator: 1600, denominator: 0.38 };

/**
 * Constants of a publication and surface for a daily step.
 *
 * @throws {RangeViolation} for FAO-56 with the tall surface, which that paper does not define
 * @example dailyConstants('asce2005', 'tall').numerator // 1600
 */
export function dailyConstants(method: CombinationMethod, surface: ReferenceSurface): DailyConstants {
  if (method === 'asce2005') return surface === 'tall' ? ASCE2005_TALL : ASCE2005_SHORT;
  if (surface === 'tall') {
    throw new RangeViolation('reference surface "tall" is not defined by method "fao56": use method "asce2005" or surface "short"');
  }
  return FAO56_SHORT;
}

/** One day at one place: what goes in, every quantity on the way, and the result. Solved in place, so that a batch allocates nothing. */
export interface ReferenceDay extends SunDay {
  /** z [m] */
  elevation: number;
  /** P [kPa] and γ [kPa °C⁻¹], which hang on elevation alone */
  pressure: number;
  psychrometricConstant: number;
  airTemperatureMax: number;
  airTemperatureMin: number;
  actualVapourPressure: number;
  solarRadiation: number;
  windSpeed2m: number;
  airTemperatureMean: number;
  /** u2 after the method's lowest wind [m s⁻¹] */
  windSpeedUsed: number;
  saturationAtMax: number;
  saturationAtMin: number;
  saturationVapourPressure: number;
  vapourPressureDeficit: number;
  slope: number;
  clearSkyRadiation: number;
  relativeShortwave: number;
  netShortwave: number;
  blackBodyRadiation: number;
  netLongwave: number;
  netRadiation: number;
  soilHeatFlux: number;
  radiationNumerator: number;
  windNumerator: number;
  denominator: number;
  /** the combination equation as it stands, possibly below 0 */
  combination: number;
  /** floored at 0 [mm d⁻¹] */
  referenceEt: number;
}

/** A day with nothing in it yet. Every field is there, so that the shape of the object never changes. */
export function emptyReferenceDay(): ReferenceDay {
  return {
    inverseDistance: Number.NaN,
    declination: Number.NaN,
    sinSin: Number.NaN,
    cosCos: Number.NaN,
    sunsetAngle: Number.NaN,
    extraterrestrialRadiation: Number.NaN,
    elevation: Number.NaN,
    pressure: Number.NaN,
    psychrometricConstant: Number.NaN,
    airTemperatureMax: Number.NaN,
    airTemperatureMin: Number.NaN,
    actualVapourPressure: Number.NaN,
    solarRadiation: Number.NaN,
    windSpeed2m: Number.NaN,
    airTemperatureMean: Number.NaN,
    windSpeedUsed: Number.NaN,
    saturationAtMax: Number.NaN,
    saturationAtMin: Number.NaN,
    saturationVapourPressure: Number.NaN,
    vapourPressureDeficit: Number.NaN,
    slope: Number.NaN,
    clearSkyRadiation: Number.NaN,
    relativeShortwave: Number.NaN,
    netShortwave: Number.NaN,
    blackBodyRadiation: Number.NaN,
    netLongwave: Number.NaN,
    netRadiation: Number.NaN,
    soilHeatFlux: Number.NaN,
    radiationNumerator: Number.NaN,
    windNumerator: Number.NaN,
    denominator: Number.NaN,
    combination: Number.NaN,
    referenceEt: Number.NaN,
  };
}

/**
 * Solves one day in place, from the weather and sun already in it.
 *   ET = [0.408 Δ (Rn − G) + γ Cn/(T + 273) u2 (es − ea)] / [Δ + γ (1 + Cd u2)]
 *
 * Missing: NaN in any of the inputs gives NaN in `referenceEt`. A result below 0 (dew) becomes 0, since no crop demand can be negative;
 * `combination` keeps it.
 * Source: FAO-56 Eq. 6; ASCE 2005 Eq. 1 (recalled, not re-read).
 */
export function solveReferenceDay(day: ReferenceDay, constants: DailyConstants): void {
  solveHumidity(day, constants);
  solveRadiation(day, constants);
  const { slope, psychrometricConstant: gamma } = day;
  const wind = Math.max(day.windSpeed2m, constants.lowestWind);
  day.windSpeedUsed = wind;
  day.radiationNumerator = EVAPORATED_DEPTH_PER_ENERGY * slope * (day.netRadiation - day.soilHeatFlux);
  day.windNumerator =
    ((gamma * constants.numerator) / (day.airTemperatureMean + AERODYNAMIC_KELVIN_OFFSET)) * wind * day.vapourPressureDeficit;
  day.denominator = slope + gamma * (1 + constants.denominator * wind);
  day.combination = (day.radiationNumerator + day.windNumerator) / day.denominator;
  day.referenceEt = Math.max(day.combination, 0);
}

function solveHumidity(day: ReferenceDay, constants: DailyConstants): void {
  const mean = (day.airTemperatureMax + day.airTemperatureMin) / 2;
  const t = mean + 237.3;
  day.airTemperatureMean = mean;
  day.saturationAtMax = saturationVapourPressure(day.airTemperatureMax);
  day.saturationAtMin = saturationVapourPressure(day.airTemperatureMin);
  day.saturationVapourPressure = (day.saturationAtMax + day.saturationAtMin) / 2;
  day.vapourPressureDeficit = day.saturationVapourPressure - day.actualVapourPressure;
  day.slope = (constants.slope * exponential((17.27 * mean) / t)) / (t * t);
}

function solveRadiation(day: ReferenceDay, constants: DailyConstants): void {
  const sigma = constants.stefanBoltzmann;
  day.clearSkyRadiation = clearSkyRadiation(day.extraterrestrialRadiation, day.elevation);
  day.relativeShortwave = relativeShortwave(day.solarRadiation, day.clearSkyRadiation, constants.lowestRelativeShortwave);
  day.netShortwave = netShortwave(day.solarRadiation);
  day.blackBodyRadiation = (blackBodyRadiation(day.airTemperatureMax, sigma) + blackBodyRadiation(day.airTemperatureMin, sigma)) / 2;
  day.netLongwave = netLongwave(day.blackBodyRadiation, day.actualVapourPressure, day.relativeShortwave);
  day.netRadiation = day.netShortwave - day.netLongwave;
  day.soilHeatFlux = SOIL_HEAT_FLUX_DAY;
}
