/**
 * The working of a reference-ET day, told from the numbers the solver left behind; nothing is computed here.
 */
import {
  AERODYNAMIC_KELVIN_OFFSET,
  EVAPORATED_DEPTH_PER_ENERGY,
  LONGWAVE_KELVIN_OFFSET,
  REFERENCE_ALBEDO,
  SOLAR_CONSTANT,
} from '../base/constants.ts';
import { quantity as q, type Trace, type WorkingStep } from '../base/working.ts';
import { type DailyConstants, dailyConstants, type ReferenceDay } from './combination.ts';
import type { ReferenceDayInput } from './reference-day.ts';

type Quantity = WorkingStep['inputs'][number];

const ENERGY = 'MJ m⁻² d⁻¹';
const SLOPE = 'kPa °C⁻¹';

/** Hands every step of a solved day to the recorder, in the order of the derivation. */
export function traceReferenceDay(input: ReferenceDayInput, day: ReferenceDay, trace: Trace): void {
  const constants = dailyConstants(input.method, input.surface);
  for (const step of airSteps(day, constants)) trace.step(step);
  for (const step of vapourSteps(day, constants)) trace.step(step);
  for (const step of sunSteps(input, day)) trace.step(step);
  for (const step of shortwaveSteps(day, constants)) trace.step(step);
  for (const step of longwaveSteps(day, constants)) trace.step(step);
  for (const step of combinationSteps(day, constants)) trace.step(step);
}

function cited(constants: DailyConstants, fao56: string, asce2005: string): string {
  return constants.method === 'fao56' ? `FAO-56 ${fao56}` : `ASCE-EWRI 2005 ${asce2005} (recalled)`;
}

function airSteps(day: ReferenceDay, constants: DailyConstants): WorkingStep[] {
  const part = 'reference-et';
  const mean = q('T', day.airTemperatureMean, '°C');
  const exponential = 'exp[17.27 T / (T + 237.3)] / (T + 237.3)²';
  return [
    {
      part,
      symbol: 'P',
      name: 'Atmospheric pressure',
      expression: 'P = 101.3 ((293 − 0.0065 z) / 293)^5.26',
      inputs: [q('z', day.elevation, 'm')],
      result: day.pressure,
      unit: 'kPa',
      source: cited(constants, 'Eq. 7', 'Eq. 3'),
    },
    {
      part,
      symbol: 'γ',
      name: 'Psychrometric constant',
      expression: 'γ = 0.665 × 10⁻³ P',
      inputs: [q('P', day.pressure, 'kPa')],
      result: day.psychrometricConstant,
      unit: SLOPE,
      source: cited(constants, 'Eq. 8', 'Eq. 4'),
    },
    {
      part,
      symbol: 'T',
      name: 'Mean air temperature',
      expression: 'T = (Tmax + Tmin) / 2',
      inputs: extremes(day),
      result: day.airTemperatureMean,
      unit: '°C',
      source: cited(constants, 'Eq. 9', 'Eq. 2'),
    },
    {
      part,
      symbol: 'Δ',
      name: 'Slope of the saturation vapour pressure curve',
      expression: constants.method === 'fao56' ? `Δ = 4098 · 0.6108 ${exponential}` : `Δ = 2503 ${exponential}`,
      inputs: [mean],
      result: day.slope,
      unit: SLOPE,
      source: cited(constants, 'Eq. 13', 'Eq. 5'),
    },
  ];
}

function extremes(day: ReferenceDay): [max: Quantity, min: Quantity] {
  return [q('Tmax', day.airTemperatureMax, '°C'), q('Tmin', day.airTemperatureMin, '°C')];
}

function vapourSteps(day: ReferenceDay, constants: DailyConstants): WorkingStep[] {
  const part = 'reference-et';
  const [max, min] = extremes(day);
  const curve = (t: string) => `e°(${t}) = 0.6108 exp[17.27 ${t} / (${t} + 237.3)]`;
  return [
    {
      part,
      symbol: 'e°(Tmax)',
      name: 'Saturation vapour pressure at maximum temperature',
      expression: curve('Tmax'),
      inputs: [max],
      result: day.saturationAtMax,
      unit: 'kPa',
      source: cited(constants, 'Eq. 11', 'Eq. 7'),
    },
    {
      part,
      symbol: 'e°(Tmin)',
      name: 'Saturation vapour pressure at minimum temperature',
      expression: curve('Tmin'),
      inputs: [min],
      result: day.saturationAtMin,
      unit: 'kPa',
      source: cited(constants, 'Eq. 11', 'Eq. 7'),
    },
    {
      part,
      symbol: 'es',
      name: 'Mean saturation vapour pressure',
      expression: 'es = [e°(Tmax) + e°(Tmin)] / 2',
      inputs: [q('e°(Tmax)', day.saturationAtMax, 'kPa'), q('e°(Tmin)', day.saturationAtMin, 'kPa')],
      result: day.saturationVapourPressure,
      unit: 'kPa',
      source: cited(constants, 'Eq. 12', 'Eq. 6'),
    },
    {
      part,
      symbol: 'VPD',
      name: 'Vapour pressure deficit',
      expression: 'VPD = es − ea',
      inputs: [q('es', day.saturationVapourPressure, 'kPa'), q('ea', day.actualVapourPressure, 'kPa')],
      result: day.vapourPressureDeficit,
      unit: 'kPa',
      source: cited(constants, 'Eq. 6, vapour pressure deficit', 'Eq. 1'),
    },
  ];
}

