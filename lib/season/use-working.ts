/**
 * The working of a strip's water use, told from the numbers the loop left behind; nothing is computed here.
 */
import type { Trace, WorkingStep } from '../base/working.ts';
import { metre, mm, one, type ToldDay } from './told-day.ts';

/** Hands the steps of a strip's water use to the recorder: exposure of the surface, demand, use, and the balance of the day. */
export function recordUse(told: ToldDay, trace: Trace): void {
  if (!told.single) {
    for (const step of exposureSteps(told)) trace.step(step);
    for (const step of evaporationSteps(told)) trace.step(step);
  }
  for (const step of demandSteps(told)) trace.step(step);
  for (const step of stressSteps(told)) trace.step(step);
  for (const step of takenSteps(told)) trace.step(step);
  for (const step of closingSteps(told)) trace.step(step);
  trace.step(balanceStep(told));
}

function exposureSteps(told: ToldDay): WorkingStep[] {
  const { record, curve, ground, rain } = told;
  const part = 'surface';
  const basal = one('Kcb', record.basal);
  const height = metre('h', curve.height[record.day]);
  const under = ground.underCanopy && !record.ponded;
  return [
    {
      part,
      symbol: 'fw',
      name: 'Wetted fraction of the surface',
      expression: record.ponded
        ? 'fw = 1; the field is flooded'
        : `fw of the method on an irrigation day, 1 after more than 3 mm of ${rain === 'P' ? 'rain' : 'rain and melt'}, else as the day before`,
      inputs: record.ponded ? [] : [mm('I', record.irrigation), mm(rain, record.liquid), one('fw,method', ground.methodWetted)],
      result: record.wettedFraction,
      unit: '1',
      source: 'FAO-56 Table 20 and text of Eq. 75',
    },
    {
      part,
      symbol: 'Kc max',
      name: 'Upper limit of evaporation and transpiration',
      expression: 'Kc max = max(1.2 + k (h/3)^0.3, Kcb + 0.05)',
      inputs: [one('k', told.climate), height, basal],
      result: record.maximum,
      unit: '1',
      source: 'FAO-56 Eq. 72',
    },
    coverStep(told),
    {
      part,
      symbol: 'few',
      name: 'Exposed and wetted fraction',
      expression: under ? 'few = max(0.01, min(1 − fc, (1 − 2/3 fc) fw))' : 'few = max(0.01, min(1 − fc, fw))',
      inputs: [one('fc', record.covered), one('fw', record.wettedFraction)],
      result: record.exposedWetted,
      unit: '1',
      source: 'FAO-56 Eq. 75',
    },
  ];
}

function coverStep({ record, curve }: ToldDay): WorkingStep {
  const step = { part: 'surface', symbol: 'fc', name: 'Fraction covered by the crop', result: record.covered, unit: '1' };
  const given = curve.covered[record.day];
  if (given >= 0) {
    return { ...step, expression: 'fc = min(0.99, fc,given)', inputs: [one('fc,given', given)], source: 'canopy of the planting' };
  }
  if (record.covered === 0) {
    return { ...step, expression: 'fc = 0; Kcb is not above that of bare ground, 0.15', inputs: [], source: 'FAO-56 Eq. 76' };
  }
  return {
    ...step,
    expression: 'fc = min(0.99, ((Kcb − 0.15) / (Kc max − 0.15))^(1 + 0.5 h))',
    inputs: [one('Kcb', record.basal), one('Kc max', record.maximum), metre('h', curve.height[record.day])],
    source: 'FAO-56 Eq. 76',
  };
}

function evaporationSteps({ record, ground, curve }: ToldDay): WorkingStep[] {
  const wet = record.wettedSurface <= ground.readilyEvaporable;
  const mulch = curve.evaporationShare[record.day];
  const limits = [one('Kr', record.reduction), one('Kc max', record.maximum), one('Kcb', record.basal), one('few', record.exposedWetted)];
  const frozen = record.frozen && !record.ponded;
  const least = 'min(Kr (Kc max − Kcb), few Kc max)';
  return [
    {
      part: 'surface',
      symbol: 'Kr',
      name: 'Evaporation reduction coefficient',
      expression: wet ? 'Kr = 1 while De,1 ≤ REW' : 'Kr = (TEW − De,1) / (TEW − REW)',
      inputs: [mm('De,1', record.wettedSurface), mm('REW', ground.readilyEvaporable), ...(wet ? [] : [mm('TEW', ground.totalEvaporable)])],
      result: record.reduction,
      unit: '1',
      source: 'FAO-56 Eq. 74',
    },
    {
      part: 'surface',
      symbol: 'Ke',
      name: 'Soil evaporation coefficient',
      expression: frozen
        ? 'Ke = 0; the ground is frozen'
        : mulch === 1
          ? `Ke = ${least}`
          : `Ke = M ${least}; M: share the mulch lets through`,
      inputs: frozen ? [] : [...limits, ...(mulch === 1 ? [] : [one('M', mulch)])],
      result: record.evaporationCoefficient,
      unit: '1',
      source: mulch === 1 ? 'FAO-56 Eq. 71' : 'FAO-56 Eq. 71 and chapter 10 (mulches)',
    },
  ];
}

