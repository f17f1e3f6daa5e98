/**
 * The working of a planting's coefficients on one day: which stage it is in, and the climate its coefficients were adjusted to.
 */

import { quantity } from '../base/working.ts';
import { END_ADJUSTED_FROM } from '../crop/climate-adjustment.ts';
import { type Cycle, type Stage, type StageCoefficients, stageCoefficient } from '../crop/curve.ts';
import { adjustedCoefficients, type CycleCurve, type StageClimate } from './cycle-curve.ts';
import type { Crop, Mulch, Trace, WorkingStep } from './types.ts';

/** A planting on one day, as the curve has it. */
interface CoefficientDay {
  readonly crop: Crop;
  readonly cycle: Cycle;
  /** what the cycle is drawn with */
  readonly drawn: CycleCurve;
  /** coefficients are single ones: Kc in place of Kcb */
  readonly single: boolean;
  /** mulch of the planting, and Kcb of the stages that single coefficients under a mulch are reckoned with */
  readonly mulch: Mulch | undefined;
  readonly basalTable: StageCoefficients;
  /** 1 on the first day of the cycle */
  readonly dayOfCycle: number;
  readonly stage: Stage;
  readonly progress: number;
  /** of the day's row; observed cover and tall tables come after the curve that this working draws */
  readonly basal: number;
  readonly height: number;
  readonly rootDepth: number;
}

/** Hands the coefficient steps of a day to the recorder. Those of a canopy's mid and end value are told by the calendar's working. */
export function recordCoefficients(day: CoefficientDay, trace: Trace): void {
  const { coefficients, canopy } = day.drawn;
  if (canopy === null) for (const step of stageSteps(day)) trace.step(step);
  for (const step of mulchSteps(day)) trace.step(step);
  trace.step(basalStep(day, coefficients));
  trace.step(heightStep(day, coefficients.mid));
  trace.step(rootStep(day));
}

function stageSteps({ crop, drawn, single }: CoefficientDay): WorkingStep[] {
  const { table, climates, heightMax } = drawn;
  const coefficients = adjustedCoefficients(table, climates, heightMax);
  const name = single ? 'Kc' : 'Kcb';
  const equation = single ? 'FAO-56 Eq. 62 and 65' : 'FAO-56 Eq. 70';
  const source = single ? 'FAO-56 Table 12 and Eq. 62' : 'FAO-56 Table 17 and Eq. 70';
  if (crop.surface === 'tall') {
    const reason = 'on tall reference ET, which answers to wind and dryness itself';
    return [unadjustedStep(`${name} mid`, table.mid, reason, source), unadjustedStep(`${name} end`, table.end, reason, source)];
  }
  const step = (symbol: string, value: number, result: number, climate: StageClimate): WorkingStep =>
    climate.to <= climate.from
      ? unadjustedStep(symbol, value, 'no day of the stage lies in the run', source)
      : adjustmentStep({ symbol, table: value, result, climate, height: heightMax, source: equation });
  return [
    step(`${name} mid`, table.mid, coefficients.mid, climates.mid),
    table.end < END_ADJUSTED_FROM
      ? unadjustedStep(`${name} end`, table.end, `below ${END_ADJUSTED_FROM}: the crop dries in the field`, source)
      : step(`${name} end`, table.end, coefficients.end, climates.late),
  ];
}

/** Single coefficients under a mulch, from those of open ground. */
function mulchSteps({ crop, drawn, single, mulch, basalTable }: CoefficientDay): WorkingStep[] {
  if (!single || !mulch) return [];
  const { table, climates, heightMax, coefficients } = drawn;
  const open = crop.surface === 'tall' ? table : adjustedCoefficients(table, climates, heightMax);
  return (['mid', 'end'] as const).map((stage) => {
    const k = `Kc ${stage}`;
    const bare = quantity(`${k},open`, open[stage], '1');
    const cover = quantity('cover', mulch.cover, '1');
    const plastic = mulch.kind === 'plastic';
    const step = { part: 'coefficient', symbol: k, name: `${k} under ${mulch.kind} mulch`, result: coefficients[stage], unit: '1' };
    const source = 'FAO-56 chapter 10 (recalled); the proportion to cover is a choice of the product';
    if (plastic) return { ...step, expression: `${k} = ${k},open (1 − 0.3 cover)`, inputs: [bare, cover], source };
    const basal = quantity(`Kcb ${stage}`, basalTable[stage], '1');
    return {
      ...step,
      expression: `${k} = Kcb ${stage} + (${k},open − Kcb ${stage}) (1 − 0.5 cover)`,
      inputs: [basal, bare, cover],
      source,
    };
  });
}

interface Adjustment {
  readonly symbol: string;
  readonly table: number;
  readonly result: number;
  readonly climate: StageClimate;
  readonly height: number;
  readonly source: string;
}

