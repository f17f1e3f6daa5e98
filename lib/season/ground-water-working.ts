/**
 * The working of the water that reaches the ground of a parcel on one day: snow, frozen ground, curve number and runoff.
 */
import { quantity } from '../base/working.ts';
import { curveNumberOfSurface, curveNumbers, FIVE_DAY_LIMITS, potentialRetention } from '../crop/runoff.ts';
import { ALL_RAIN_AT, ALL_SNOW_AT, degreeDayMelt, MELT_COEFFICIENT, snowShare } from '../crop/snow.ts';
import { ANTECEDENT_DAYS, conditionBefore, fiveDayRain, freezeGround, isGrowing, openingSnow, runoffByStrip } from './ground-water.ts';
import type { PackedSeason } from './pack.ts';
import type { ParcelInput, WorkingStep } from './types.ts';

const mm = (symbol: string, value: number) => quantity(symbol, value, 'mm');
const part = 'weather';
const CURVE_NUMBER_SOURCE = 'USDA-NRCS, National Engineering Handbook 630, chapter 10';
const SNOW_SOURCE = 'USDA-NRCS, National Engineering Handbook 630, chapter 11 (recalled)';
const FROST_SOURCE = 'Molnau & Bissell 1983 (recalled)';
const CONDITION_SOURCE =
  'Hawkins, Hjelmfelt & Zevenbergen 1985; classes of NEH section 4, Table 4.2 (recalled), growing season from a mean of 5 °C (choice of the product)';

/** Steps from a parcel's rain to its runoff on a day already in `season.weather`. */
export function groundWaterSteps(season: PackedSeason, parcel: ParcelInput, day: number): WorkingStep[] {
  const { snow, frozenGround } = season.input.settings;
  const known = !Number.isNaN(season.weather.airTemperatureMean[day]);
  const temperature = known && (snow || frozenGround) ? [temperatureStep(season, day)] : [];
  return [
    ...temperature,
    ...(snow ? snowSteps(season, parcel, day, known) : []),
    ...(frozenGround ? frostSteps(season, parcel, day, known) : []),
    ...runoffSteps(season, parcel, day),
  ];
}

function temperatureStep({ weather }: PackedSeason, day: number): WorkingStep {
  const celsius = (symbol: string, value: number) => quantity(symbol, value, '°C');
  return {
    part,
    symbol: 'T',
    name: 'Mean air temperature',
    expression: 'T = (Tmax + Tmin) / 2',
    inputs: [celsius('Tmax', weather.airTemperatureMax[day]), celsius('Tmin', weather.airTemperatureMin[day])],
    result: weather.airTemperatureMean[day],
    unit: '°C',
    source: 'FAO-56 Eq. 9',
  };
}

/** Snow on the ground as the day began [mm]. */
function snowBefore(season: PackedSeason, parcel: ParcelInput, day: number): number {
  if (!season.input.settings.snow) return 0;
  return day === 0 ? openingSnow(parcel) : season.weather.snowWater[day - 1];
}

