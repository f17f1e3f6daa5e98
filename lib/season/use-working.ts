/**
 * The working of a strip's water use, told from the numbers `stepDay` left behind; nothing is computed here.
 */
import { quantity, type Trace, type WorkingStep } from '../base/working.ts';
import type { StripDay, StripGround, UseRecord } from './day.ts';

const mm = (symbol: string, value: number) => quantity(symbol, value, 'mm');
const one = (symbol: string, value: number) => quantity(symbol, value, '1');

/** Hands the steps of a strip's water use to the recorder: exposure of the surface, demand, use, and the balance of the day. */
export function recordUse(ground: StripGround, day: StripDay, use: UseRecord, trace: Trace): void {
  for (const step of exposureSteps(ground, day, use)) trace.step(step);
  for (const step of evaporationSteps(ground, day, use)) trace.step(step);
  for (const step of demandSteps(day, use)) trace.step(step);
  for (const step of takenSteps(ground, day, use)) trace.step(step);
  trace.step(balanceStep(day, use));
}

function exposureSteps(ground: StripGround, day: StripDay, use: UseRecord): WorkingStep[] {
  const part = 'surface';
  const height = quantity('h', day.height, 'm');
  const basal = one('Kcb', day.basal);
  return [
    {
      part,
      symbol: 'fw',
      name: 'Wetted fraction of the surface',
      expression: 'fw of the method on an irrigation day, 1 after more than 3 mm of rain, else as the day before',
      inputs: [mm('I', day.irrigation), mm('P', day.precipitation), one('fw,method', ground.methodWetted)],
      result: use.wettedFraction,
      unit: '1',
      source: 'FAO-56 Table 20 and text of Eq. 75',
    },
    {
      part,
      symbol: 'Kc max',
      name: 'Upper limit of evaporation and transpiration',
      expression: 'Kc max = max(1.2 + k (h/3)^0.3, Kcb + 0.05)',
      inputs: [one('k', day.climate), height, basal],
      result: use.maximum,
      unit: '1',
      source: 'FAO-56 Eq. 72',
    },
    {
      part,
      symbol: 'fc',
      name: 'Fraction covered by the crop',
      expression: 'fc = ((Kcb − 0.15) / (Kc max − 0.15))^(1 + 0.5 h), within 0 … 0.99',
      inputs: [basal, one('Kc max', use.maximum), height],
      result: use.covered,
      unit: '1',
      source: 'FAO-56 Eq. 76',
    },
    {
      part,
      symbol: 'few',
      name: 'Exposed and wetted fraction',
      expression: ground.underCanopy ? 'few = min(1 − fc, (1 − 2/3 fc) fw), at least 0.01' : 'few = min(1 − fc, fw), at least 0.01',
      inputs: [one('fc', use.covered), one('fw', use.wettedFraction)],
      result: use.exposedWetted,
      unit: '1',
      source: 'FAO-56 Eq. 75',
    },
  ];
}

function evaporationSteps(ground: StripGround, day: StripDay, use: UseRecord): WorkingStep[] {
  return [
    {
      part: 'surface',
      symbol: 'Kr',
      name: 'Evaporation reduction coefficient',
      expression: day.wettedSurface <= ground.readilyEvaporable ? 'Kr = 1 while De,1 ≤ REW' : 'Kr = (TEW − De,1) / (TEW − REW)',
      inputs: [mm('De,1', day.wettedSurface), mm('REW', ground.readilyEvaporable), mm('TEW', ground.totalEvaporable)],
      result: use.reduction,
      unit: '1',
      source: 'FAO-56 Eq. 74',
    },
    {
      part: 'surface',
      symbol: 'Ke',
      name: 'Soil evaporation coefficient',
      expression: 'Ke = min(Kr (Kc max − Kcb), few Kc max)',
      inputs: [one('Kr', use.reduction), one('Kc max', use.maximum), one('Kcb', day.basal), one('few', use.exposedWetted)],
      result: use.evaporationCoefficient,
      unit: '1',
      source: 'FAO-56 Eq. 71',
    },
  ];
}

