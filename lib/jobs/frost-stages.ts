/** The stage of each crop: as the reader chose it, else from thermal time; and the critical temperatures that go with it. */
import { type BudStageRow, CRITICAL_TABLES, type CriticalTable, findCriticalTable } from '../../db/library/frost.ts';
import { Malformed } from '../base/errors.ts';
import { stageReached } from '../energy/frost-stage.ts';

/** What the reader chose for a table or a crop. */
export type StageChoice =
  | { readonly kind: 'stage'; readonly table: CriticalTable; readonly stage: BudStageRow }
  | { readonly kind: 'auto'; readonly table: CriticalTable }
  | { readonly kind: 'own'; readonly critical: number };

/** By table code or crop code. */
export type StageChoices = ReadonlyMap<string, StageChoice>;

/** Limits of an own critical temperature [°C]. */
const OWN_LIMITS = [-30, 10] as const;

/**
 * Reads `apple:full-pink,peach:auto,grape-wine:-1.1,apple-cherry-pear-active-cover-killing-frost:sweet-cherry.first-white`: before the colon a table or a crop, after it
 * a stage of the table, `auto`, another table, a table and its stage, or a temperature in °C of one's own.
 *
 * @throws {Malformed} saying which part is not understood and what may stand there
 */
export function parseStages(text: string | undefined): StageChoices {
  const choices = new Map<string, StageChoice>();
  for (const part of (text ?? '').split(',').map((each) => each.trim())) {
    if (part === '') continue;
    const at = part.indexOf(':');
    if (at < 1) throw new Malformed(`stages: "${part}" is not of the form crop:stage`);
    const [key, value] = [part.slice(0, at), part.slice(at + 1)];
    choices.set(key, choiceOf(key, value));
  }
  return choices;
}

function choiceOf(key: string, value: string): StageChoice {
  if (value !== '' && Number.isFinite(Number(value))) {
    const critical = Number(value);
    if (critical < OWN_LIMITS[0] || critical > OWN_LIMITS[1]) {
      throw new Malformed(`stages: critical temperature ${value} °C of "${key}" outside limits ${OWN_LIMITS[0]} … ${OWN_LIMITS[1]} °C`);
    }
    return { kind: 'own', critical };
  }
  const own = findCriticalTable(key);
  const [first, second] = value.split('.');
  const table = findCriticalTable(first) ?? own;
  const stageId = findCriticalTable(first) ? second : first;
  if (!table) {
    const names = CRITICAL_TABLES.map(({ code }) => code).join(', ');
    throw new Malformed(`stages: "${value}" of "${key}" names no table of critical temperatures: there are ${names}`);
  }
  if (stageId === undefined || stageId === 'auto') return { kind: 'auto', table };
  const stage = table.stages.find(({ id }) => id === stageId);
  if (stage) return { kind: 'stage', table, stage };
  const stages = table.stages.map(({ id }) => id).join(', ');
  throw new Malformed(`stages: "${stageId}" is no stage of ${table.code}: there are auto, ${stages}`);
}

/** Crops named in the choices: they count although their library names no table. */
export function chosenCrops(choices: StageChoices): string[] {
  return [...choices.keys()].filter((key) => !findCriticalTable(key));
}

/** Stage and critical temperatures of one planting on a night. Temperatures [°C], NaN where there are none. */
export interface PlantingStage {
  readonly table: string | null;
  readonly tableName: string | null;
  readonly stage: string | null;
  readonly stageName: string | null;
  /** chosen by the reader, from thermal time, before the first stage of the table or after leaf fall, or not to be told */
  readonly from: 'chosen' | 'thermal-time' | 'dormant' | 'unknown';
  readonly tenthKilled: number;
  readonly mostKilled: number;
}

interface StageOf {
  readonly crop: string;
  readonly frostTable: string | null;
  /** [°C d] */
  readonly thermalTime: number;
  readonly leafless: boolean;
}

const NO_STAGE = { stage: null, stageName: null, tenthKilled: Number.NaN, mostKilled: Number.NaN } as const;

/** The choice for the crop itself stands before that for its table. */
export function plantingStage(choices: StageChoices, { crop, frostTable, thermalTime, leafless }: StageOf): PlantingStage {
  const choice = choices.get(crop) ?? (frostTable ? choices.get(frostTable) : undefined);
  if (choice?.kind === 'own') {
    const name = 'Own critical temperature';
    return {
      ...{ table: null, tableName: null, stage: 'own', stageName: name, from: 'chosen' },
      ...{ tenthKilled: choice.critical, mostKilled: Number.NaN },
    };
  }
  const table = choice?.table ?? (frostTable ? findCriticalTable(frostTable) : undefined);
  if (!table) return { table: null, tableName: null, ...NO_STAGE, from: 'unknown' };
  const named = { table: table.code, tableName: table.name };
  if (choice?.kind === 'stage') return { ...named, ...numbersOf(choice.stage), from: 'chosen' };
  if (leafless) return { ...named, ...NO_STAGE, from: 'dormant' };
  if (Number.isNaN(thermalTime)) return { ...named, ...NO_STAGE, from: 'unknown' };
  const reached = stageReached(table.stages, thermalTime) as BudStageRow | null;
  return reached ? { ...named, ...numbersOf(reached), from: 'thermal-time' } : { ...named, ...NO_STAGE, from: 'dormant' };
}

function numbersOf({ id, name, tenthKilled, mostKilled }: BudStageRow) {
  return { stage: id, stageName: name, tenthKilled, mostKilled };
}
