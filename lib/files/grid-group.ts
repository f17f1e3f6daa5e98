/**
 * Reads all quantities of one set of cells, or of one list of stations, into blocks.
 */
import type { DayNumber } from '../base/civil-date.ts';
import { SECONDS_PER_DAY } from '../base/units.ts';
import type { BlockVariable } from '../weather/variable.ts';
import type { FindingList } from './finding-list.ts';
import { type BinCounts, type BinOutput, Bins, DEFAULT_MINIMUM_HOURS, dayBins, hourBins } from './grid-bins.ts';
import { chooseFields, combineRoles } from './grid-choice.ts';
import type { Field } from './grid-fields.ts';
import { dayOutputs, HOURLY_CELL_LIMIT, hourOutput } from './grid-outputs.ts';
import { type PlannedSeries, planSeries } from './grid-plan.ts';
import { reportInputs, reportShortDays, reportStore } from './grid-report.ts';
import { readSeries, type Series, type Sinks } from './grid-series.ts';
import { type CellsOfFile, stepArea } from './grid-slab.ts';
import { CellRows, type Emit, MonthBuffer, type ValueStore } from './grid-store.ts';
import { isTiled, planReading, type ReadingPlan } from './grid-tiles.ts';
import type { ZoneOffset } from './grid-zone.ts';
import type { ImportOptions } from './reading.ts';

/** Cells or stations that are read together. */
export interface CellGroup {
  /** sorted */
  readonly codes: readonly string[];
  readonly fields: readonly Field[];
  readonly cellsOf: (field: Field) => CellsOfFile;
}

/** What reading rests on beside the group. */
export interface GroupReading {
  readonly options: ImportOptions;
  readonly findings: FindingList;
  /** zone whose day is the day of weather */
  readonly zone: { readonly name: string; readonly offset: ZoneOffset };
  readonly stampZone: ZoneOffset | null;
  readonly emit: Emit;
  readonly progress: (share: number) => Promise<void>;
}

export interface GroupResult {
  readonly planned: readonly PlannedSeries[];
  readonly stores: readonly ValueStore[];
  /** 1 for each cell that has a value */
  readonly seen: Uint8Array;
}

/** Reads a group. Fields that cannot be used are findings. */
export async function readGroup(group: CellGroup, reading: GroupReading): Promise<GroupResult> {
  const { options, findings, stampZone } = reading;
  const chosen = chooseFields(group.fields, findings);
  const planned: PlannedSeries[] = [];
  const told = new Set<string>();
  for (const combination of combineRoles(chosen, findings)) {
    const series = await planSeries(combination, { options, findings, stampZone, told, cellsOf: group.cellsOf });
    if (series) planned.push(series);
  }
  const seen = new Uint8Array(group.codes.length);
  const given = new Set(planned.map(({ makes }) => makes));
  const stores: ValueStore[] = [];
  for (const [i, one] of planned.entries()) {
    const progress = (share: number) => reading.progress((i + share) / planned.length);
    stores.push(...(await readOne(one, { group, reading: { ...reading, progress }, seen, given })));
  }
  return { planned, stores, seen };
}

interface OneReading {
  readonly group: CellGroup;
  readonly reading: GroupReading;
  readonly seen: Uint8Array;
  readonly given: ReadonlySet<PlannedSeries['makes']>;
}

async function readOne(planned: PlannedSeries, { group, reading, seen, given }: OneReading): Promise<ValueStore[]> {
  const { series, makes, parts } = planned;
  const [field] = series.inputs[0].fields;
  const span = spanOf(series);
  const stepCount = Math.max(...series.steps.runs.map(({ count }) => count));
  const counts = { area: stepArea(group.cellsOf(field)), cells: group.codes.length, steps: stepCount, dayCount: span.dayCount };
  const plan = planReading(field.variable, field.dimensions.time, counts);
  const storeOf = (variable: BlockVariable) =>
    isTiled(plan, group.codes.length)
      ? new CellRows(variable, group.codes, seen, reading.emit, span)
      : new MonthBuffer(variable, group.codes, seen, reading.emit);
  const minimumHours = reading.options.minimumHours ?? DEFAULT_MINIMUM_HOURS;
  const short: BinCounts = { short: 0, firstShort: null };
  const { sinks, stores } = sinksOf(planned, storeOf, {
    reading,
    given,
    minimumHours,
    short,
    cells: group.codes.length,
    near: span.from * SECONDS_PER_DAY,
  });
  await readSeries(series, group.cellsOf, group.codes.length, plan satisfies ReadingPlan, sinks, reading.progress);
  for (const store of stores) await store.finish();
  reportInputs(planned, group.codes, reading.findings);
  reportShortDays(parts[0].label, short, minimumHours, reading.findings);
  for (const store of stores) reportStore(store, group.codes, reading.findings);
  return stores.filter(({ variable }) => variable !== hourOutput(makes)?.variable);
}

interface SinkQuestion {
  readonly reading: GroupReading;
  readonly given: OneReading['given'];
  readonly minimumHours: number;
  readonly short: BinCounts;
  readonly cells: number;
  readonly near: number;
}

function sinksOf(
  { series, makes }: PlannedSeries,
  storeOf: (variable: BlockVariable) => ValueStore,
  question: SinkQuestion,
): { sinks: Sinks; stores: ValueStore[] } {
  if (series.steps.daily) {
    const daily = storeOf(makes);
    return { sinks: { daily, bins: () => [] }, stores: [daily] };
  }
  const { zone } = question.reading;
  const days: BinOutput[] = dayOutputs(makes, question.given).map(({ variable, statistic }) => ({ statistic, store: storeOf(variable) }));
  const hour = series.steps.seconds <= 3600 && question.cells <= HOURLY_CELL_LIMIT ? hourOutput(makes) : null;
  const hours: BinOutput[] = hour ? [{ statistic: hour.statistic, store: storeOf(hour.variable) }] : [];
  const unused: BinCounts = { short: 0, firstShort: null };
  const bins = (first: number, count: number) => [
    new Bins(count, first, dayBins(zone.offset), days, question.minimumHours, question.short),
    ...(hours.length > 0 ? [new Bins(count, first, hourBins(zone.name, question.near), hours, question.minimumHours, unused)] : []),
  ];
  return { sinks: { daily: null, bins }, stores: [...days, ...hours].map(({ store }) => store) };
}

/** Days that the values of a series can fall on. */
function spanOf({ steps }: Series): { readonly from: DayNumber; readonly dayCount: number } {
  let [first, last] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
  for (const { piece, first: start, count } of steps.runs) {
    for (let i = start; i < start + count; i++) {
      first = Math.min(first, steps.daily ? steps.days[piece][i] : Math.floor(steps.from[piece][i] / SECONDS_PER_DAY) - 1);
      last = Math.max(last, steps.daily ? steps.days[piece][i] : Math.floor(steps.to[piece][i] / SECONDS_PER_DAY) + 1);
    }
  }
  return { from: first, dayCount: last - first + 1 };
}