function snowSteps(season: PackedSeason, parcel: ParcelInput, day: number, known: boolean): WorkingStep[] {
  const { weather } = season;
  const precipitation = mm('P', weather.precipitation[day]);
  const before = mm('S, yesterday', snowBefore(season, parcel, day));
  if (!known) {
    return [liquidStep(weather.liquid[day], 'Pl = P; no temperature that day, so it is taken as rain and no snow melts', [precipitation])];
  }
  const temperature = quantity('T', weather.airTemperatureMean[day], '°C');
  const share = snowShare(temperature.value);
  const lying = before.value + (precipitation.value > 0 ? share * precipitation.value : 0);
  const melt = lying > 0 ? degreeDayMelt(lying, temperature.value) : 0;
  const fs = quantity('fs', share, '1');
  return [
    {
      part,
      symbol: 'fs',
      name: 'Share of the precipitation that falls as snow',
      expression: `fs = (${ALL_RAIN_AT} − T) / (${ALL_RAIN_AT} + ${-ALL_SNOW_AT}), held in 0 … 1`,
      inputs: [temperature],
      result: share,
      unit: '1',
      source: 'US Army Corps of Engineers 1956, Snow Hydrology (limits recalled)',
    },
    {
      part,
      symbol: 'M',
      name: 'Snow that melts',
      expression: 'M = Cm T where T > 0 °C, at most S,yesterday + fs P',
      inputs: [quantity('Cm', MELT_COEFFICIENT, 'mm °C⁻¹ d⁻¹'), temperature, before, fs, precipitation],
      result: melt,
      unit: 'mm',
      source: SNOW_SOURCE,
    },
    {
      part,
      symbol: 'S',
      name: 'Snow on the ground at the end of the day, as water',
      expression: 'S = S,yesterday + fs P − M',
      inputs: [before, fs, precipitation, mm('M', melt)],
      result: weather.snowWater[day],
      unit: 'mm',
      source: 'balance of the snow; sublimation left out',
    },
    liquidStep(weather.liquid[day], 'Pl = (1 − fs) P + M', [fs, precipitation, mm('M', melt)]),
  ];
}

function liquidStep(result: number, expression: string, inputs: WorkingStep['inputs']): WorkingStep {
  return { part, symbol: 'Pl', name: 'Rain and melt that reach the ground', expression, inputs, result, unit: 'mm', source: SNOW_SOURCE };
}

function frostSteps(season: PackedSeason, parcel: ParcelInput, day: number, known: boolean): WorkingStep[] {
  const { weather } = season;
  const before = freezeGround(season, parcel, day);
  const index = freezeGround(season, parcel, day + 1);
  const unit = '°C d';
  const temperature = quantity('T', weather.airTemperatureMean[day], '°C');
  const step = { part, symbol: 'CFGI', name: 'Frozen ground index', result: index, unit, source: FROST_SOURCE };
  const yesterday = quantity('CFGI, yesterday', before, unit);
  const indexStep: WorkingStep = known
    ? {
        ...step,
        expression: `CFGI = 0.97 CFGI,yesterday − T exp(−0.4 K D), not below 0; D = 0.4 S,yesterday [cm], K = ${temperature.value < 0 ? '0.08' : '0.5'} cm⁻¹`,
        inputs: [yesterday, temperature, mm('S, yesterday', snowBefore(season, parcel, day))],
      }
    : { ...step, expression: 'CFGI = CFGI,yesterday; no temperature that day', inputs: [yesterday] };
  return [
    indexStep,
    {
      part,
      symbol: 'F',
      name: 'Ground frozen: 1, not frozen: 0',
      expression: 'F = 1 where CFGI ≥ 83, or CFGI ≥ 56 on ground that was frozen the day before; else 0',
      inputs: [quantity('CFGI', index, unit), quantity('F, yesterday', day === 0 ? 0 : weather.frozen[day - 1], '1')],
      result: weather.frozen[day],
      unit: '1',
      source: FROST_SOURCE,
    },
  ];
}

function runoffSteps(season: PackedSeason, parcel: ParcelInput, day: number): WorkingStep[] {
  const { settings } = season.input;
  const { weather } = season;
  const water = settings.snow ? mm('Pl', weather.liquid[day]) : mm('P', weather.precipitation[day]);
  const result = weather.surfaceRunoff[day];
  const step = { part, symbol: 'RO', name: 'Surface runoff', result, unit: 'mm' };
  if (weather.frozen[day] === 1) {
    return [{ ...step, expression: `RO = ${water.symbol}; frozen ground takes up nothing`, inputs: [water], source: FROST_SOURCE }];
  }
  const { curveNumber } = parcel.soil;
  if (!settings.runoff || Number.isNaN(curveNumber)) {
    return [{ ...step, expression: 'RO = 0; no runoff is reckoned here', inputs: [water], source: CURVE_NUMBER_SOURCE }];
  }
  if (runoffByStrip(season, parcel)) return [];
  const condition = settings.antecedentMoisture === 'five-day-rain' ? [conditionStep(season, curveNumber, day)] : [];
  return [...condition, runoffStep(water, condition[0]?.result ?? curveNumber, result)];
}

