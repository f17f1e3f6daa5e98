/**
 * The reading engine: the steps of one quantity, slab by slab in step with the stored blocks, into monthly values.
 *
 * A slab holds a few million numbers at most. Where the stored blocks are long in time the cells are read part by part instead, so that no
 * block is unpacked twice.
 */
import type { ArrayVariable } from './array-file.ts';
import type { Bins } from './grid-bins.ts';
import type { Field } from './grid-fields.ts';
import { type CellsOfFile, chunkSteps, slabOf, tileSegments } from './grid-slab.ts';
import type { Steps } from './grid-steps.ts';
import type { ValueStore } from './grid-store.ts';
import { type Tally, type Unpacking, unpackStep } from './grid-unpack.ts';
import type { Segment } from './grid-window.ts';

/** Numbers of a slab. */
export const SLAB_NUMBERS = 4_000_000;
/** Numbers of a slab that is one stored block long. */
const BLOCK_SLAB_NUMBERS = 12_000_000;
/** Values that are held where cells are read part by part. */
const HELD_VALUES = 40_000_000;

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

/** How a series is cut for reading. */
export interface ReadingPlan {
  /** cells of a part; all of them, where days are read in order */
  readonly tileCells: number;
  /** steps of a slab */
  readonly slabSteps: number;
}

/**
 * Chooses slabs for a variable.
 *
 * @param area numbers of one step of the window in the file
 */
export function planReading(
  variable: ArrayVariable,
  timeDimension: number,
  counts: { area: number; cells: number; steps: number; dayCount: number },
): ReadingPlan {
  const { area, cells, steps, dayCount } = counts;
  const chunk = Math.min(Math.max(1, steps), chunkSteps(variable, timeDimension));
  const whole = Math.floor(SLAB_NUMBERS / Math.max(1, area * chunk));
  if (whole >= 1) return { tileCells: cells, slabSteps: whole * chunk };
  if (area * chunk <= BLOCK_SLAB_NUMBERS) return { tileCells: cells, slabSteps: chunk };
  if (cells * dayCount <= HELD_VALUES && cells > 1) {
    const share = SLAB_NUMBERS / (area * Math.min(steps, chunk));
    return { tileCells: Math.max(1, Math.floor(cells * share)), slabSteps: Math.max(chunk, Math.floor(SLAB_NUMBERS / area)) };
  }
  return { tileCells: cells, slabSteps: Math.max(1, Math.floor(SLAB_NUMBERS / area)) };
}

/** True when a plan reads the cells part by part, so that stores must hold their whole record. */
export function isTiled(plan: ReadingPlan, cells: number): boolean {
  return plan.tileCells < cells;
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
  for (let first = 0; first < cellCount; first += plan.tileCells) {
    const count = Math.min(plan.tileCells, cellCount - first);
    const tile = new Tile(series, first, count, sinks);
    let done = 0;
    for (const run of series.steps.runs) {
      for (let at = run.first; at < run.first + run.count; ) {
        const aligned = (Math.floor(at / plan.slabSteps) + 1) * plan.slabSteps;
        const until = Math.min(aligned, run.first + run.count);
        await tile.readSlab(run.piece, at, until - at, cellsOf);
        done += until - at;
        at = until;
        await progress((first + (count * done) / total) / cellCount);
      }
    }
    await tile.finish();
  }
}

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

  async readSlab(piece: number, start: number, count: number, cellsOf: (field: Field) => CellsOfFile): Promise<void> {
    const slabs = [];
    for (const input of this.series.inputs) {
      input.tally.base = this.first;
      input.tally.piece = piece;
      const field = input.fields[piece];
      const segments = this.segmentsOf(field, cellsOf);
      const parts = [];
      for (const segment of segments) {
        const slab = slabOf(field.variable, field.dimensions, segment, { start, count });
        parts.push({ slab, raw: await field.file.arrays.read(field.variable.name, slab.start, slab.count) });
      }
      slabs.push(parts);
    }
    if (
      this.skipMissing(
        slabs[0].map(({ raw }) => raw),
        piece,
      )
    )
      return;
    for (let t = 0; t < count; t++) {
      for (const [i, input] of this.series.inputs.entries()) {
        for (const { slab, raw } of slabs[i])
          unpackStep(raw, t * slab.timeStride, slab.places, input.unpackings[piece], this.values[i], input.tally, start + t);
        this.single(i, piece, start + t);
      }
      this.lastEnd = this.series.steps.to[piece]?.[start + t] ?? Number.NaN;
      this.series.combine?.(this.values);
      await this.pass(piece, start + t);
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

  private async pass(piece: number, step: number): Promise<void> {
    const { steps, dayFactor } = this.series;
    const values = this.values[0];
    const { daily } = this.sinks;
    if (daily) {
      const day = steps.days[piece][step];
      if (dayFactor !== 1) for (let cell = 0; cell < values.length; cell++) values[cell] *= dayFactor;
      await daily.advance(day);
      daily.put(day, 0, values, this.first);
      return;
    }
    for (const bins of this.bins) {
      const waiting = bins.add(steps.from[piece][step], steps.to[piece][step], values);
      if (waiting) await waiting;
    }
  }

  async finish(): Promise<void> {
    for (const bins of this.bins) await bins.close();
  }
}
