/**
 * The working of a strip's morning, told from the numbers the loop left behind; nothing is computed here. The irrigation of the day has a file of its own.
 */
import { quantity, type Trace, type WorkingStep } from '../base/working.ts';
import { surfaceRunoffSteps } from './ground-water-working.ts';
import { irrigationSteps } from './irrigation-working.ts';
import { metre, mm, one, type ToldDay } from './told-day.ts';

/** Hands the steps of a strip's morning to the recorder: roots, rain, irrigation, drainage, rise from below, wetting of the surface. */
export function recordWetting(told: ToldDay, trace: Trace): void {
  for (const step of rootSteps(told)) trace.step(step);
  for (const step of runoffSteps(told)) trace.step(step);
  for (const step of rainSteps(told)) trace.step(step);
  for (const step of irrigationSteps(told)) trace.step(step);
  for (const step of told.record.ponded ? pondSteps(told) : drainageSteps(told)) trace.step(step);
  if (told.record.capillaryRise > 0) trace.step(capillaryStep(told));
  if (!told.single) trace.step(surfaceStep(told));
}

function rootSteps(told: ToldDay): WorkingStep[] {
  const { record } = told;
  const part = 'root-zone';
  const before = mm('Dr, yesterday', record.openingDepletion);
  return [
    availableStep(told),
    movedStep(told),
    {
      part,
      symbol: 'Dr,0',
      name: 'Root-zone depletion at the start of the day',
      expression: 'Dr,0 = Dr,yesterday + ΔDr',
      inputs: [before, mm('ΔDr', record.moved)],
      result: record.grownDepletion,
      unit: 'mm',
      source: 'FAO-56 Eq. 85',
    },
    {
      part,
      symbol: 'Db,0',
      name: 'Depletion of the soil below the roots at the start of the day',
      expression: 'Db,0 = Db,yesterday − ΔDr',
      inputs: [mm('Db, yesterday', record.openingBelow), mm('ΔDr', record.moved)],
      result: record.belowGrown,
      unit: 'mm',
      source: 'FAO-56 chapter 8, text of Eq. 85 (root growth)',
    },
  ];
}

function availableStep({ record, curve, soil }: ToldDay): WorkingStep {
  const step = { part: 'root-zone', symbol: 'TAW', name: 'Total available water', result: record.available, unit: 'mm' };
  const depth = curve.rootDepth[record.day];
  const layers = (soil.layers ?? []).filter(({ top }) => top < depth);
  if (layers.length <= 1) {
    const [{ fieldCapacity, wiltingPoint }] = layers.length === 1 ? layers : [soil];
    return {
      ...step,
      expression: 'TAW = 1000 (θFC − θWP) Zr',
      inputs: [quantity('θFC', fieldCapacity, 'm³ m⁻³'), quantity('θWP', wiltingPoint, 'm³ m⁻³'), metre('Zr', depth)],
      source: 'FAO-56 Eq. 82',
    };
  }
  const inputs = layers.flatMap((layer, k) => [
    quantity(`θFC${k + 1}`, layer.fieldCapacity, 'm³ m⁻³'),
    quantity(`θWP${k + 1}`, layer.wiltingPoint, 'm³ m⁻³'),
    metre(`Δz${k + 1}`, (k === layers.length - 1 ? depth : layer.bottom) - layer.top),
  ]);
  const sum = layers.map((_, k) => `(θFC${k + 1} − θWP${k + 1}) Δz${k + 1}`).join(' + ');
  return { ...step, expression: `TAW = 1000 [${sum}]`, inputs, source: 'FAO-56 Eq. 82, summed over the layers down to Zr' };
}

function movedStep({ record }: ToldDay): WorkingStep {
  const { available, availableBefore } = record;
  const step = { part: 'root-zone', symbol: 'ΔDr', result: record.moved, unit: 'mm', source: 'FAO-56 chapter 8, text of Eq. 85' };
  const holding = [mm('TAW', available), mm('TAW, yesterday', availableBefore)];
  if (available > availableBefore) {
    return {
      ...step,
      name: 'Depletion of the soil that roots grew into',
      expression: 'ΔDr = Db,yesterday (TAW − TAW,yesterday) / (Wmax − TAW,yesterday); Wmax: TAW to the deepest root of the run',
      inputs: [mm('Db, yesterday', record.openingBelow), ...holding, mm('Wmax', record.deepest)],
    };
  }
  if (available < availableBefore) {
    return {
      ...step,
      name: 'Depletion given back by a shallower root zone',
      expression: 'ΔDr = −Dr,yesterday (TAW,yesterday − TAW) / TAW,yesterday',
      inputs: [mm('Dr, yesterday', record.openingDepletion), ...holding],
    };
  }
  return { ...step, name: 'Depletion of the soil that roots grew into', expression: 'ΔDr = 0; the roots have not moved', inputs: [] };
}