function demandSteps({ record, curve, single }: ToldDay): WorkingStep[] {
  const snow = record.snowWater > 0;
  const reference = mm('ETo', record.referenceEt);
  const step = { part: 'coefficient', symbol: 'ETc', name: 'Crop ET, unstressed', result: record.cropEt, unit: 'mm' };
  const demand: WorkingStep = snow
    ? {
        ...step,
        expression: 'ETc = 0; snow lies on the ground',
        inputs: [mm('S', record.snowWater)],
        source: 'choice of the product: under snow neither crop nor soil takes water',
      }
    : single
      ? { ...step, expression: 'ETc = Kc ETo', inputs: [one('Kc', record.basal), reference], source: 'FAO-56 Eq. 58' }
      : {
          ...step,
          expression: 'ETc = (Kcb + Ke) ETo',
          inputs: [one('Kcb', record.basal), one('Ke', record.evaporationCoefficient), reference],
          source: 'FAO-56 Eq. 69',
        };
  const part = 'root-zone';
  return [
    demand,
    {
      part,
      symbol: 'p',
      name: 'Depletion fraction',
      expression: record.planted ? 'p = min(0.8, max(0.1, p,table + 0.04 (5 − ETc)))' : 'p as on the last cropped day; nothing is planted',
      inputs: record.planted ? [one('p,table', curve.tableFraction[record.day]), mm('ETc', record.cropEt)] : [],
      result: record.depletionFraction,
      unit: '1',
      source: 'FAO-56 Table 22, footnote 2',
    },
    {
      part,
      symbol: 'RAW',
      name: 'Readily available water',
      expression: 'RAW = p TAW',
      inputs: [one('p', record.depletionFraction), mm('TAW', record.available)],
      result: record.depletionFraction * record.available,
      unit: 'mm',
      source: 'FAO-56 Eq. 83',
    },
  ];
}

function stressSteps({ record }: ToldDay): WorkingStep[] {
  const part = 'root-zone';
  const available = mm('TAW', record.available);
  const refilled = mm('Dr,1', record.refilled);
  const fraction = one('p', record.depletionFraction);
  const short = record.refilled > record.depletionFraction * record.available;
  const step = { part, symbol: 'Ks', name: 'Stress coefficient', unit: '1', source: 'FAO-56 Eq. 84' };
  if (!record.planted && record.basal === 0) {
    return [{ ...step, expression: 'Ks = 1; nothing is planted', inputs: [], result: record.stress }];
  }
  const salty = record.saltStress !== 1;
  const symbol = salty ? 'Ks,water' : 'Ks';
  const result = record.waterStress;
  const water: WorkingStep =
    record.pond > 0
      ? { ...step, symbol, expression: `${symbol} = 1; water stands above field capacity`, inputs: [], result }
      : short
        ? {
            ...step,
            symbol,
            expression: `${symbol} = max(0, (TAW − Dr,1) / ((1 − p) TAW))`,
            inputs: [available, refilled, fraction],
            result,
          }
        : { ...step, symbol, expression: `${symbol} = 1 while Dr,1 ≤ p TAW`, inputs: [refilled, fraction, available], result };
  if (!salty) return [water];
  return [
    water,
    {
      ...step,
      expression: 'Ks = Ks,salt Ks,water',
      inputs: [one('Ks,salt', record.saltStress), one('Ks,water', result)],
      result: record.waterStress * record.saltStress,
      source: 'FAO-56 Eq. 91 and 92',
    },
  ];
}

function takenSteps({ record, single }: ToldDay): WorkingStep[] {
  const reference = mm('ETo', record.referenceEt);
  const left = mm('W', record.left);
  const coefficient = one(single ? 'Kc' : 'Kcb', record.basal);
  const used = one('Ks', record.waterStress * record.saltStress);
  const transpired: WorkingStep = {
    part: 'root-zone',
    symbol: 'T',
    name: single ? 'Crop ET, adjusted for stress' : 'Transpiration',
    expression: `T = min(Ks ${coefficient.symbol} ETo, W)`,
    inputs: [used, coefficient, reference, left],
    result: record.transpiration,
    unit: 'mm',
    source: single ? 'FAO-56 Eq. 81 and 86' : 'FAO-56 Eq. 80 and 86',
  };
  const storage: WorkingStep = {
    part: 'root-zone',
    symbol: 'W',
    name: 'Water that can be taken today',
    expression: record.pond > 0 ? 'W = max(0, TAW − Dr,1) + X,1' : 'W = max(0, TAW − Dr,1)',
    inputs: [mm('TAW', record.available), mm('Dr,1', record.refilled), ...(record.pond > 0 ? [mm('X,1', record.pond)] : [])],
    result: record.left,
    unit: 'mm',
    source: 'FAO-56 Eq. 86: not past wilting point',
  };
  if (single) return [storage, transpired];
  return [
    storage,
    transpired,
    {
      part: 'surface',
      symbol: 'E',
      name: 'Soil evaporation',
      expression: 'E = min(Ke ETo, W − T)',
      inputs: [one('Ke', record.evaporationCoefficient), reference, left, mm('T', record.transpiration)],
      result: record.evaporation,
      unit: 'mm',
      source: 'FAO-56 Eq. 80 and 86',
    },
  ];
}