function sunSteps(input: ReferenceDayInput, day: ReferenceDay): WorkingStep[] {
  const part = 'radiation';
  const dayOfYear = q('J', input.dayOfYear, '1');
  const latitude = q('φ', input.latitude, '°');
  const declination = q('δ', day.declination, 'rad');
  return [
    {
      part,
      symbol: 'dr',
      name: 'Inverse relative distance Earth–Sun',
      expression: 'dr = 1 + 0.033 cos(2π J / 365)',
      inputs: [dayOfYear],
      result: day.inverseDistance,
      unit: '1',
      source: 'FAO-56 Eq. 23',
    },
    {
      part,
      symbol: 'δ',
      name: 'Solar declination',
      expression: 'δ = 0.409 sin(2π J / 365 − 1.39)',
      inputs: [dayOfYear],
      result: day.declination,
      unit: 'rad',
      source: 'FAO-56 Eq. 24',
    },
    {
      part,
      symbol: 'ωs',
      name: 'Sunset hour angle',
      expression: 'ωs = arccos(−tan φ tan δ), within 0 … π',
      inputs: [latitude, declination],
      result: day.sunsetAngle,
      unit: 'rad',
      source: 'FAO-56 Eq. 25',
    },
    {
      part,
      symbol: 'Ra',
      name: 'Extraterrestrial radiation',
      expression: 'Ra = (24·60/π) Gsc dr [ωs sin φ sin δ + cos φ cos δ sin ωs]',
      inputs: [
        q('Gsc', SOLAR_CONSTANT, 'MJ m⁻² min⁻¹'),
        q('dr', day.inverseDistance, '1'),
        q('ωs', day.sunsetAngle, 'rad'),
        latitude,
        declination,
      ],
      result: day.extraterrestrialRadiation,
      unit: ENERGY,
      source: 'FAO-56 Eq. 21',
    },
  ];
}

function shortwaveSteps(day: ReferenceDay, constants: DailyConstants): WorkingStep[] {
  const part = 'radiation';
  const rs = q('Rs', day.solarRadiation, ENERGY);
  const limits = constants.method === 'fao56' ? 'at most 1' : 'within 0.3 … 1';
  const noSun = day.clearSkyRadiation <= 0 ? '; no sun that day: 0.75 taken' : '';
  return [
    {
      part,
      symbol: 'Rso',
      name: 'Clear-sky radiation',
      expression: 'Rso = (0.75 + 2 × 10⁻⁵ z) Ra',
      inputs: [q('z', day.elevation, 'm'), q('Ra', day.extraterrestrialRadiation, ENERGY)],
      result: day.clearSkyRadiation,
      unit: ENERGY,
      source: cited(constants, 'Eq. 37', 'Eq. 19'),
    },
    {
      part,
      symbol: 'Rs/Rso',
      name: 'Relative short-wave radiation',
      expression: `Rs / Rso, ${limits}${noSun}`,
      inputs: [rs, q('Rso', day.clearSkyRadiation, ENERGY)],
      result: day.relativeShortwave,
      unit: '1',
      source: cited(constants, 'Eq. 39', 'Eq. 18'),
    },
    {
      part,
      symbol: 'Rns',
      name: 'Net short-wave radiation',
      expression: 'Rns = (1 − α) Rs',
      inputs: [q('α', REFERENCE_ALBEDO, '1'), rs],
      result: day.netShortwave,
      unit: ENERGY,
      source: cited(constants, 'Eq. 38', 'Eq. 16'),
    },
  ];
}