function demandSteps(day: StripDay, use: UseRecord): WorkingStep[] {
  const part = 'root-zone';
  const fraction = one('p', use.depletionFraction);
  const available = mm('TAW', day.available);
  const adjusted = 'p = p,table + 0.04 (5 − ETc), within 0.1 … 0.8';
  const stressed = day.refilled > day.readilyAvailable ? 'Ks = (TAW − Dr,1) / ((1 − p) TAW)' : 'Ks = 1 while Dr,1 ≤ RAW';
  return [
    {
      part: 'coefficient',
      symbol: 'ETc',
      name: 'Crop ET, unstressed',
      expression: 'ETc = (Kcb + Ke) ETo',
      inputs: [one('Kcb', day.basal), one('Ke', use.evaporationCoefficient), mm('ETo', day.referenceEt)],
      result: day.cropEt,
      unit: 'mm',
      source: 'FAO-56 Eq. 69',
    },
    {
      part,
      symbol: 'p',
      name: 'Depletion fraction',
      expression: day.planted ? adjusted : 'p as on the last cropped day; nothing is planted',
      inputs: [one('p,table', day.tableFraction), mm('ETc', day.cropEt)],
      result: use.depletionFraction,
      unit: '1',
      source: 'FAO-56 Table 22, footnote 2',
    },
    {
      part,
      symbol: 'RAW',
      name: 'Readily available water',
      expression: 'RAW = p TAW',
      inputs: [fraction, available],
      result: day.readilyAvailable,
      unit: 'mm',
      source: 'FAO-56 Eq. 83',
    },
    {
      part,
      symbol: 'Ks',
      name: 'Stress coefficient',
      expression: day.planted ? stressed : 'Ks = 1; nothing is planted',
      inputs: [available, mm('Dr,1', day.refilled), fraction],
      result: day.stress,
      unit: '1',
      source: 'FAO-56 Eq. 84',
    },
  ];
}

function takenSteps(ground: StripGround, day: StripDay, use: UseRecord): WorkingStep[] {
  const reference = mm('ETo', day.referenceEt);
  const available = mm('TAW', day.available);
  const refilled = mm('Dr,1', day.refilled);
  const transpired = mm('T', day.transpiration);
  const evaporated = mm('E', day.evaporation);
  return [
    {
      part: 'root-zone',
      symbol: 'T',
      name: 'Transpiration',
      expression: 'T = min(Ks Kcb ETo, TAW − Dr,1)',
      inputs: [one('Ks', day.stress), one('Kcb', day.basal), reference, available, refilled],
      result: day.transpiration,
      unit: 'mm',
      source: 'FAO-56 Eq. 80 and 86',
    },
    {
      part: 'surface',
      symbol: 'E',
      name: 'Soil evaporation',
      expression: 'E = min(Ke ETo, TAW − Dr,1 − T)',
      inputs: [one('Ke', use.evaporationCoefficient), reference, available, refilled, transpired],
      result: day.evaporation,
      unit: 'mm',
      source: 'FAO-56 Eq. 80 and 86',
    },
    {
      part: 'surface',
      symbol: 'De',
      name: 'Surface-layer depletion at the end of the day',
      expression: 'De = min(TEW, De,1 + E / few)',
      inputs: [mm('De,1', day.wettedSurface), evaporated, one('few', use.exposedWetted), mm('TEW', ground.totalEvaporable)],
      result: use.closingSurface,
      unit: 'mm',
      source: 'FAO-56 Eq. 77 and 78',
    },
    {
      part: 'root-zone',
      symbol: 'Dr',
      name: 'Root-zone depletion at the end of the day',
      expression: 'Dr = Dr,1 + T + E',
      inputs: [refilled, transpired, evaporated],
      result: day.closingDepletion,
      unit: 'mm',
      source: 'FAO-56 Eq. 85',
    },
  ];
}

function balanceStep(day: StripDay, use: UseRecord): WorkingStep {
  return {
    part: 'balance',
    symbol: 'residual',
    name: 'Water balance of the day',
    expression: 'P + I − RO − T − E − DP − [(Dr + Db) yesterday − (Dr + Db) today], which must be 0',
    inputs: [
      mm('P', day.precipitation),
      mm('I', day.irrigation),
      mm('RO', day.surfaceRunoff),
      mm('T', day.transpiration),
      mm('E', day.evaporation),
      mm('DP', day.deepPercolation),
      mm('(Dr + Db) yesterday', day.opening),
      mm('Dr', day.closingDepletion),
      mm('Db', use.closingBelow),
    ],
    result: day.residual,
    unit: 'mm',
    source: 'FAO-56 Eq. 85, over the root zone and the soil below it',
  };
}