function closingSteps({ record, ground, curve, single }: ToldDay): WorkingStep[] {
  const open = curve.openShare[record.day];
  const taken = [mm('T', record.transpiration), ...(single ? [] : [mm('E', record.evaporation)])];
  const sum = single ? 'T' : 'T + E';
  const steps: WorkingStep[] = [];
  if (!single) {
    const dried = {
      part: 'surface',
      symbol: 'De',
      name: 'Surface-layer depletion at the end of the day',
      result: record.closingSurface,
      unit: 'mm',
    };
    const source = 'FAO-56 Eq. 77 and 78';
    steps.push(
      record.closingPond > 0
        ? { ...dried, expression: 'De = 0; water stands on the field', inputs: [], source }
        : {
            ...dried,
            expression: open === 1 ? 'De = min(TEW, De,1 + E / few)' : open > 0 ? 'De = min(TEW, De,1 + E / (few M))' : 'De = De,1',
            inputs: [
              mm('De,1', record.wettedSurface),
              ...(open > 0 ? [mm('E', record.evaporation), one('few', record.exposedWetted), mm('TEW', ground.totalEvaporable)] : []),
              ...(open > 0 && open !== 1 ? [one('M', open)] : []),
            ],
            source: open === 1 ? source : `${source}, chapter 10 (mulches): ground under plastic does not dry`,
          },
    );
  }
  const part = 'root-zone';
  const refilled = mm('Dr,1', record.refilled);
  const step = { part, symbol: 'Dr', name: 'Root-zone depletion at the end of the day', result: record.closingDepletion, unit: 'mm' };
  if (!(record.pond > 0)) {
    return [...steps, { ...step, expression: `Dr = Dr,1 + ${sum}`, inputs: [refilled, ...taken], source: 'FAO-56 Eq. 85' }];
  }
  const pond = mm('X,1', record.pond);
  const source = 'balance of the ponded store: it is drawn on first';
  return [
    ...steps,
    {
      part,
      symbol: 'X',
      name: 'Water above field capacity at the end of the day',
      expression: `X = max(0, X,1 − (${sum}))`,
      inputs: [pond, ...taken],
      result: record.closingPond,
      unit: 'mm',
      source,
    },
    { ...step, expression: `Dr = Dr,1 + max(0, ${sum} − X,1)`, inputs: [refilled, ...taken, pond], source },
  ];
}

function balanceStep({ record, single, rain }: ToldDay): WorkingStep {
  const flows: [string, string, number, boolean][] = [
    ['', 'P', record.precipitation, true],
    [' + ', 'I', record.irrigation, true],
    [' + ', 'CR', record.capillaryRise, record.capillaryRise > 0],
    [' − ', 'RO', record.surfaceRunoff, true],
    [' − ', 'T', record.transpiration, true],
    [' − ', 'E', record.evaporation, !single],
    [' − ', 'DP', record.deepPercolation, true],
    [' − ', 'IP', record.irrigationPercolation, record.irrigationPercolation > 0],
  ];
  const shown = flows.filter(([, , , show]) => show);
  const snow = rain === 'Pl';
  const pond = record.openingPond > 0 || record.closingPond > 0;
  const stores = `[Dr,yesterday + Db,yesterday − Dr − Db]${pond ? ' − [X − X,yesterday]' : ''}${snow ? ' − [S − S,yesterday]' : ''}`;
  return {
    part: 'balance',
    symbol: 'residual',
    name: 'Water balance of the day',
    expression: `residual = ${shown.map(([sign, symbol]) => sign + symbol).join('')} − ${stores}, which must be 0`,
    inputs: [
      ...shown.map(([, symbol, value]) => mm(symbol, value)),
      mm('Dr, yesterday', record.openingDepletion),
      mm('Db, yesterday', record.openingBelow),
      mm('Dr', record.closingDepletion),
      mm('Db', record.below),
      ...(pond ? [mm('X', record.closingPond), mm('X, yesterday', record.openingPond)] : []),
      ...(snow ? [mm('S', record.snowWater), mm('S, yesterday', record.snowBefore)] : []),
    ],
    result: record.residual,
    unit: 'mm',
    source: 'FAO-56 Eq. 85, over the root zone and the soil below it',
  };
}
