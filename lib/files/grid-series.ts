/**
 * The reading engine: the steps of one quantity, slab by slab in step with the stored blocks, into monthly values.
 *
 * A slab holds a few million numbers at most. Where the stored blocks are long in time the cells are read part by part instead, so that no
 * block is unpacked twice.
 */

import type { Bins } from './grid-bins.ts';
import type { Field } from './grid-fields.ts';
import { type CellsOfFile, type Slab, slabOf, tileSegments } from './grid-slab.ts';
import type { Steps } from './grid-steps.ts';
import type { ValueStore } from './grid-store.ts';
import { AHEAD_NUMBERS, type ReadingPlan, type StepSlab, slabsOf, tilesOf } from './grid-tiles.ts';
import { type Tally, type Unpacking, unpackStep } from './grid-unpack.ts';
import type { Segment } from './grid-window.ts';

/** One field of a quantity, over all its files. */
export interface SeriesInput {
  readonly fields: readonly Field[];
  readonly unpackings: readonly Unpacking[];
  readonly tally: Tally;
  /** an amount that grows since the start of a forecast: length of a forecast [s], start of one of its first steps [s], limit of a step; null for amounts of single steps */
  readonly growth: { readonly seconds: number; readonly start: number; readonly high: number } | null;
}

/** A quantity to be read. */
export interface Series {
  readonly inputs: readonly SeriesInput[];
  /** makes one value of the inputs' values, in place of the first's; null for a single input */
  readonly combine: ((values: readonly Float64Array[]) => void) | null;
  readonly steps: Steps;
  /** factor from a step's value to a day's, for daily steps: 24 for amounts, which are per hour */
  readonly dayFactor: number;
}

/** Where the values go. */
export interface Sinks {
  /** daily steps */
  readonly daily: ValueStore | null;
  /** shorter steps: makers of bins for the cells [first, first + count) */
  readonly bins: (first: number, count: number) => readonly Bins[];
}

/**
 * Reads a series into its sinks.
 *
 * @param cellsOf where the cells lie in the file of each piece
 * @param progress told the steps done, times the share of the cells
 */
export async function readSeries(
  series: Series,
  cellsOf: (field: Field) => CellsOfFile,
  cellCount: number,
  plan: ReadingPlan,
  sinks: Sinks,
  progress: (share: number) => Promise<void>,
): Promise<void> {
  const total = series.steps.runs.reduce((sum, run) => sum + run.count, 0);
  const slabs = slabsOf(series, plan.slabSteps);
  for (const { first, count, isStored } of await tilesOf(series, cellsOf, cellCount, plan.tileCells)) {
    const tile = new Tile(series, first, count, sinks);
    if (isStored) await readTile(tile, slabs, cellsOf, (done) => progress((first + (count * done) / total) / cellCount));
    else {
      tile.passOver(cellsOf);
      await progress((first + count) / cellCount);
    }
    await tile.finish();
  }
}

/** Reads the slabs of a part in the order of time; while one is worked on the next is read, unless they are large. */
async function readTile(
  tile: Tile,
  slabs: readonly StepSlab[],
  cellsOf: (field: Field) => CellsOfFile,
  progress: (stepsDone: number) => Promise<void>,
): Promise<void> {
  let ahead: Promise<FetchedSlabs> | null = null;
  let done = 0;
  try {
    for (const [k, slab] of slabs.entries()) {
      const fetched: FetchedSlabs = await (ahead ?? tile.fetch(slab, cellsOf));
      const isSmall = fetched.flat().reduce((sum, { raw }) => sum + raw.length, 0) <= AHEAD_NUMBERS;
      ahead = isSmall && k + 1 < slabs.length ? tile.fetch(slabs[k + 1], cellsOf) : null;
      // a failure is met when its turn comes
      ahead?.catch(() => undefined);
      await tile.use(slab, fetched);
      done += slab.count;
      await progress(done);
    }
  } finally {
    await ahead?.catch(() => undefined);
  }
}

interface FetchedSlab {
  readonly slab: Slab;
  readonly raw: Float64Array;
}

/** By input: the parts of a slab. */
type FetchedSlabs = readonly (readonly FetchedSlab[])[];

/** The cells of one part while their steps pass. */
class Tile {
  private readonly values: Float64Array[];
  private readonly accumulated: (Float64Array | null)[];
  private readonly bins: readonly Bins[];
  private lastEnd = Number.NaN;
  private readonly segments = new Map<Field, readonly Segment[]>();

  constructor(
    private readonly series: Series,
    private readonly first: number,
    private readonly count: number,
    private readonly sinks: Sinks,
  ) {
    this.values = series.inputs.map(() => new Float64Array(count));
    this.accumulated = series.inputs.map(({ growth }) => (growth === null ? null : new Float64Array(count).fill(Number.NaN)));
    this.bins = sinks.daily ? [] : sinks.bins(first, count);
  }