/** `water`: the day's rain, or rain and melt, as the working names it. */
function runoffStep(water: WorkingStep['inputs'][number], curveNumber: number, result: number): WorkingStep {
  const symbol = water.symbol;
  return {
    part,
    symbol: 'RO',
    name: 'Surface runoff',
    expression: `RO = (${symbol} − 0.2 S)² / (${symbol} + 0.8 S) where ${symbol} > 0.2 S, S = 25400 / CN − 254`,
    inputs: [water, quantity('CN', curveNumber, '1'), mm('S', potentialRetention(curveNumber))],
    result,
    unit: 'mm',
    source: CURVE_NUMBER_SOURCE,
  };
}

const CONDITION_TEXT = {
  1: 'dry: CN I = CN / (2.281 − 0.01281 CN)',
  2: 'average: CN II = CN',
  3: 'wet: CN III = CN / (0.427 + 0.00573 CN)',
} as const;

function conditionStep({ weather }: PackedSeason, curveNumber: number, day: number): WorkingStep {
  const condition = conditionBefore(weather, day);
  const numbers = curveNumbers(curveNumber);
  const early = day < ANTECEDENT_DAYS;
  const growing = early || isGrowing(weather, day);
  const limits = growing ? FIVE_DAY_LIMITS.growing : FIVE_DAY_LIMITS.dormant;
  const rule = early
    ? 'fewer than five days before'
    : `${growing ? 'growing season' : 'dormant season'}: dry below ${limits.dry} mm, wet above ${limits.wet} mm`;
  return {
    part,
    symbol: 'CN',
    name: 'Curve number of the day, by the rain of the five days before',
    expression: `${CONDITION_TEXT[condition]} (${rule})`,
    inputs: [...(early ? [] : [mm('P5', fiveDayRain(weather, day))]), quantity('CN of the soil', curveNumber, '1')],
    result: condition === 1 ? numbers.dry : condition === 3 ? numbers.wet : numbers.average,
    unit: '1',
    source: CONDITION_SOURCE,
  };
}

/** A strip's runoff by its surface layer, as the loop had it. Water [mm]. */
export interface SurfaceRunoffRecord {
  /** CN of the soil, antecedent condition II */
  readonly curveNumber: number;
  /** De as the day began */
  readonly depletion: number;
  /** REW */
  readonly readily: number;
  /** TEW */
  readonly total: number;
  /** rain and melt that reached the ground */
  readonly liquid: number;
  /** RO */
  readonly runoff: number;
}

/** Steps of a strip's runoff where the antecedent moisture is read from its surface layer. */
export function surfaceRunoffSteps(record: SurfaceRunoffRecord): WorkingStep[] {
  const { depletion, readily, total, liquid, runoff } = record;
  const numbers = curveNumbers(record.curveNumber);
  const curveNumber = curveNumberOfSurface(numbers, depletion, readily, total);
  const number: WorkingStep = {
    part,
    symbol: 'CN',
    name: 'Curve number of the day, by the surface layer',
    expression: 'CN = CN III while De ≤ 0.5 REW, CN I from De = 0.7 REW + 0.3 TEW on, linear in De between',
    inputs: [
      mm('De, yesterday', depletion),
      mm('REW', readily),
      mm('TEW', total),
      quantity('CN I', numbers.dry, '1'),
      quantity('CN III', numbers.wet, '1'),
    ],
    result: curveNumber,
    unit: '1',
    source: 'ASCE Manual of Practice 70, 2nd edition (recalled); CN I and III by Hawkins, Hjelmfelt & Zevenbergen 1985',
  };
  return [number, runoffStep(mm('Pl', liquid), curveNumber, runoff)];
}
