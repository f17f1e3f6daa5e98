/**
 * The working of a planting's coefficients on one day: which stage it is in, and the climate its coefficients were adjusted to.
 */

import { quantity } from '../base/working.ts';
import { END_ADJUSTED_FROM } from '../crop/climate-adjustment.ts';
import type { Cycle, Stage } from '../crop/curve.ts';
import { cycleCoefficients, type StageClimate } from './strip-curve.ts';
import type { Crop, Trace, WorkingStep } from './types.ts';

/** A planting on one day, as the curve has it. */
interface CoefficientDay {
  readonly crop: Crop;
  readonly cycle: Cycle;
  readonly climates: { readonly mid: StageClimate; readonly late: StageClimate };
  /** 1 on the first day of the cycle */
  readonly dayOfCycle: number;
  readonly stage: Stage;
  readonly progress: number;
  readonly basal: number;
  readonly height: number;
  readonly rootDepth: number;
}

const ADJUSTMENT = '[0.04 (u2 − 2) − 0.004 (RHmin − 45)] (h/3)^0.3, u2 in 1 … 6, RHmin in 20 … 80';

/** Hands the coefficient steps of a day to the recorder. */
export function recordCoefficients(day: CoefficientDay, trace: Trace): void {
  const { crop, climates } = day;
  const coefficients = cycleCoefficients(crop, climates);
  trace.step(adjustmentStep('Kcb mid', crop.basalMid, coefficients.mid, climates.mid, crop));
  trace.step(
    crop.basalEnd < END_ADJUSTED_FROM
      ? unadjustedStep('Kcb end', crop.basalEnd, `below ${END_ADJUSTED_FROM}: the crop dries in the field`)
      : adjustmentStep('Kcb end', crop.basalEnd, coefficients.end, climates.late, crop),
  );
  trace.step(basalStep(day, coefficients));
  trace.step(heightStep(day, coefficients.mid));
  trace.step(rootStep(day));
}

function adjustmentStep(symbol: string, table: number, result: number, climate: StageClimate, crop: Crop): WorkingStep {
  if (climate.to <= climate.from) return unadjustedStep(symbol, table, 'no day of the stage lies in the run');
  return {
    part: 'coefficient',
    symbol,
    name: `${symbol}, adjusted to the climate of its stage`,
    expression: `${symbol} = ${symbol},table + ${ADJUSTMENT}`,
    inputs: [
      quantity(`${symbol},table`, table, '1'),
      quantity('u2, stage mean', climate.windSpeed2m, 'm s⁻¹'),
      quantity('RHmin, stage mean', climate.humidityMinimum, '%'),
      quantity('h', crop.heightMax, 'm'),
      quantity('days of the stage in the run', climate.to - climate.from, 'd'),
    ],
    result,
    unit: '1',
    source: 'FAO-56 Eq. 70',
  };
}

function unadjustedStep(symbol: string, table: number, reason: string): WorkingStep {
  return {
    part: 'coefficient',
    symbol,
    name: `${symbol}, as in the table`,
    expression: `${symbol} = ${symbol},table; ${reason}`,
    inputs: [quantity(`${symbol},table`, table, '1')],
    result: table,
    unit: '1',
    source: 'FAO-56 Table 17 and Eq. 70',
  };
}

function basalStep(day: CoefficientDay, coefficients: { initial: number; mid: number; end: number }): WorkingStep {
  const { lengths } = day.cycle;
  return {
    part: 'coefficient',
    symbol: 'Kcb',
    name: `Basal crop coefficient, ${day.stage} stage`,
    expression: 'Kcb = Kcb,prev + [(i − Σ Lprev) / Lstage] (Kcb,next − Kcb,prev); constant in the initial and mid stages',
    inputs: [
      quantity('i', day.dayOfCycle, 'd'),
      quantity('L ini', lengths.initial, 'd'),
      quantity('L dev', lengths.development, 'd'),
      quantity('L mid', lengths.mid, 'd'),
      quantity('L late', lengths.late, 'd'),
      quantity('Kcb ini', coefficients.initial, '1'),
      quantity('Kcb mid', coefficients.mid, '1'),
      quantity('Kcb end', coefficients.end, '1'),
    ],
    result: day.basal,
    unit: '1',
    source: 'FAO-56 Eq. 66',
  };
}

function heightStep(day: CoefficientDay, basalMid: number): WorkingStep {
  return {
    part: 'coefficient',
    symbol: 'h',
    name: 'Plant height',
    expression: 'h = hmax min(1, Kcb / Kcb mid), never falling within a cycle',
    inputs: [
      quantity('hmax', day.crop.heightMax, 'm'),
      quantity('Kcb', day.basal, '1'),
      quantity('Kcb mid', basalMid, '1'),
      quantity('progress of development', day.progress, '1'),
    ],
    result: day.height,
    unit: 'm',
    source: 'FAO-56 Annex 8',
  };
}

function rootStep(day: CoefficientDay): WorkingStep {
  const annual = day.crop.type === 'annual';
  return {
    part: 'root-zone',
    symbol: 'Zr',
    name: 'Root depth',
    expression: annual
      ? 'Zr = Zmin + (Zmax − Zmin) × progress of development, at most the hard layer'
      : 'Zr = Zmax all season, at most the hard layer',
    inputs: [
      quantity('Zmin', day.crop.rootDepthMin, 'm'),
      quantity('Zmax', day.crop.rootDepthMax, 'm'),
      quantity('progress of development', day.progress, '1'),
    ],
    result: day.rootDepth,
    unit: 'm',
    source: annual ? 'FAO-56 Annex 8, Eq. 8-1' : 'FAO-56 chapter 8 (established stands)',
  };
}
