/**
 * The working of a strip's irrigation on one day: what called for water, how much was wanted, what the system could give, and what it took at the field's
 * edge. Told from the numbers the loop left behind.
 */
import type { WorkingStep } from '../base/working.ts';
import type { Call } from './day-record.ts';
import { mm, one, type ToldDay } from './told-day.ts';

const part = 'irrigation';

const RULE_SOURCE = 'irrigation rule of the planting; refill as in FAO-56, text of Eq. 86';

/** Why there is no irrigation, or what it is. */
const CALL_TEXT: Readonly<Record<Call, string>> = {
  none: 'nothing is planted that is irrigated',
  'rain-fed': 'the run is rain-fed',
  waits: 'the rule does not call for water',
  'too-little': 'the refill is below the least depth worth an application, and waits',
  depletion: 'starts: Dc ≥ D,start',
  short: 'starts: Dr,rain > p TAW, the crop would run short',
  'goes-on': 'goes on from yesterday',
  due: 'the rule waters today',
  recorded: 'as recorded',
  prescribed: 'given for germination or before planting, whatever the soil says',
  refill: 'the soil is refilled before planting',
  pond: 'the pond stands below its minimum',
};

/** Steps of the day's irrigation; a day without any tells why in one step, after the sums its rule looked at. */
export function irrigationSteps(told: ToldDay): WorkingStep[] {
  const { call } = told.record;
  if (call === 'none' || call === 'rain-fed') return [netStep(told)];
  if (call === 'recorded') return [recordedStep(told)];
  const looked = told.record.ponded && (call === 'pond' || call === 'waits' || call === 'too-little') ? pondLook(told) : soilLook(told);
  const water = told.record.irrigation > 0 ? [grossStep(told)] : [];
  return [...looked, ...wantedSteps(told), netStep(told), ...water];
}

function soilLook({ record, curve, single }: ToldDay): WorkingStep[] {
  const { day } = record;
  const schedule: WorkingStep = {
    part,
    symbol: 'Ds',
    name: 'Depletion of the soil irrigation is scheduled over',
    expression:
      record.scheduleAvailable > record.available
        ? 'Ds = Dr,rain + Db,rain (Ws − TAW) / (Wmax − TAW); Ws: TAW to the scheduling depth, at least half the mature root depth'
        : 'Ds = Dr,rain; the roots reach the scheduling depth',
    inputs: [
      mm('Dr,rain', record.rainedDepletion),
      ...(record.scheduleAvailable > record.available
        ? [mm('Db,rain', record.rainedBelow), mm('Ws', record.scheduleAvailable), mm('TAW', record.available), mm('Wmax', record.deepest)]
        : []),
    ],
    result: record.scheduleDepletion,
    unit: 'mm',
    source: 'common practice: the upper half of the mature root zone is watered while roots are shallow',
  };
  if (record.call === 'due' || record.call === 'refill' || record.call === 'prescribed') return [schedule];
  const fixed = curve.fixedDepth[day];
  const surface: WorkingStep = {
    part,
    symbol: 'De,rain',
    name: 'Surface-layer depletion after rain',
    expression: 'De,rain = max(0, De,yesterday − Pi)',
    inputs: [mm('De, yesterday', record.openingSurface), mm('Pi', record.infiltration)],
    result: record.rainedSurface,
    unit: 'mm',
    source: 'FAO-56 Eq. 77 and 79',
  };
  const calling: WorkingStep = {
    part,
    symbol: 'Dc',
    name: 'Depletion that calls for water',
    expression: single ? 'Dc = Ds' : 'Dc = max(0, Ds − few,yesterday De,rain)',
    inputs: [
      mm('Ds', record.scheduleDepletion),
      ...(single ? [] : [one('few,yesterday', record.openingExposed), mm('De,rain', record.rainedSurface)]),
    ],
    result: record.calling,
    unit: 'mm',
    source:
      'common practice: the dryness of the bare surface is left out of Dc; it calls for water only where it leaves the root zone beyond p TAW',
  };
  const trigger: WorkingStep = {
    part,
    symbol: 'D,start',
    name: 'Depletion at which an irrigation starts',
    expression: `D,start = ${fixed > 0 ? 'min(I,fixed, f p Ws)' : 'f p Ws'}; p of the day before (of the table on the first day)`,
    inputs: [
      ...(fixed > 0 ? [mm('I,fixed', fixed)] : []),
      one('f', curve.triggerShare[day]),
      one('p', record.triggerFraction),
      mm('Ws', record.scheduleAvailable),
    ],
    result: record.trigger,
    unit: 'mm',
    source: 'FAO-56 Eq. 83; f from the application method or the rule',
  };
  return [schedule, ...(single ? [] : [surface]), calling, trigger];
}

