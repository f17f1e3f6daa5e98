/**
 * Hyperslabs of a field: which part of each dimension is read, and where each cell lies in what comes back.
 */
import type { ArrayVariable } from './array-file.ts';
import type { FieldDimensions } from './grid-axes.ts';
import type { Places } from './grid-unpack.ts';
import { type GridWindow, type Orientation, type Segment, segmentsOf } from './grid-window.ts';

/** Where the cells of an import lie in one file. */
export interface CellsOfFile {
  /** row (or place in the list of stations) and column of each cell, in the lattice of the import */
  readonly rows: Int32Array;
  readonly columns: Int32Array;
  readonly lattice: { readonly rows: number; readonly columns: number };
  readonly orientation: Orientation;
  /** the cells are a list: runs of neighbours are read apart */
  readonly list: boolean;
}

/** A hyperslab and the places of its cells. */
export interface Slab {
  readonly start: number[];
  readonly count: number[];
  /** distance of one step from the next in the numbers read */
  readonly timeStride: number;
  readonly places: Places;
}

/** Steps in a stored block of a variable; 1 where it is stored step by step. */
export function chunkSteps(variable: ArrayVariable, timeDimension: number): number {
  return timeDimension < 0 ? 1 : (variable.chunk?.[timeDimension] ?? 1);
}

/** The segments of a run of cells, their cells counted from its first. */
export function tileSegments(cells: CellsOfFile, first: number, count: number): readonly Segment[] {
  const rows = cells.rows.subarray(first, first + count);
  const columns = cells.columns.subarray(first, first + count);
  if (cells.list) return listSegments(rows);
  const window: GridWindow = { rows, columns, box: [0, 0, 0, 0] };
  return segmentsOf(window, cells.lattice, cells.orientation);
}

/** Segments of a list of stations: one for each run of neighbours in the file. */
function listSegments(rows: Int32Array): Segment[] {
  const order = Array.from(rows.keys()).sort((a, b) => rows[a] - rows[b]);
  const runs: number[][] = [];
  for (const cell of order) {
    const last = runs.at(-1);
    if (last && rows[cell] - rows[last[last.length - 1]] <= 1) last.push(cell);
    else runs.push([cell]);
  }
  return runs.map((members) => {
    const rowStart = rows[members[0]];
    const rowCount = rows[members[members.length - 1]] - rowStart + 1;
    return {
      ...{ rowStart, rowCount, columnStart: 0, columnCount: 1 },
      cells: Int32Array.from(members),
      rows: Int32Array.from(members, (cell) => rows[cell] - rowStart),
      columns: new Int32Array(members.length),
    };
  });
}

/** The hyperslab of a segment over some steps. Dimensions that are neither time nor place are one long. */
export function slabOf(
  variable: ArrayVariable,
  dimensions: FieldDimensions,
  segment: Segment,
  steps: { readonly start: number; readonly count: number },
): Slab {
  const rowDimension = dimensions.row >= 0 ? dimensions.row : dimensions.site;
  const start = variable.shape.map(() => 0);
  const count = variable.shape.map(() => 1);
  if (dimensions.time >= 0) [start[dimensions.time], count[dimensions.time]] = [steps.start, steps.count];
  if (rowDimension >= 0) [start[rowDimension], count[rowDimension]] = [segment.rowStart, segment.rowCount];
  if (dimensions.column >= 0) [start[dimensions.column], count[dimensions.column]] = [segment.columnStart, segment.columnCount];
  const strides = count.map((_, i) => count.slice(i + 1).reduce((product, length) => product * length, 1));
  const stride = (dimension: number) => (dimension >= 0 ? strides[dimension] : 0);
  const [rowStride, columnStride] = [stride(rowDimension), stride(dimensions.column)];
  return {
    ...{ start, count, timeStride: stride(dimensions.time) },
    places: { offsets: segment.rows.map((row, i) => row * rowStride + segment.columns[i] * columnStride), cells: segment.cells },
  };
}

/** Numbers of one step that the segments of all cells hold. */
export function stepArea(cells: CellsOfFile): number {
  return tileSegments(cells, 0, cells.rows.length).reduce((sum, { rowCount, columnCount }) => sum + rowCount * columnCount, 0);
}
