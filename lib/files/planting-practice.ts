/**
 * How a planting is watered and covered, from the columns of a table of plantings.
 */
import type { IrrigationRule } from '../season/types.ts';
import { shown } from './finding-list.ts';
import type { PlainRow } from './plain-table.ts';
import type { PlantingPractice } from './reading.ts';
import type { TableRole } from './table-columns.ts';

const STAGES = ['initial', 'development', 'mid', 'late'] as const;
const RULES = ['depletion', 'interval', 'fixed-depth', 'daily', 'deficit', 'none'] as const;
type Rule = (typeof RULES)[number];

/** Other words for a rule, in lower case. */
const RULE_WORDS: Readonly<Record<string, Rule>> = {
  'fixed depth': 'fixed-depth',
  fixed: 'fixed-depth',
  'every day': 'daily',
  'rain-fed': 'none',
  rainfed: 'none',
  dry: 'none',
};

/** Net depth of an application or a pre-irrigation [mm], days between applications, days around the planting. */
const DEPTH = { low: 1, high: 500, unit: 'mm' } as const;
const MOST_DAYS = 120;

/** Columns, all of them optional. Shares may be written as fractions or in percent. */
export const PRACTICE_ROLES: readonly TableRole[] = [
  { role: 'irrigation_rule', names: ['irrigation rule', 'irrigation', 'rule', 'irrigation kind'] },
  { role: 'irrigation_trigger', names: ['irrigation trigger', 'trigger', 'trigger share'], kind: 'share' },
  { role: 'irrigation_refill', names: ['irrigation refill', 'refill', 'refill share'], kind: 'share' },
  { role: 'irrigation_interval', names: ['irrigation interval', 'irrigation interval d', 'interval', 'interval d', 'interval days'] },
  { role: 'irrigation_depth', names: ['irrigation depth', 'application depth', 'depth'], kind: 'depth' },
  ...STAGES.flatMap((stage): TableRole[] => [
    { role: `trigger_${stage}`, names: [`trigger ${stage}`], kind: 'share' },
    { role: `refill_${stage}`, names: [`refill ${stage}`], kind: 'share' },
  ]),
  { role: 'mulch', names: ['mulch', 'mulch kind'] },
  { role: 'mulch_cover', names: ['mulch cover', 'mulch share'], kind: 'share' },
  { role: 'canopy_cover', names: ['canopy cover', 'fraction covered', 'ground cover'], kind: 'share' },
  { role: 'canopy_height', names: ['canopy height', 'tree height'], kind: 'length' },
  { role: 'pre_irrigation_days', names: ['pre irrigation days', 'pre irrigation', 'pre irrigation d', 'preirrigation days'] },
  { role: 'pre_irrigation_depth', names: ['pre irrigation depth', 'preirrigation depth'], kind: 'depth' },
  { role: 'germination', names: ['germination', 'germination irrigations'] },
];

/** What the row says of the practice; null when it says nothing. Problems are told to the row, which is then left out. */
export function practiceOf(row: PlainRow): PlantingPractice | null {
  const practice = {
    irrigation: irrigationOf(row),
    mulch: mulchOf(row),
    canopy: canopyOf(row),
    preIrrigation: preIrrigationOf(row),
    germination: germinationOf(row),
  };
  const given = Object.entries(practice).filter(([, value]) => value !== undefined);
  return given.length > 0 ? (Object.fromEntries(given) as PlantingPractice) : null;
}

function irrigationOf(row: PlainRow): IrrigationRule | undefined {
  const numbers = {
    trigger: share(row, 'irrigation_trigger', 2),
    refill: share(row, 'irrigation_refill', 1),
    days: row.number('irrigation_interval', { low: 1, high: MOST_DAYS, unit: 'd' }),
    depth: row.number('irrigation_depth', DEPTH),
  };
  const stages = STAGES.map((stage) => ({ trigger: share(row, `trigger_${stage}`, 2), refill: share(row, `refill_${stage}`, 1) }));
  const rule = namedRule(row) ?? impliedRule(numbers, stages);
  if (rule === null) return undefined;
  if (rule === 'interval') return wholeDays(row, numbers.days);
  if (rule === 'fixed-depth') {
    if (numbers.depth === null) return needs(row, rule, 'irrigation_depth', 'its net depth in mm');
    return { kind: rule, depth: numbers.depth };
  }
  if (rule === 'deficit') return deficitRule(row, numbers, stages);
  if (rule !== 'depletion') return { kind: rule };
  return {
    kind: rule,
    ...(numbers.trigger === null ? {} : { trigger: numbers.trigger }),
    ...(numbers.refill === null ? {} : { refill: numbers.refill }),
  };
}

interface StageShares {
  readonly trigger: number | null;
  readonly refill: number | null;
}

function deficitRule(row: PlainRow, all: StageShares, stages: readonly StageShares[]): IrrigationRule | undefined {
  const filled = stages.map(({ trigger, refill }) => ({ trigger: trigger ?? all.trigger, refill: refill ?? all.refill ?? 1 }));
  const missing = filled.findIndex(({ trigger }) => trigger === null);
  if (missing >= 0) return needs(row, 'deficit', `trigger_${STAGES[missing]}`, 'a trigger for every stage, or one in irrigation_trigger');
  const byStage = Object.fromEntries(STAGES.map((stage, k) => [stage, { trigger: filled[k].trigger ?? 1, refill: filled[k].refill }]));
  return { kind: 'deficit', stages: byStage as Extract<IrrigationRule, { kind: 'deficit' }>['stages'] };
}

