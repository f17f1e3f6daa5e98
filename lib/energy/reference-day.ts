/**
 * Daily reference ET: one day with its working, many days at one place, and the energy budget of a day. All run the same solver.
 */

import { LATENT_HEAT } from '../base/constants.ts';
import { ShapeError } from '../base/errors.ts';
import type { Trace } from '../base/working.ts';
import { atmosphericPressure, psychrometricConstant } from './air.ts';
import {
  type CombinationMethod,
  dailyConstants,
  emptyReferenceDay,
  type ReferenceDay,
  type ReferenceSurface,
  solveReferenceDay,
} from './combination.ts';
import { traceReferenceDay } from './reference-day-working.ts';
import { type SolarGeometry, sunDay } from './sun.ts';

/** One day at one place. */
export interface ReferenceDayInput {
  readonly method: CombinationMethod;
  readonly surface: ReferenceSurface;
  /** whole number 1–366 */
  readonly dayOfYear: number;
  /** degrees, north positive */
  readonly latitude: number;
  /** m */
  readonly elevation: number;
  /** °C */
  readonly airTemperatureMax: number;
  /** °C */
  readonly airTemperatureMin: number;
  /** kPa */
  readonly actualVapourPressure: number;
  /** MJ m⁻² d⁻¹ */
  readonly solarRadiation: number;
  /** m s⁻¹ */
  readonly windSpeed2m: number;
}

/** Reused where nobody looks at the day afterwards, so that a call per parcel and day allocates nothing. */
const SCRATCH = emptyReferenceDay();

function solveInto(day: ReferenceDay, input: ReferenceDayInput): ReferenceDay {
  sunDay(input.latitude, input.dayOfYear, day);
  if (day.elevation !== input.elevation) placeAt(day, input.elevation);
  day.airTemperatureMax = input.airTemperatureMax;
  day.airTemperatureMin = input.airTemperatureMin;
  day.actualVapourPressure = input.actualVapourPressure;
  day.solarRadiation = input.solarRadiation;
  day.windSpeed2m = input.windSpeed2m;
  solveReferenceDay(day, dailyConstants(input.method, input.surface));
  return day;
}

function placeAt(day: ReferenceDay, elevation: number): void {
  day.elevation = elevation;
  day.pressure = atmosphericPressure(elevation);
  day.psychrometricConstant = psychrometricConstant(day.pressure);
}

/**
 * Reference ET of one day.
 *
 * Missing: NaN in any input gives NaN out. A negative result is floored at 0. Polar night: Rs/Rso is taken as 0.75.
 *
 * @param trace receives every step of the derivation; null records nothing. The result is the same either way.
 * @returns ET of the reference surface [mm d⁻¹]
 * @throws {RangeViolation} for `fao56` with the tall surface
 * @example referenceEtDay({ method: 'fao56', surface: 'short', dayOfYear: 187, latitude: 50.8, elevation: 100, airTemperatureMax: 21.5, airTemperatureMin: 12.3, actualVapourPressure: 1.4086, solarRadiation: 22.072, windSpeed2m: 2.0776 }, null) // 3.88
 * Source: FAO-56 Eq. 6; ASCE 2005 Eq. 1 (recalled, not re-read).
 */
export function referenceEtDay(input: ReferenceDayInput, trace: Trace | null): number {
  const day = solveInto(trace === null ? SCRATCH : emptyReferenceDay(), input);
  if (trace !== null) traceReferenceDay(input, day, trace);
  return day.referenceEt;
}

/** Days at one place; every array is [day]. */
interface ReferenceDaysInput {
  readonly method: CombinationMethod;
  readonly surface: ReferenceSurface;
  /** the sun over the place's latitude, from `solarGeometry` */
  readonly sun: SolarGeometry;
  /** m */
  readonly elevation: number;
  /** 1–366 */
  readonly dayOfYear: Uint16Array;
  /** °C */
  readonly airTemperatureMax: Float64Array;
  /** °C */
  readonly airTemperatureMin: Float64Array;
  /** kPa */
  readonly actualVapourPressure: Float64Array;
  /** MJ m⁻² d⁻¹ */
  readonly solarRadiation: Float64Array;
  /** m s⁻¹ */
  readonly windSpeed2m: Float64Array;
}

/**
 * Reference ET of many days at one place; each number is bit for bit that of `referenceEtDay`.
 *
 * @param out [day], overwritten [mm d⁻¹]
 * @returns `out`
 * @throws {ShapeError} when lengths differ
 * @throws {RangeViolation} for `fao56` with the tall surface
 * Source: as `referenceEtDay`.
 */
export function referenceEtDays(input: ReferenceDaysInput, out: Float64Array): Float64Array {
  checkLengths(input, out);
  const { sun, dayOfYear, airTemperatureMax, airTemperatureMin, actualVapourPressure, solarRadiation, windSpeed2m } = input;
  const constants = dailyConstants(input.method, input.surface);
  const day = emptyReferenceDay();
  placeAt(day, input.elevation);
  for (let i = 0; i < out.length; i++) {
    day.extraterrestrialRadiation = sun.extraterrestrialRadiation[dayOfYear[i]] ?? Number.NaN;
    day.airTemperatureMax = airTemperatureMax[i];
    day.airTemperatureMin = airTemperatureMin[i];
    day.actualVapourPressure = actualVapourPressure[i];
    day.solarRadiation = solarRadiation[i];
    day.windSpeed2m = windSpeed2m[i];
    solveReferenceDay(day, constants);
    out[i] = day.referenceEt;
  }
  return out;
}

const COLUMNS = ['dayOfYear', 'airTemperatureMax', 'airTemperatureMin', 'actualVapourPressure', 'solarRadiation', 'windSpeed2m'] as const;

function checkLengths(input: ReferenceDaysInput, out: Float64Array): void {
  for (const column of COLUMNS) {
    if (input[column].length !== out.length) {
      throw new ShapeError(`${column} has ${input[column].length} days, the result ${out.length}: give every array the same length`);
    }
  }
}

/** Energy budget of a day at the reference surface, all [MJ m⁻² d⁻¹]; Rn = G + λET + H. */
interface EnergyBudget {
  readonly netShortwave: number;
  readonly netLongwave: number;
  readonly netRadiation: number;
  readonly soilHeatFlux: number;
  readonly latentHeatFlux: number;
  /** H = Rn − G − λET; negative where dry air brings heat to the crop */
  readonly sensibleHeatFlux: number;
  /** mm d⁻¹ */
  readonly referenceEt: number;
}

/**
 * Energy budget of a day: where the net radiation of the reference surface goes.
 *   H = Rn − G − λET,  λ = 2.45 MJ kg⁻¹
 *
 * Missing: NaN in any input gives NaN in every flux that hangs on it.
 * Source: FAO-56 Eq. 1, with the fluxes of `referenceEtDay`.
 */
export function energyBudgetDay(input: ReferenceDayInput): EnergyBudget {
  const { netShortwave, netLongwave, netRadiation, soilHeatFlux, referenceEt } = solveInto(emptyReferenceDay(), input);
  const latentHeatFlux = referenceEt * LATENT_HEAT;
  const sensibleHeatFlux = netRadiation - soilHeatFlux - latentHeatFlux;
  return { netShortwave, netLongwave, netRadiation, soilHeatFlux, latentHeatFlux, sensibleHeatFlux, referenceEt };
}