  /** The stored numbers of all inputs over some steps. */
  async fetch({ piece, start, count }: StepSlab, cellsOf: (field: Field) => CellsOfFile): Promise<FetchedSlabs> {
    const fetched: FetchedSlab[][] = [];
    for (const { fields } of this.series.inputs) {
      const field = fields[piece];
      const parts: FetchedSlab[] = [];
      for (const segment of this.segmentsOf(field, cellsOf)) {
        const slab = slabOf(field.variable, field.dimensions, segment, { start, count });
        parts.push({ slab, raw: await field.file.arrays.read(field.variable.name, slab.start, slab.count) });
      }
      fetched.push(parts);
    }
    return fetched;
  }

  /** Counts the numbers of cells of which nothing is stored as missing. */
  passOver(cellsOf: (field: Field) => CellsOfFile): void {
    const [{ fields, tally }] = this.series.inputs;
    for (const { piece, count } of this.series.steps.runs) {
      for (const { cells } of this.segmentsOf(fields[piece], cellsOf)) tally.declared += cells.length * count;
    }
  }

  /** Takes fetched numbers into the sinks, step by step. */
  async use({ piece, start, count }: StepSlab, fetched: FetchedSlabs): Promise<void> {
    for (const { tally } of this.series.inputs) {
      tally.base = this.first;
      tally.piece = piece;
    }
    const isEmpty = this.skipMissing(
      fetched[0].map(({ raw }) => raw),
      piece,
    );
    if (isEmpty) return;
    for (let t = 0; t < count; t++) {
      for (let i = 0; i < fetched.length; i++) {
        const input = this.series.inputs[i];
        for (const { slab, raw } of fetched[i])
          unpackStep(raw, t * slab.timeStride, slab.places, input.unpackings[piece], this.values[i], input.tally, start + t);
        this.single(i, piece, start + t);
      }
      this.lastEnd = this.series.steps.to[piece]?.[start + t] ?? Number.NaN;
      this.series.combine?.(this.values);
      const waiting = this.pass(piece, start + t);
      if (waiting) await waiting;
    }
  }

  /** True when a slab holds nothing but the fill value, as stored blocks that are left out do; its numbers are counted as missing. */
  private skipMissing(raws: readonly Float64Array[], piece: number): boolean {
    const [input] = this.series.inputs;
    const { fills } = input.unpackings[piece].packing;
    const fill = fills[0] ?? Number.NaN;
    const isMissing = (stored: number) => stored === fill || Number.isNaN(stored) || fills.includes(stored);
    for (const raw of raws) for (let i = 0; i < raw.length; i++) if (!isMissing(raw[i])) return false;
    for (const raw of raws) input.tally.declared += raw.length;
    this.accumulated[0]?.fill(Number.NaN);
    return true;
  }

  private segmentsOf(field: Field, cellsOf: (field: Field) => CellsOfFile): readonly Segment[] {
    let segments = this.segments.get(field);
    if (!segments) {
      segments = tileSegments(cellsOf(field), this.first, this.count);
      this.segments.set(field, segments);
    }
    return segments;
  }

  /** Turns an amount since the start of a forecast into that of the step; NaN where the step before is missing. A fall is a new start. */
  private single(i: number, piece: number, step: number): void {
    const last = this.accumulated[i];
    const { growth, tally } = this.series.inputs[i];
    if (!last || !growth) return;
    const values = this.values[i];
    const from = this.series.steps.from[piece][step];
    const begins = Math.abs(((from - growth.start) / growth.seconds) % 1) < 1e-6;
    if (!begins && from !== this.lastEnd) last.fill(Number.NaN);
    for (let cell = 0; cell < values.length; cell++) {
      const now = values[cell];
      const more = now - last[cell];
      const grown = begins || more < -1e-6 ? now : more;
      last[cell] = now;
      values[cell] = grown <= growth.high ? Math.max(0, grown) : Number.NaN;
      if (grown > growth.high) tally.outside++;
    }
  }

  /** Hands the values of a step on. Wait for what it returns, if anything, before the next. */
  private pass(piece: number, step: number): Promise<void> | null {
    const { steps } = this.series;
    const { daily } = this.sinks;
    if (daily) return this.passDay(daily, steps.days[piece][step]);
    return this.bin(0, steps.from[piece][step], steps.to[piece][step]);
  }

  /** Adds a step to the bins from the k-th on, one after the other. */
  private bin(k: number, from: number, to: number): Promise<void> | null {
    for (let i = k; i < this.bins.length; i++) {
      const waiting = this.bins[i].add(from, to, this.values[0]);
      if (waiting) return waiting.then(() => this.bin(i + 1, from, to) ?? undefined);
    }
    return null;
  }

  private async passDay(daily: ValueStore, day: number): Promise<void> {
    const values = this.values[0];
    const { dayFactor } = this.series;
    if (dayFactor !== 1) for (let cell = 0; cell < values.length; cell++) values[cell] *= dayFactor;
    await daily.advance(day);
    daily.put(day, 0, values, this.first);
  }

  async finish(): Promise<void> {
    for (const bins of this.bins) await bins.close();
  }
}
