/**
 * The working of a strip's morning, told from the numbers `stepDay` left behind; nothing is computed here.
 */
import { quantity, type Trace, type WorkingStep } from '../base/working.ts';
import type { StripDay, StripGround, WettingRecord } from './day.ts';

const mm = (symbol: string, value: number) => quantity(symbol, value, 'mm');
const one = (symbol: string, value: number) => quantity(symbol, value, '1');

/** Hands the steps of a strip's morning to the recorder: roots, rain, irrigation, drainage, wetting of the surface. */
export function recordWetting(ground: StripGround, day: StripDay, wetting: WettingRecord, trace: Trace): void {
  for (const step of rootSteps(ground, day, wetting)) trace.step(step);
  for (const step of rainSteps(day, wetting)) trace.step(step);
  for (const step of irrigationSteps(ground, day, wetting)) trace.step(step);
  for (const step of refillSteps(day, wetting)) trace.step(step);
  trace.step(surfaceStep(ground, day, wetting));
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

function rainSteps(day: StripDay, wetting: WettingRecord): WorkingStep[] {
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
  ];
}

function irrigationSteps(ground: StripGround, day: StripDay, wetting: WettingRecord): WorkingStep[] {
  const part = 'irrigation';
  return [
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