/** Runoff where it differs from strip to strip; that of the parcel stands with its weather. */
function runoffSteps({ record, ground, soil }: ToldDay): WorkingStep[] {
  if (Number.isNaN(record.curveNumber)) return [];
  return surfaceRunoffSteps({
    curveNumber: soil.curveNumber,
    depletion: record.openingSurface,
    readily: ground.readilyEvaporable,
    total: ground.totalEvaporable,
    liquid: record.liquid,
    runoff: record.surfaceRunoff,
  });
}

function rainSteps({ record, rain }: ToldDay): WorkingStep[] {
  const part = 'irrigation';
  const water = mm(rain, record.liquid);
  const entered = mm('Pi', record.infiltration);
  const depletion = mm('Dr,0', record.grownDepletion);
  if (record.ponded) {
    return [
      {
        part,
        symbol: 'Dr,rain',
        name: 'Root-zone depletion after rain and ponded water',
        expression: `Dr,rain = max(0, Dr,0 − ${rain} − X,yesterday); the bunds hold what does not enter`,
        inputs: [depletion, water, mm('X, yesterday', record.openingPond)],
        result: record.rainedDepletion,
        unit: 'mm',
        source: 'FAO-56 Eq. 85, with a store of ponded water',
      },
      {
        part,
        symbol: 'X,rain',
        name: 'Water above field capacity after rain',
        expression: `X,rain = max(0, X,yesterday + ${rain} − Dr,0)`,
        inputs: [mm('X, yesterday', record.openingPond), water, depletion],
        result: record.pondRained,
        unit: 'mm',
        source: 'balance of the ponded store',
      },
    ];
  }
  return [
    {
      part,
      symbol: 'Pi',
      name: 'Water from the sky that enters the soil',
      expression: `Pi = ${rain} − RO`,
      inputs: [water, mm('RO', record.surfaceRunoff)],
      result: record.infiltration,
      unit: 'mm',
      source: 'FAO-56 Eq. 85',
    },
    {
      part,
      symbol: 'Dr,rain',
      name: 'Root-zone depletion after rain',
      expression: 'Dr,rain = max(0, Dr,0 − Pi)',
      inputs: [depletion, entered],
      result: record.rainedDepletion,
      unit: 'mm',
      source: 'FAO-56 Eq. 85',
    },
    {
      part,
      symbol: 'DR',
      name: 'Rain draining out of the root zone',
      expression: 'DR = max(0, Pi − Dr,0)',
      inputs: [entered, depletion],
      result: record.rainExcess,
      unit: 'mm',
      source: 'FAO-56 Eq. 88',
    },
    {
      part,
      symbol: 'DP',
      name: 'Deep percolation of rain, past the deepest root',
      expression: 'DP = DR − min(DR, Db,0)',
      inputs: [mm('DR', record.rainExcess), mm('Db,0', record.belowGrown)],
      result: record.deepPercolation,
      unit: 'mm',
      source: 'FAO-56 Eq. 88, with the soil below the root zone refilled first',
    },
    {
      part,
      symbol: 'Db,rain',
      name: 'Depletion of the soil below the roots after rain',
      expression: 'Db,rain = Db,0 − (DR − DP)',
      inputs: [mm('Db,0', record.belowGrown), mm('DR', record.rainExcess), mm('DP', record.deepPercolation)],
      result: record.rainedBelow,
      unit: 'mm',
      source: 'continuity',
    },
  ];
}

/** Wetting without bunds: what stays, what passes the root zone, what is lost; and a pond that was let go. */
function drainageSteps({ record }: ToldDay): WorkingStep[] {
  const part = 'root-zone';
  const rained = mm('Dr,rain', record.rainedDepletion);
  const released = record.released > 0 ? [mm('X, yesterday', record.released)] : [];
  const less = record.released > 0 ? ' − X,yesterday' : '';
  const more = record.released > 0 ? ' + X,yesterday' : '';
  const leached = record.leachingRequirement > 0;
  const share = leached ? '(1 − LR) I' : 'I';
  const inputs = [rained, mm('I', record.irrigation), ...(leached ? [one('LR', record.leachingRequirement)] : []), ...released];
  const steps: WorkingStep[] = [
    {
      part,
      symbol: 'Dr,1',
      name: 'Root-zone depletion after wetting and drainage',
      expression: `Dr,1 = max(0, Dr,rain − ${share}${less})${record.released > 0 ? '; the field is drained' : ''}`,
      inputs,
      result: record.wettedDepletion,
      unit: 'mm',
      source: 'FAO-56 Eq. 85 and 88, drained before ET as in Example 38',
    },
  ];
  if (record.irrigation === 0 && record.released === 0) return steps;
  steps.push({
    part,
    symbol: 'DI',
    name: 'Irrigation passing the root zone',
    expression: leached ? `DI = LR I + max(0, (1 − LR) I${more} − Dr,rain)` : `DI = max(0, I${more} − Dr,rain)`,
    inputs,
    result: record.irrigationExcess,
    unit: 'mm',
    source: 'continuity; kept in the soil below as far as that is depleted',
  });
  return [...steps, lostStep(record)];
}