function wholeDays(row: PlainRow, days: number | null): IrrigationRule | undefined {
  if (days === null) return needs(row, 'interval', 'irrigation_interval', 'the days between two irrigations');
  if (!Number.isInteger(days)) {
    row.fail({
      code: 'not-whole-days',
      message: `The irrigation interval ${days} is not a whole number of days.`,
      role: 'irrigation_interval',
      limit: `1 to ${MOST_DAYS} d`,
      advice: 'Give whole days.',
    });
    return undefined;
  }
  return { kind: 'interval', days };
}

function namedRule(row: PlainRow): Rule | null {
  const cell = row.cell('irrigation_rule').toLowerCase();
  // "none" is a word for a missing value everywhere else; here it is a rule, and must not turn into irrigation
  const text = cell === 'none' ? cell : (row.text('irrigation_rule')?.toLowerCase() ?? null);
  if (text === null) return null;
  const rule = RULES.find((known) => known === text) ?? RULE_WORDS[text];
  if (rule) return rule;
  row.fail({
    code: 'unknown-irrigation-rule',
    message: `Irrigation rule "${shown(text)}" is not known.`,
    role: 'irrigation_rule',
    limit: RULES.join(', '),
    advice: 'Write one of these, or leave the cell empty for the rule of the application method.',
  });
  return null;
}

/** The rule that numbers without its name can only mean. */
function impliedRule(
  numbers: { trigger: number | null; refill: number | null; days: number | null; depth: number | null },
  stages: readonly StageShares[],
) {
  if (numbers.days !== null) return 'interval';
  if (numbers.depth !== null) return 'fixed-depth';
  if (stages.some(({ trigger, refill }) => trigger !== null || refill !== null)) return 'deficit';
  return numbers.trigger !== null || numbers.refill !== null ? 'depletion' : null;
}

function needs(row: PlainRow, rule: string, role: string, what: string): undefined {
  if (row.good)
    row.fail({
      code: 'irrigation-rule-incomplete',
      message: `Irrigation rule "${rule}" has no ${role}.`,
      role,
      limit: what,
      advice: `Give ${what}.`,
    });
  return undefined;
}

/** A share as a fraction; above `most` it is read as percent. Null when not given. */
function share(row: PlainRow, role: string, most: number): number | null {
  const value = row.number(role, { low: 0, high: 100 * most, unit: '%' });
  if (value === null) return null;
  return value > most ? value / 100 : value;
}

function mulchOf(row: PlainRow): PlantingPractice['mulch'] {
  const kind = row.text('mulch')?.toLowerCase() ?? null;
  const cover = share(row, 'mulch_cover', 1);
  if (kind === null && cover === null) return undefined;
  if (kind !== 'plastic' && kind !== 'organic') {
    row.fail({
      code: 'unknown-mulch',
      message: kind === null ? 'Mulch cover is given without the kind of mulch.' : `Mulch "${shown(kind)}" is not known.`,
      role: 'mulch',
      limit: 'plastic, organic, none',
      advice: 'Write one of these.',
    });
    return undefined;
  }
  return { kind, cover: cover ?? 1 };
}

function canopyOf(row: PlainRow): PlantingPractice['canopy'] {
  const cover = share(row, 'canopy_cover', 1);
  const height = row.number('canopy_height', { low: 0.1, high: 30, unit: 'm' });
  if ((cover === null && height === null) || !row.good) return undefined;
  if (cover === null || height === null) {
    row.fail({
      code: 'canopy-incomplete',
      message: `The canopy has no ${cover === null ? 'cover' : 'height'}.`,
      role: cover === null ? 'canopy_cover' : 'canopy_height',
      limit: 'both cover and height',
      advice: 'Give both, or neither for the coefficients of the table.',
    });
    return undefined;
  }
  return { cover, height };
}

function preIrrigationOf(row: PlainRow): PlantingPractice['preIrrigation'] {
  const daysBefore = row.number('pre_irrigation_days', { low: 0, high: MOST_DAYS, unit: 'd' });
  const depth = row.number('pre_irrigation_depth', DEPTH);
  if (daysBefore === null && depth === null) return undefined;
  return { daysBefore: Math.round(daysBefore ?? 0), ...(depth === null ? {} : { depth }) };
}

/** "2:20; 8:15": 20 mm two days after planting, 15 mm eight days after. */
function germinationOf(row: PlainRow): PlantingPractice['germination'] {
  const text = row.text('germination');
  if (text === null) return undefined;
  const given: { daysAfter: number; depth: number }[] = [];
  for (const part of text.split(/[;|]/)) {
    const match = /^\s*(\d{1,3})\s*:\s*(\d+(?:\.\d+)?)\s*$/.exec(part);
    const [daysAfter, depth] = match ? [Number(match[1]), Number(match[2])] : [Number.NaN, Number.NaN];
    if (!(daysAfter <= MOST_DAYS && depth >= DEPTH.low && depth <= DEPTH.high)) {
      row.fail({
        code: 'not-a-germination',
        message: `Germination irrigation "${shown(part.trim())}" is not days and depth.`,
        role: 'germination',
        limit: `days 0 to ${MOST_DAYS}, depth ${DEPTH.low} to ${DEPTH.high} mm`,
        advice: 'Write days after planting and net mm with a colon between, divided by semicolons: 2:20;8:15.',
      });
      return undefined;
    }
    given.push({ daysAfter, depth });
  }
  return given;
}