function adjustmentStep({ symbol, table, result, climate, height, source }: Adjustment): WorkingStep {
  const { windSpeed2m: wind, humidityMinimum: humidity } = climate;
  const u2 = wind >= 1 && wind <= 6 ? 'u2' : 'min(6, max(1, u2))';
  const dryness = humidity >= 20 && humidity <= 80 ? 'RHmin' : 'min(80, max(20, RHmin))';
  const h = height >= 0.1 && height <= 10 ? 'h' : 'min(10, max(0.1, h))';
  return {
    part: 'coefficient',
    symbol,
    name: `${symbol}, adjusted to the climate of its stage`,
    expression: `${symbol} = max(0, ${symbol},table + [0.04 (${u2} − 2) − 0.004 (${dryness} − 45)] (${h} / 3)^0.3); u2 and RHmin: means of the ${climate.to - climate.from} days of the stage in the run`,
    inputs: [
      quantity(`${symbol},table`, table, '1'),
      quantity('u2', wind, 'm s⁻¹'),
      quantity('RHmin', humidity, '%'),
      quantity('h', height, 'm'),
    ],
    result,
    unit: '1',
    source,
  };
}

function unadjustedStep(symbol: string, table: number, reason: string, source: string): WorkingStep {
  return {
    part: 'coefficient',
    symbol,
    name: `${symbol}, as in the table`,
    expression: `${symbol} = ${symbol},table; ${reason}`,
    inputs: [quantity(`${symbol},table`, table, '1')],
    result: table,
    unit: '1',
    source,
  };
}

function basalStep(day: CoefficientDay, coefficients: { initial: number; mid: number; end: number }): WorkingStep {
  const { lengths } = day.cycle;
  const k = day.single ? 'Kc' : 'Kcb';
  const initial = quantity(`${k} ini`, coefficients.initial, '1');
  const mid = quantity(`${k} mid`, coefficients.mid, '1');
  const end = quantity(`${k} end`, coefficients.end, '1');
  const i = quantity('i', day.dayOfCycle, 'd');
  const before = quantity('L before', lengths.initial + lengths.development + lengths.mid, 'd');
  const step = {
    part: 'coefficient',
    symbol: k,
    name: `${day.single ? 'Single' : 'Basal'} crop coefficient, ${day.stage} stage`,
    result: stageCoefficient(lengths, coefficients, day.dayOfCycle),
    unit: '1',
    source: 'FAO-56 Eq. 66',
  };
  if (day.stage === 'initial') return { ...step, expression: `${k} = ${k} ini`, inputs: [initial] };
  if (day.stage === 'development') {
    const past = [quantity('L ini', lengths.initial, 'd'), quantity('L dev', lengths.development, 'd')];
    const expression = `${k} = ${k} ini + (i − L ini) / L dev (${k} mid − ${k} ini); i: day of the cycle`;
    return { ...step, expression, inputs: [i, ...past, initial, mid] };
  }
  if (day.stage === 'mid') return { ...step, expression: `${k} = ${k} mid`, inputs: [mid] };
  if (day.dayOfCycle - before.value >= lengths.late) return { ...step, expression: `${k} = ${k} end`, inputs: [end] };
  const expression = `${k} = ${k} mid + (i − L before) / L late (${k} end − ${k} mid); i: day of the cycle, L before: the first three stages`;
  return { ...step, expression, inputs: [i, before, quantity('L late', lengths.late, 'd'), mid, end] };
}

function heightStep(day: CoefficientDay, middle: number): WorkingStep {
  const k = day.single ? 'Kc' : 'Kcb';
  const grows = day.stage === 'initial' || day.stage === 'development';
  const highest = quantity('hmax', day.drawn.heightMax, 'm');
  const step = { part: 'coefficient', symbol: 'h', name: 'Plant height', result: day.height, unit: 'm', source: 'FAO-56 Annex 8' };
  if (day.drawn.canopy) return { ...step, expression: 'h = hmax; of the canopy, all season', inputs: [highest] };
  if (!grows) return { ...step, expression: 'h = hmax; from the mid stage on it does not fall', inputs: [highest] };
  return {
    ...step,
    expression: `h = hmax min(1, ${k} / ${k} mid); never falling within a cycle`,
    inputs: [
      highest,
      quantity(k, stageCoefficient(day.cycle.lengths, day.drawn.coefficients, day.dayOfCycle), '1'),
      quantity(`${k} mid`, middle, '1'),
    ],
  };
}

function rootStep(day: CoefficientDay): WorkingStep {
  const annual = day.crop.type === 'annual';
  const deepest = quantity('Zmax', day.crop.rootDepthMax, 'm');
  const least = quantity('Zmin', day.crop.rootDepthMin, 'm');
  const grown = annual ? least.value + (deepest.value - least.value) * day.progress : deepest.value;
  const step = {
    part: 'root-zone',
    symbol: 'Zr',
    name: 'Root depth',
    result: day.rootDepth,
    unit: 'm',
    source: annual ? 'FAO-56 Annex 8, Eq. 8-1' : 'FAO-56 chapter 8 (established stands)',
  };
  if (day.rootDepth < grown - 1e-9) {
    return { ...step, expression: 'Zr = Zhard; a hard layer limits the roots', inputs: [quantity('Zhard', day.rootDepth, 'm')] };
  }
  if (!annual) return { ...step, expression: 'Zr = Zmax; all season', inputs: [deepest] };
  const expression = 'Zr = Zmin + (Zmax − Zmin) g; g: share of the development stage gone by';
  return { ...step, expression, inputs: [least, deepest, quantity('g', day.progress, '1')] };
}
