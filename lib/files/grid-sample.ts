/**
 * A look at some values of a field before it is read: what its unit can be, and whether its amounts grow through a forecast.
 */
import type { Field } from './grid-fields.ts';
import { type CellsOfFile, slabOf, tileSegments } from './grid-slab.ts';
import { isKnownCode, packingOf } from './grid-unpack.ts';
import { type Spread, spreadOf } from './unit-guess.ts';

/** Numbers of a sample. */
const SAMPLE_NUMBERS = 400_000;
/** Consecutive steps of a sample; shorter steps see a day's course. */
const SAMPLE_STEPS = 48;
/** Values shown. */
const SAMPLE_TEXTS = 5;
/** Steps looked at for amounts that grow. */
const GROWTH_STEPS = 240;

/** Unpacked values of a field. */
export interface FieldSample {
  readonly spread: Spread;
  /** a few of them */
  readonly texts: readonly string[];
}

/** The values of a field at its start, middle and end, without missing ones. */
export async function sampleField(field: Field, cells: CellsOfFile): Promise<FieldSample> {
  const packing = packingOf(field.variable);
  const steps = stepsOf(field);
  const values: number[] = [];
  for (const first of new Set([0, Math.max(0, (steps >> 1) - (SAMPLE_STEPS >> 1)), Math.max(0, steps - 1)])) {
    for (const stored of await readSome(field, cells, first, first === 0 || first === steps - 1 ? 1 : SAMPLE_STEPS)) {
      const value = stored * packing.scale + packing.offset;
      if (Number.isNaN(value) || packing.fills.includes(stored) || stored < packing.validLow || stored > packing.validHigh) continue;
      if (!isKnownCode(stored) && !isKnownCode(value) && Math.abs(value) < 1e10) values.push(value);
    }
  }
  // sorted as doubles first: a sample is large, and sorting it by a function of its own takes long
  const sorted = Array.from(Float64Array.from(values).sort());
  return { spread: spreadOf(sorted), texts: values.slice(0, SAMPLE_TEXTS).map((value) => String(Number(value.toPrecision(6)))) };
}

function stepsOf({ variable, dimensions }: Field): number {
  return dimensions.time < 0 ? 1 : variable.shape[dimensions.time];
}

/** Some numbers of a field: the first segment of its cells, thinned to few rows where it is large. */
async function readSome(field: Field, cells: CellsOfFile, first: number, count: number): Promise<Float64Array> {
  const steps = Math.min(count, stepsOf(field) - first);
  const [segment] = tileSegments(cells, 0, cells.rows.length);
  const most = Math.max(1, Math.floor(SAMPLE_NUMBERS / (steps * Math.max(1, segment.columnCount))));
  const rowCount = Math.min(segment.rowCount, most);
  const rowStart = segment.rowStart + ((segment.rowCount - rowCount) >> 1);
  const slab = slabOf(
    field.variable,
    field.dimensions,
    { ...segment, rowStart, rowCount, rows: new Int32Array(0), columns: new Int32Array(0), cells: new Int32Array(0) },
    { start: first, count: steps },
  );
  return field.file.arrays.read(field.variable.name, slab.start, slab.count);
}

/** How an amount grows through a forecast. */
export interface Growth {
  /** steps after which it begins again: the longest that fits, since a dry forecast shows no fall */
  readonly period: number;
  /** number of a first step of a forecast */
  readonly start: number;
}

/**
 * How an amount grows from step to step through a forecast; null for amounts of single steps.
 *
 * An amount of single steps falls at many steps of the day; one that grows falls only where a forecast begins, always at the same distance.
 *
 * @param values of one cell, step by step @param stepSeconds length of a step
 * @example growthOf([0, 1, 3, 6, 0, 2, 4, 5, 0, 1, 1, 3, 0, 1, 2, 3], 21600) // { period: 4, start: 4 }
 */
export function growthOf(values: ArrayLike<number>, stepSeconds: number): Growth | null {
  const falls: number[] = [];
  let rises = 0;
  for (let i = 1; i < values.length; i++) {
    const change = values[i] - values[i - 1];
    if (Number.isNaN(change)) continue;
    const tolerance = 1e-6 * Math.max(Math.abs(values[i]), Math.abs(values[i - 1]));
    if (change < -tolerance) falls.push(i);
    else if (change > tolerance && values[i - 1] > 0) rises++;
  }
  if (falls.length < 3 || rises < 2 * falls.length) return null;
  for (const hours of [24, 12, 6, 3]) {
    const period = (hours * 3600) / stepSeconds;
    if (!Number.isInteger(period) || period < 3) continue;
    if (falls.every((fall) => (fall - falls[0]) % period === 0)) return { period, start: falls[0] };
  }
  return null;
}

/** Values of cells spread over the window, step by step, for `growthOf`. */
export async function growthSeries(field: Field, cells: CellsOfFile): Promise<Float64Array[]> {
  const packing = packingOf(field.variable);
  const steps = Math.min(GROWTH_STEPS, stepsOf(field));
  const series: Float64Array[] = [];
  for (const place of new Set([0, cells.rows.length >> 1, cells.rows.length - 1])) {
    const [segment] = tileSegments(cells, place, 1);
    const slab = slabOf(field.variable, field.dimensions, segment, { start: 0, count: steps });
    const raw = await field.file.arrays.read(field.variable.name, slab.start, slab.count);
    series.push(raw.map((stored) => (packing.fills.includes(stored) ? Number.NaN : stored * packing.scale + packing.offset)));
  }
  return series;
}