function lostStep(record: ToldDay['record'], spilled = 0): WorkingStep {
  return {
    part: 'root-zone',
    symbol: 'IP',
    name: 'Irrigation water lost below the roots',
    expression: spilled > 0 ? 'IP = DI − min(DI, Db,rain) + SPi' : 'IP = DI − min(DI, Db,rain)',
    inputs: [mm('DI', record.irrigationExcess), mm('Db,rain', record.rainedBelow), ...(spilled > 0 ? [mm('SPi', spilled)] : [])],
    result: record.irrigationPercolation,
    unit: 'mm',
    source: 'FAO-56 Eq. 88 (irrigation part), with the soil below the root zone refilled first',
  };
}

function pondSteps({ record, ground }: ToldDay): WorkingStep[] {
  const part = 'root-zone';
  const spilled = record.spill - record.surfaceRunoff;
  const edges = [mm('pores', record.pores), mm('bund', record.bund)];
  const steps: WorkingStep[] = [
    {
      part,
      symbol: 'Dr,1',
      name: 'Root-zone depletion after irrigation',
      expression: 'Dr,1 = max(0, Dr,rain − I)',
      inputs: [mm('Dr,rain', record.rainedDepletion), mm('I', record.irrigation)],
      result: record.wettedDepletion,
      unit: 'mm',
      source: 'FAO-56 Eq. 85',
    },
  ];
  const filled = [mm('X,rain', record.pondRained), mm('I', record.irrigation), mm('Dr,rain', record.rainedDepletion)];
  if (record.spill > 0) {
    steps.push({
      part,
      symbol: 'SP',
      name: 'Water spilling over the bunds',
      expression: 'SP = X,rain + max(0, I − Dr,rain) − pores − bund',
      inputs: [...filled, ...edges],
      result: record.spill,
      unit: 'mm',
      source: 'height of the bunds; up to the rain of the day it is surface runoff, beyond it irrigation water lost (SPi)',
    });
  }
  steps.push(
    {
      part,
      symbol: 'DI',
      name: 'Seepage and percolation out of the ponded store',
      expression: `DI = min(rate, X,rain + max(0, I − Dr,rain)${record.spill > 0 ? ' − SP' : ''})`,
      inputs: [quantity('rate', ground.percolationRate, 'mm d⁻¹'), ...filled, ...(record.spill > 0 ? [mm('SP', record.spill)] : [])],
      result: record.seepage,
      unit: 'mm',
      source: 'percolation rate of the puddled soil',
    },
    lostStep(record, spilled),
    {
      part,
      symbol: 'X,1',
      name: 'Water above field capacity before the day’s ET',
      expression: `X,1 = X,rain + max(0, I − Dr,rain) − DI${record.spill > 0 ? ' − SP' : ''}`,
      inputs: [...filled, mm('DI', record.seepage), ...(record.spill > 0 ? [mm('SP', record.spill)] : [])],
      result: record.pond,
      unit: 'mm',
      source: 'balance of the ponded store',
    },
  );
  return steps;
}

function capillaryStep({ record, curve }: ToldDay): WorkingStep {
  return {
    part: 'root-zone',
    symbol: 'CR',
    name: 'Capillary rise from the water table',
    expression: 'CR = min(CRmax, Dr,1); after it Dr,1 is less by CR',
    inputs: [mm('CRmax', curve.capillaryMost[record.day]), mm('Dr,1', record.wettedDepletion)],
    result: record.capillaryRise,
    unit: 'mm',
    source: 'FAO-56 Eq. 85; the most that rises by Gardner 1958 and Eagleson 1978',
  };
}

function surfaceStep({ record, ground, rain }: ToldDay): WorkingStep {
  const step = { part: 'surface', symbol: 'De,1', name: 'Surface-layer depletion after wetting', result: record.wettedSurface, unit: 'mm' };
  const before = mm('De, yesterday', record.openingSurface);
  const source = 'FAO-56 Eq. 77 and 79';
  if (record.pond > 0 || record.released > 0) {
    return { ...step, expression: 'De,1 = 0; the surface stood under water', inputs: [before], source };
  }
  const entered = mm(record.ponded ? rain : 'Pi', record.infiltration);
  if (record.irrigation === 0) {
    return { ...step, expression: `De,1 = max(0, De,yesterday − ${entered.symbol})`, inputs: [before, entered], source };
  }
  return {
    ...step,
    expression: `De,1 = max(0, De,yesterday − ${entered.symbol} − I / fw,method)`,
    inputs: [before, entered, mm('I', record.irrigation), one('fw,method', ground.methodWetted)],
    source,
  };
}