function longwaveSteps(day: ReferenceDay, constants: DailyConstants): WorkingStep[] {
  const part = 'radiation';
  return [
    {
      part,
      symbol: 'σT⁴',
      name: 'Black-body radiation, mean of both extremes',
      expression: `σT⁴ = σ [(Tmax + ${LONGWAVE_KELVIN_OFFSET})⁴ + (Tmin + ${LONGWAVE_KELVIN_OFFSET})⁴] / 2`,
      inputs: [
        q('σ', constants.stefanBoltzmann, 'MJ K⁻⁴ m⁻² d⁻¹'),
        q('Tmax', day.airTemperatureMax, '°C'),
        q('Tmin', day.airTemperatureMin, '°C'),
      ],
      result: day.blackBodyRadiation,
      unit: ENERGY,
      source: cited(constants, 'Eq. 39', 'Eq. 17'),
    },
    {
      part,
      symbol: 'Rnl',
      name: 'Net long-wave radiation',
      expression: 'Rnl = σT⁴ (0.34 − 0.14 √ea) (1.35 Rs/Rso − 0.35)',
      inputs: [q('σT⁴', day.blackBodyRadiation, ENERGY), q('ea', day.actualVapourPressure, 'kPa'), q('Rs/Rso', day.relativeShortwave, '1')],
      result: day.netLongwave,
      unit: ENERGY,
      source: cited(constants, 'Eq. 39', 'Eq. 17'),
    },
    {
      part,
      symbol: 'Rn',
      name: 'Net radiation',
      expression: 'Rn = Rns − Rnl',
      inputs: [q('Rns', day.netShortwave, ENERGY), q('Rnl', day.netLongwave, ENERGY)],
      result: day.netRadiation,
      unit: ENERGY,
      source: cited(constants, 'Eq. 40', 'Eq. 15'),
    },
    {
      part,
      symbol: 'G',
      name: 'Soil heat flux of a day',
      expression: 'G = 0',
      inputs: [],
      result: day.soilHeatFlux,
      unit: ENERGY,
      source: cited(constants, 'Eq. 42', 'Eq. 30'),
    },
  ];
}

function combinationSteps(day: ReferenceDay, constants: DailyConstants): WorkingStep[] {
  const part = 'reference-et';
  const slope = q('Δ', day.slope, SLOPE);
  const gamma = q('γ', day.psychrometricConstant, SLOPE);
  const wind = q('u2', day.windSpeedUsed, 'm s⁻¹');
  const source = cited(constants, 'Eq. 6', 'Eq. 1');
  const symbol = constants.surface === 'short' ? 'ETo' : 'ETr';
  const floor = day.combination < 0 ? '; below 0 (dew) taken as 0' : '';
  return [
    {
      part,
      symbol: 'u2',
      name: 'Wind speed at 2 m, as used',
      expression: constants.lowestWind > 0 ? `u2, at least ${constants.lowestWind}` : 'u2',
      inputs: [q('u2', day.windSpeed2m, 'm s⁻¹')],
      result: day.windSpeedUsed,
      unit: 'm s⁻¹',
      source: cited(constants, 'Eq. 6, lower limit advised for u2', 'Eq. 1'),
    },
    {
      part,
      symbol: 'N1',
      name: 'Numerator, radiation term',
      expression: `N1 = ${EVAPORATED_DEPTH_PER_ENERGY} Δ (Rn − G)`,
      inputs: [slope, q('Rn', day.netRadiation, ENERGY), q('G', day.soilHeatFlux, ENERGY)],
      result: day.radiationNumerator,
      unit: 'mm d⁻¹ kPa °C⁻¹',
      source,
    },
    {
      part,
      symbol: 'N2',
      name: 'Numerator, wind and humidity term',
      expression: `N2 = γ Cn / (T + ${AERODYNAMIC_KELVIN_OFFSET}) u2 VPD`,
      inputs: [
        gamma,
        q('Cn', constants.numerator, 'K mm s³ Mg⁻¹ d⁻¹'),
        q('T', day.airTemperatureMean, '°C'),
        wind,
        q('VPD', day.vapourPressureDeficit, 'kPa'),
      ],
      result: day.windNumerator,
      unit: 'mm d⁻¹ kPa °C⁻¹',
      source,
    },
    {
      part,
      symbol: 'D',
      name: 'Denominator',
      expression: 'D = Δ + γ (1 + Cd u2)',
      inputs: [slope, gamma, q('Cd', constants.denominator, 's m⁻¹'), wind],
      result: day.denominator,
      unit: SLOPE,
      source,
    },
    {
      part,
      symbol,
      name: constants.surface === 'short' ? 'Reference ET, short surface' : 'Reference ET, tall surface',
      expression: `${symbol} = (N1 + N2) / D${floor}`,
      inputs: [
        q('N1', day.radiationNumerator, 'mm d⁻¹ kPa °C⁻¹'),
        q('N2', day.windNumerator, 'mm d⁻¹ kPa °C⁻¹'),
        q('D', day.denominator, SLOPE),
      ],
      result: day.referenceEt,
      unit: 'mm d⁻¹',
      source,
    },
  ];
}
