/** Classes of the map: limits over the weeks in question, the class of every parcel, and the legend's rows. */
import type { UnitSystem } from '../../../lib/base/units.ts';
import { type Classes, type ClassMethod, classify, classOf } from '../../../lib/report/classes.ts';
import type { Theme } from '../../../lib/report/colour-scale.ts';
import { legendOf } from '../../../lib/report/legend.ts';
import { coloursOf, NO_VALUE, NOUGHT, noughtColour } from './map-look.ts';
import type { WeekValues } from './map-values.ts';
import type { MapVariable } from './map-variables.ts';

export interface ClassChoice {
  readonly method: ClassMethod;
  readonly count: number;
  /** own limits between classes in the map's unit, rising; read when the method is `own` */
  readonly own: readonly number[];
  /** limits from all weeks of the season, so that a colour means the same in each */
  readonly hold: boolean;
}

export interface LegendRow {
  /** class index, NOUGHT or NO_VALUE */
  readonly index: number;
  readonly text: string;
  readonly colour: string;
  /** index into PRINT_PATTERNS, −1 for none */
  readonly pattern: number;
  /** m² */
  readonly area: number;
  readonly count: number;
}

/** What rounds to nothing on the screen counts as none: 0.05 mm, 0.05 m³, 0.05 % of a share. */
const NOUGHT_BELOW = 0.05;
const NOUGHT_SHARE = 0.0005;

function noughtOf({ quantity }: MapVariable): number {
  return quantity === 'fraction' ? NOUGHT_SHARE : NOUGHT_BELOW;
}

/** Limits are drawn from at most about this many values, taken evenly. */
const SAMPLE = 50_000;

interface LimitsQuestion {
  readonly variable: MapVariable;
  readonly choice: ClassChoice;
  readonly area: readonly number[];
  /** the values shown … */
  readonly values?: Float32Array;
  /** … or every week of the season */
  readonly stored?: WeekValues;
}

/** Class limits, one more than there are classes; empty when nothing is above nought. */
export function limitsOf(question: LimitsQuestion): readonly number[] {
  const { choice } = question;
  const method = choice.method === 'own' && choice.own.length === 0 ? 'quantile' : choice.method;
  return classify({ values: sampleOf(question), method, count: choice.count, own: choice.own }).breaks;
}

function sampleOf({ variable, values, stored, area }: LimitsQuestion): number[] {
  const source = values ?? stored?.values ?? new Float32Array();
  const stride = Math.max(1, Math.floor(source.length / SAMPLE));
  const volume = !values && variable.id === 'gross_volume';
  const kept: number[] = [];
  for (let index = 0; index < source.length; index += stride) {
    const value = volume ? (source[index] * area[index % area.length]) / 1000 : source[index];
    if (Number.isFinite(value) && !(variable.zeroApart && value < noughtOf(variable))) kept.push(value);
  }
  return kept;
}

/** Class of each value: 0 … n−1, NOUGHT or NO_VALUE. */
export function classIndexes(values: Float32Array, breaks: readonly number[], variable: MapVariable): Uint8Array {
  const { zeroApart } = variable;
  const nought = noughtOf(variable);
  const classes = new Uint8Array(values.length);
  for (let index = 0; index < values.length; index++) {
    const value = values[index];
    if (zeroApart && value < nought) classes[index] = NOUGHT;
    else {
      const found = classOf(breaks, value);
      classes[index] = found < 0 ? NO_VALUE : found;
    }
  }
  return classes;
}

interface RowsQuestion {
  readonly classes: Uint8Array;
  readonly breaks: readonly number[];
  readonly area: readonly number[];
  readonly variable: MapVariable;
  readonly units: UnitSystem;
  readonly theme: Theme;
}

const REPORT_QUANTITY = { depth: 'mm', volume: 'm3' } as const;

/** Rows of the legend, high to low, then nought and missing when there are any. */
export function legendRows(question: RowsQuestion): LegendRow[] {
  const { breaks, variable, units, theme } = question;
  const { area, count } = tally(question);
  const classCount = Math.max(0, breaks.length - 1);
  const classes: Classes = {
    method: 'own',
    breaks,
    counts: [...count.slice(0, classCount)],
    areas: [...area.slice(0, classCount)],
    missingCount: count[NO_VALUE],
    missingArea: area[NO_VALUE],
  };
  const quantity = variable.quantity in REPORT_QUANTITY ? REPORT_QUANTITY[variable.quantity as 'depth' | 'volume'] : null;
  const legend = legendOf({ title: variable.name, quantity, classes, units, scale: 'amount', theme });
  const colours = coloursOf(variable.scale, classCount, theme);
  const rows = legend.entries.map((entry, index): LegendRow => ({ ...entry, index, text: entry.label, colour: colours[index] })).reverse();
  const nought = { index: NOUGHT, text: 'none', colour: noughtColour(theme), pattern: -1, area: area[NOUGHT], count: count[NOUGHT] };
  if (nought.count > 0) rows.push(nought);
  if (legend.missing) rows.push({ ...legend.missing, index: NO_VALUE, text: legend.missing.label });
  return rows;
}

function tally({ classes, area }: RowsQuestion): { area: Float64Array; count: Uint32Array } {
  const total = { area: new Float64Array(256), count: new Uint32Array(256) };
  for (let parcel = 0; parcel < classes.length; parcel++) {
    if (area[parcel] <= 0) continue;
    total.area[classes[parcel]] += area[parcel];
    total.count[classes[parcel]]++;
  }
  return total;
}
