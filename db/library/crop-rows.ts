/**
 * Reads the printed crop table into rows: names and codes, numbers, ranges reduced to their middle.
 */
import type { Crop } from '../../lib/season/types.ts';
import { CROP_TABLE } from './crop-table.ts';

/** One line of the table. NaN where the tables list nothing. */
export interface CropRow {
  readonly code: string;
  readonly name: string;
  readonly group: string;
  readonly type: Crop['type'];
  readonly cycle: 'first' | 'later' | null;
  readonly singleInitial: number;
  readonly singleMid: number;
  readonly singleEnd: number;
  readonly basalInitialLow: number;
  readonly basalInitialHigh: number;
  readonly basalMid: number;
  readonly basalEnd: number;
  readonly heightMax: number;
  readonly stages: { readonly initial: number; readonly development: number; readonly mid: number; readonly late: number } | null;
  readonly plantingText: string;
  readonly region: string;
  readonly rootDepthMax: number;
  readonly depletionFraction: number;
  readonly yieldResponse: number;
  readonly salinityThreshold: number;
  readonly salinitySlope: number;
  readonly notes: string;
}

export function cropRows(): CropRow[] {
  const [header, ...lines] = CROP_TABLE.split('\n').map(splitLine);
  return lines.map((cells) => cropRow(Object.fromEntries(header.map((name, i) => [name, cells[i]]))));
}

function cropRow(cell: Record<string, string>): CropRow {
  const [low, high] = ends(cell.Kcb_ini);
  const mid = (name: string) => middle(cell[`${name.replace('#', 'lo')}`], cell[`${name.replace('#', 'hi')}`]);
  return {
    ...namesOf(cell.crop),
    group: sentence(cell.group.slice(2)),
    type: cell.type as Crop['type'],
    singleInitial: number(cell.Kc_ini),
    singleMid: mid('Kc_mid_#'),
    singleEnd: mid('Kc_end_#'),
    basalInitialLow: low,
    basalInitialHigh: high,
    basalMid: mid('Kcb_mid_#'),
    basalEnd: mid('Kcb_end_#'),
    heightMax: mid('h_max_#_m'),
    stages: stagesOf(cell),
    plantingText: cell.plant_date,
    region: cell.region,
    rootDepthMax: mid('Zr_max_#_m'),
    depletionFraction: number(cell.p),
    yieldResponse: mid('Ky_season_#'),
    salinityThreshold: mid('ECe_threshold_#_dSm'),
    salinitySlope: mid('salinity_slope_#_pct_per_dSm'),
    notes: cell.notes,
  };
}

/** Variants that are one crop share a name: stage sets, cutting cycles, and the dry bean printed under two spellings. */
function namesOf(printed: string): Pick<CropRow, 'code' | 'name' | 'cycle'> {
  const plain = printed.replace(' (2nd stage set)', '').replace(' / pulses', '');
  const cycle = plain.includes('later cutting cycles') ? 'later' : plain.includes('cutting cycle 1') ? 'first' : null;
  const name = plain.replace(/, (later cutting cycles|cutting cycle 1)/, '');
  return {
    code: kebab(name),
    name: sentence(name.replaceAll(/ *\/ */g, ', ').replace(/ (dry|grain|sweet|green|fresh|seed)$/, ', $1')),
    cycle,
  };
}

function stagesOf(cell: Record<string, string>): CropRow['stages'] {
  if (cell.L_ini_d === '') return null;
  return { initial: number(cell.L_ini_d), development: number(cell.L_dev_d), mid: number(cell.L_mid_d), late: number(cell.L_late_d) };
}

/** @example kebab('bean dry / pulses') // 'bean-dry-pulses' */
export function kebab(text: string): string {
  return text
    .toLowerCase()
    .replaceAll(/[^a-z0-9]+/g, '-')
    .replaceAll(/^-|-$/g, '');
}

function sentence(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}

function number(text: string): number {
  return text === '' ? Number.NaN : Number(text);
}

function ends(text: string): [number, number] {
  const [low, high] = text.split('-');
  return [number(low), number(high ?? low)];
}

function middle(low: string, high: string): number {
  return Math.round(((number(low) + number(high)) / 2) * 10000) / 10000;
}

/** Splits one line of the table: comma between cells, double quotes around a cell that holds commas. */
function splitLine(line: string): string[] {
  return [...line.matchAll(/(?:^|,)(?:"([^"]*)"|([^,]*))/g)].map((match) => match[1] ?? match[2]);
}