function pondLook({ record, ground }: ToldDay): WorkingStep[] {
  return [
    {
      part,
      symbol: 'H',
      name: 'Depth of water on the field after rain',
      expression: `H = max(0, X,rain − pores); supply starts below ${ground.pondMinimum[record.planting]} mm and fills to ${ground.pondTarget[record.planting]} mm`,
      inputs: [mm('X,rain', record.pondRained), mm('pores', record.pores)],
      result: Math.max(0, record.pondRained - record.pores),
      unit: 'mm',
      source: 'common practice of continuous flooding',
    },
  ];
}

/** The depth asked for, before the system's limits. */
function wantedSteps({ record, ground, curve }: ToldDay): WorkingStep[] {
  const { call, wanted } = record;
  if (!(wanted > 0)) return [];
  const step = { part, symbol: 'R', name: 'Net depth wanted', result: wanted, unit: 'mm', source: RULE_SOURCE };
  const schedule = mm('Ds', record.scheduleDepletion);
  if (call === 'prescribed') return [{ ...step, expression: 'R = depth given, with what of it was still owed', inputs: [] }];
  if (call === 'refill') return [{ ...step, expression: 'R = Ds', inputs: [schedule] }];
  if (record.ponded) {
    return [
      {
        ...step,
        expression: 'R = Dr,rain + pores + target − X,rain',
        inputs: [
          mm('Dr,rain', record.rainedDepletion),
          mm('pores', record.pores),
          mm('target', ground.pondTarget[record.planting]),
          mm('X,rain', record.pondRained),
        ],
      },
    ];
  }
  const fixed = curve.fixedDepth[record.day];
  if (fixed > 0) return [{ ...step, expression: 'R = I,fixed', inputs: [mm('I,fixed', fixed)] }];
  const goal = mm('D,goal', record.goal);
  const leached = record.leachingRequirement > 0;
  const steps: WorkingStep[] = [];
  if (record.goal > 0 && call !== 'goes-on') {
    steps.push({
      part,
      symbol: 'D,goal',
      name: 'Depletion the application leaves',
      expression: 'D,goal = (1 − r) Ds; r: share of the depletion the rule takes away',
      inputs: [one('r', curve.refillShare[record.day]), schedule],
      result: record.goal,
      unit: 'mm',
      source: RULE_SOURCE,
    });
  }
  const lack = record.goal > 0 ? 'Ds − D,goal' : 'Ds';
  return [
    ...steps,
    {
      ...step,
      expression: leached ? `R = (${lack}) / (1 − LR)` : `R = ${lack}`,
      inputs: [schedule, ...(record.goal > 0 ? [goal] : []), ...(leached ? [one('LR', record.leachingRequirement)] : [])],
      source: leached ? 'FAO-29 rev. 1, chapter 2 (recalled): LR = ECw / (5 ECe − ECw)' : RULE_SOURCE,
    },
  ];
}

function netStep({ record, ground }: ToldDay): WorkingStep {
  const step = { part, symbol: 'I', name: 'Net irrigation', result: record.irrigation, unit: 'mm', source: RULE_SOURCE };
  if (record.irrigation === 0) {
    const expression = `I = 0; ${CALL_TEXT[record.call]}`;
    if (record.call === 'too-little') {
      return { ...step, expression, inputs: [mm('R', record.wanted), mm('least depth', ground.minimumDepth)] };
    }
    if (record.call !== 'waits' || record.ponded) return { ...step, expression, inputs: [] };
    return {
      ...step,
      expression,
      inputs: [
        mm('Dc', record.calling),
        mm('D,start', record.trigger),
        mm('Dr,rain', record.rainedDepletion),
        one('p', record.triggerFraction),
        mm('TAW', record.available),
      ],
    };
  }
  return {
    ...step,
    expression: `I = min(R, Imax); ${CALL_TEXT[record.call]}`,
    inputs: [mm('R', record.wanted), mm('Imax', ground.most)],
  };
}

function grossStep(told: ToldDay): WorkingStep {
  const { record } = told;
  return {
    part,
    symbol: 'Ig',
    name: 'Gross irrigation',
    expression: `Ig = I / Ea${efficiencyNote(told)}`,
    inputs: [mm('I', record.irrigation), one('Ea', record.efficiency)],
    result: record.gross,
    unit: 'mm',
    source: 'definition of application efficiency',
  };
}

function recordedStep(told: ToldDay): WorkingStep {
  const { record } = told;
  return {
    part,
    symbol: 'I',
    name: 'Net irrigation, from the delivery on record',
    expression: `I = Ig Ea${efficiencyNote(told)}`,
    inputs: [mm('Ig', record.gross), one('Ea', record.efficiency)],
    result: record.irrigation,
    unit: 'mm',
    source: 'recorded delivery; definition of application efficiency',
  };
}

function efficiencyNote({ ground }: ToldDay): string {
  if (ground.efficiencies.length === 1) return '';
  const points = [...ground.efficiencyDepths].map((depth, k) => `${depth} mm: ${ground.efficiencies[k]}`).join(', ');
  return `; Ea of the depth I, linear between ${points}`;
}
