/**
 * The working of one strip on one day, told from the numbers `stepDay` left behind; nothing is computed here.
 */
import type { StripDay, StripGround, UseRecord, WettingRecord } from './day.ts';
import type { Trace, WorkingStep } from './types.ts';

type Quantity = WorkingStep['inputs'][number];

/** A named number of a working. */
export function quantity(symbol: string, value: number, unit: string): Quantity {
  return { symbol, value, unit };
}

const mm = (symbol: string, value: number) => quantity(symbol, value, 'mm');
const one = (symbol: string, value: number) => quantity(symbol, value, '1');

/** Hands the steps of a strip's morning to the recorder: roots, rain, irrigation, drainage, wetting of the surface. */
export function recordWetting(ground: StripGround, day: StripDay, wetting: WettingRecord, trace: Trace): void {
  for (const step of rootSteps(ground, day, wetting)) trace.step(step);
  for (const step of irrigationSteps(ground, day, wetting)) trace.step(step);
  for (const step of refillSteps(day, wetting)) trace.step(step);
  trace.step(surfaceStep(ground, day, wetting));
}

/** Hands the steps of a strip's water use to the recorder: exposure of the surface, demand, use, and the balance of the day. */
export function recordUse(ground: StripGround, day: StripDay, use: UseRecord, trace: Trace): void {
  for (const step of exposureSteps(ground, day, use)) trace.step(step);
  for (const step of evaporationSteps(ground, day, use)) trace.step(step);
  for (const step of demandSteps(day, use)) trace.step(step);
  for (const step of takenSteps(ground, day, use)) trace.step(step);
  trace.step(balanceStep(day, use));
}

function rootSteps(ground: StripGround, day: StripDay, wetting: WettingRecord): WorkingStep[] {
  const part = 'root-zone';
  const depth = quantity('Zr', day.rootDepth, 'm');
  const before = quantity('Zr, yesterday', wetting.openingRootDepth, 'm');
  const grows = day.rootDepth >= wetting.openingRootDepth;
  return [
    {
      part,
      symbol: 'ΔDr',
      name: grows ? 'Depletion of the soil that roots grew into' : 'Depletion given back by a shallower root zone',
      expression: grows
        ? 'ΔDr = Db (Zr − Zr,yesterday) / (Zmax − Zr,yesterday), 0 without growth'
        : 'ΔDr = −Dr (Zr,yesterday − Zr) / Zr,yesterday',
      inputs: [
        depth,
        before,
        quantity('Zmax', ground.deepestRoot, 'm'),
        mm('Dr, yesterday', wetting.openingDepletion),
        mm('Db, yesterday', wetting.openingBelow),
      ],
      result: wetting.moved,
      unit: 'mm',
      source: 'FAO-56 chapter 8, text of Eq. 85',
    },
    {
      part,
      symbol: 'Dr,0',
      name: 'Root-zone depletion at the start of the day',
      expression: 'Dr,0 = Dr,yesterday + ΔDr',
      inputs: [mm('Dr, yesterday', wetting.openingDepletion), mm('ΔDr', wetting.moved)],
      result: wetting.grownDepletion,
      unit: 'mm',
      source: 'FAO-56 Eq. 85',
    },
    {
      part,
      symbol: 'TAW',
      name: 'Total available water',
      expression: 'TAW = 1000 (θFC − θWP) Zr',
      inputs: [quantity('θFC', ground.fieldCapacity, 'm³ m⁻³'), quantity('θWP', ground.wiltingPoint, 'm³ m⁻³'), depth],
      result: day.available,
      unit: 'mm',
      source: 'FAO-56 Eq. 82',
    },
  ];
}

