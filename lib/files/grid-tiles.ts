/** How a series is cut for reading: into slabs of steps, and where stored blocks are long in time into parts of the cells. */
import type { ArrayVariable } from './array-file.ts';
import type { Field } from './grid-fields.ts';
import type { Series, SeriesInput } from './grid-series.ts';
import { type CellsOfFile, chunkSteps, slabOf, tileSegments } from './grid-slab.ts';
import type { Steps } from './grid-steps.ts';
import type { Unpacking } from './grid-unpack.ts';

/** Numbers of a slab. */
const SLAB_NUMBERS = 2_000_000;
/** Numbers of the largest slab beside which the next is read. */
export const AHEAD_NUMBERS = 4_000_000;
/** Numbers of a slab that is one stored block long. */
const BLOCK_SLAB_NUMBERS = 12_000_000;
/** Values that are held where cells are read part by part. */
const HELD_VALUES = 40_000_000;

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

/** Consecutive steps of one file that are read together. */
export interface StepSlab {
  readonly piece: number;
  readonly start: number;
  readonly count: number;
}

/** The slabs of a series in the order of time, in step with the stored blocks. */
export function slabsOf({ steps }: Series, slabSteps: number): StepSlab[] {
  const slabs: StepSlab[] = [];
  for (const { piece, first, count } of steps.runs) {
    for (let at = first; at < first + count; ) {
      const until = Math.min((Math.floor(at / slabSteps) + 1) * slabSteps, first + count);
      slabs.push({ piece, start: at, count: until - at });
      at = until;
    }
  }
  return slabs;
}

/** Cells that are read together, or of which nothing is stored. */
export interface TileRange {
  readonly first: number;
  readonly count: number;
  readonly isStored: boolean;
}

/** The parts that cells are read in. Stations of which a file stores nothing make parts of their own, which are not read. */
export async function tilesOf(
  { inputs, steps }: Series,
  cellsOf: (field: Field) => CellsOfFile,
  cellCount: number,
  tileCells: number,
): Promise<TileRange[]> {
  const isStored = new Uint8Array(cellCount).fill(1);
  const isList = steps.runs.every(({ piece }) => cellsOf(inputs[0].fields[piece]).list);
  if (isList && tileCells < cellCount) {
    for (let cell = 0; cell < cellCount; cell++) isStored[cell] = (await isCellStored(inputs[0], steps, cellsOf, cell)) ? 1 : 0;
  }
  const tiles: TileRange[] = [];
  for (let first = 0; first < cellCount; ) {
    let count = 1;
    while (count < tileCells && first + count < cellCount && isStored[first + count] === isStored[first]) count++;
    tiles.push({ first, count, isStored: isStored[first] === 1 });
    first += count;
  }
  return tiles;
}

/** False when the files say that nothing of a cell is stored, and what stands for it means missing. */
async function isCellStored(
  { fields, unpackings }: SeriesInput,
  { runs }: Steps,
  cellsOf: (field: Field) => CellsOfFile,
  cell: number,
): Promise<boolean> {
  for (const { piece, first, count } of runs) {
    const { file, variable, dimensions } = fields[piece];
    for (const segment of tileSegments(cellsOf(fields[piece]), cell, 1)) {
      const slab = slabOf(variable, dimensions, segment, { start: first, count });
      const filled = (await file.arrays.filledWith?.(variable.name, slab.start, slab.count)) ?? null;
      if (filled === null || !isMissingCode(filled, unpackings[piece])) return true;
    }
  }
  return false;
}

function isMissingCode(stored: number, { packing }: Unpacking): boolean {
  return Number.isNaN(stored) || packing.fills.includes(stored);
}