function irrigationSteps(ground: StripGround, day: StripDay, wetting: WettingRecord): WorkingStep[] {
  const part = 'irrigation';
  return [
    {
      part,
      symbol: 'Pi',
      name: 'Rain that enters the soil',
      expression: 'Pi = P − RO',
      inputs: [mm('P', day.precipitation), mm('RO', day.surfaceRunoff)],
      result: wetting.infiltration,
      unit: 'mm',
      source: 'FAO-56 Eq. 85',
    },
    {
      part,
      symbol: 'Dr,rain',
      name: 'Root-zone depletion after rain',
      expression: 'Dr,rain = max(0, Dr,0 − Pi)',
      inputs: [mm('Dr,0', wetting.grownDepletion), mm('Pi', wetting.infiltration)],
      result: wetting.rainedDepletion,
      unit: 'mm',
      source: 'FAO-56 Eq. 85',
    },
    {
      part,
      symbol: 'Ds',
      name: 'Depletion of the soil irrigation is scheduled over',
      expression: 'Ds = Dr,rain + Db,rain (Zs − Zr) / (Zmax − Zr), Zs at least half the mature root depth',
      inputs: [
        mm('Dr,rain', wetting.rainedDepletion),
        mm('Db,rain', wetting.openingBelow - wetting.moved - wetting.rainExcess + day.deepPercolation),
        quantity('Zs', wetting.scheduleDepth, 'm'),
        quantity('Zr', day.rootDepth, 'm'),
        quantity('Zmax', ground.deepestRoot, 'm'),
      ],
      result: wetting.scheduleDepletion,
      unit: 'mm',
      source: 'common practice: the upper half of the mature root zone is watered while roots are shallow',
    },
    {
      part,
      symbol: 'Dc',
      name: 'Depletion that calls for water',
      expression: 'Dc = max(0, Ds − few,yesterday De,rain), De,rain = max(0, De,yesterday − Pi)',
      inputs: [
        mm('Ds', wetting.scheduleDepletion),
        one('few,yesterday', wetting.openingExposed),
        mm('De, yesterday', wetting.openingSurface),
        mm('Pi', wetting.infiltration),
      ],
      result: wetting.drawnDepletion,
      unit: 'mm',
      source: 'common practice: the dryness of the bare surface does not by itself call for water',
    },
    {
      part,
      symbol: 'D,start',
      name: 'Depletion at which an irrigation starts',
      expression: 'D,start = f p 1000 (θFC − θWP) Zs, p of the day before (of the table on the first day)',
      inputs: [
        one('f', ground.triggerFraction),
        one('p', wetting.triggerDepletionFraction),
        quantity('θFC', ground.fieldCapacity, 'm³ m⁻³'),
        quantity('θWP', ground.wiltingPoint, 'm³ m⁻³'),
        quantity('Zs', wetting.scheduleDepth, 'm'),
      ],
      result: wetting.trigger,
      unit: 'mm',
      source: 'FAO-56 Eq. 83; f from the application method',
    },
    {
      part,
      symbol: 'I',
      name: 'Net irrigation',
      expression: irrigationText(day, wetting),
      inputs: [
        mm('Ds', wetting.scheduleDepletion),
        mm('Dc', wetting.drawnDepletion),
        mm('D,start', wetting.trigger),
        mm('Dr,rain', wetting.rainedDepletion),
        mm('p TAW', wetting.stressFrom),
        mm('I max', ground.maximumDailyDepth),
      ],
      result: day.irrigation,
      unit: 'mm',
      source: 'irrigation to requirement: start at D,start or when Dr,rain passes p TAW, refill Ds, at most I max a day',
    },
  ];
}

function irrigationText(day: StripDay, wetting: WettingRecord): string {
  if (day.irrigation > 0) return `I = min(Ds, I max); ${wetting.wasIrrigating ? 'goes on from yesterday' : startReason(wetting)}`;
  if (!day.planted) return 'I = 0; nothing is planted';
  return day.mayIrrigate
    ? 'I = 0; Dc is below D,start and Dr,rain below p TAW, or the soil is already refilled'
    : 'I = 0; rain-fed or past the last irrigation';
}

function startReason(wetting: WettingRecord): string {
  return wetting.rainedDepletion > wetting.stressFrom ? 'starts: Dr,rain > p TAW, the crop would run short' : 'starts: Dc ≥ D,start';
}

function refillSteps(day: StripDay, wetting: WettingRecord): WorkingStep[] {
  const part = 'root-zone';
  const given = [mm('Dr,0', wetting.grownDepletion), mm('Pi', wetting.infiltration), mm('I', day.irrigation)];
  return [
    {
      part,
      symbol: 'Dr,1',
      name: 'Root-zone depletion after wetting and drainage',
      expression: 'Dr,1 = max(0, Dr,0 − Pi − I)',
      inputs: given,
      result: day.refilled,
      unit: 'mm',
      source: 'FAO-56 Eq. 85 and 88, drained before ET as in Example 38',
    },
    {
      part,
      symbol: 'DR',
      name: 'Rain draining out of the root zone',
      expression: 'DR = max(0, Pi − Dr,0)',
      inputs: [mm('Pi', wetting.infiltration), mm('Dr,0', wetting.grownDepletion)],
      result: wetting.rainExcess,
      unit: 'mm',
      source: 'FAO-56 Eq. 88',
    },
    {
      part,
      symbol: 'DP',
      name: 'Deep percolation, past the deepest root',
      expression: 'DP = DR − min(DR, Db)',
      inputs: [mm('DR', wetting.rainExcess), mm('Db, before', wetting.openingBelow - wetting.moved)],
      result: day.deepPercolation,
      unit: 'mm',
      source: 'FAO-56 Eq. 88, with the soil below the root zone refilled first',
    },
    {
      part,
      symbol: 'DI',
      name: 'Irrigation kept in the soil below the root zone',
      expression: 'DI = max(0, I − Dr,rain)',
      inputs: [mm('I', day.irrigation), mm('Dr,rain', wetting.rainedDepletion)],
      result: wetting.irrigationExcess,
      unit: 'mm',
      source: 'continuity; never more than the depletion there',
    },
  ];
}

function surfaceStep(ground: StripGround, day: StripDay, wetting: WettingRecord): WorkingStep {
  return {
    part: 'surface',
    symbol: 'De,1',
    name: 'Surface-layer depletion after wetting',
    expression: 'De,1 = max(0, De,yesterday − Pi − I / fw,method)',
    inputs: [
      mm('De, yesterday', wetting.openingSurface),
      mm('Pi', wetting.infiltration),
      mm('I', day.irrigation),
      one('fw,method', ground.methodWetted),
    ],
    result: day.wettedSurface,
    unit: 'mm',
    source: 'FAO-56 Eq. 77 and 79',
  };
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
