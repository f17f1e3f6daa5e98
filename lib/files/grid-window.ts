/**
 * Which cells of a grid an import keeps, and the hyperslabs that hold them.
 */
import { Refused } from '../base/errors.ts';
import type { GridShape } from '../weather/variable.ts';
import type { FindingList } from './finding-list.ts';
import { cellPlace, type Lattice } from './grid-lattice.ts';
import { wrap } from './grid-projection.ts';
import type { ImportContext, ImportOptions } from './reading.ts';

/** Cells of a grid that is read whole because the district has no place yet. */
export const WHOLE_GRID_LIMIT = 20_000;
/** Cells of a grid that is read whole on request. */
export const WHOLE_GRID_ASKED_LIMIT = 250_000;
/** Cells in step with a lattice to this share of a cell. */
const LATTICE_TOLERANCE = 1e-4;
/** Rounding of a single-precision axis, relative. */
const SINGLE_PRECISION = 1.2e-7;

export type Box = readonly [number, number, number, number];

/** The cells kept, row by row. */
export interface GridWindow {
  readonly rows: Int32Array;
  readonly columns: Int32Array;
  /** [west, south, east, north] of the centres */
  readonly box: Box;
}

/** One hyperslab: cells that lie together in the file. */
export interface Segment {
  readonly rowStart: number;
  readonly rowCount: number;
  readonly columnStart: number;
  readonly columnCount: number;
  /** index among the cells kept, and row and column within the hyperslab */
  readonly cells: Int32Array;
  readonly rows: Int32Array;
  readonly columns: Int32Array;
}

/** How the rows and columns of one file run against the lattice of the import. */
export interface Orientation {
  readonly flipRows: boolean;
  readonly flipColumns: boolean;
}

/**
 * Chooses the cells around the district, or all of a small grid.
 *
 * @throws {Refused} when no cell is near the district, or the whole of a large grid would be read
 */
export function chooseWindow(lattice: Lattice, options: ImportOptions, context: ImportContext, findings: FindingList): GridWindow {
  const box = context.districtBox ?? null;
  const total = lattice.rows * lattice.columns;
  if (box === null || options.wholeGrid) {
    const limit = options.wholeGrid ? WHOLE_GRID_ASKED_LIMIT : WHOLE_GRID_LIMIT;
    if (total <= limit) return windowOf(lattice, () => true);
    throw tooManyCells(lattice, limit, box === null);
  }
  const [west, south, east, north] = box;
  const half = ((east - west + 360) % 360) / 2;
  const centre = west + half;
  const beyond = (size: number) => (options.margin === undefined ? 1.5 * size : Math.max(options.margin, size / 2)) + 1e-9;
  const [marginX, marginY] = [beyond(lattice.cellWidth), beyond(lattice.cellHeight)];
  const keeps = (longitude: number, latitude: number) =>
    latitude >= south - marginY && latitude <= north + marginY && Math.abs(wrap(longitude - centre)) <= half + marginX;
  const window = windowOf(lattice, keeps);
  if (window.rows.length === 0) throw notCovered(lattice, box);
  warnPartCovered(lattice, window, box, findings);
  return window;
}

function tooManyCells({ rows, columns }: Lattice, limit: number, placeless: boolean): Refused {
  const why = placeless ? 'and the district has no parcels yet, so that it is not known which are wanted' : 'too many to be read whole';
  const advice = placeless
    ? 'Import the parcels (or a boundary) of the district first; then only the cells around them are read.'
    : 'Leave out the whole-grid option.';
  const message = `The grid has ${rows} × ${columns} cells, ${why}; at most ${limit} are read.`;
  return new Refused(`${message} ${advice}`, [
    { severity: 'error', code: 'grid-too-large', message, value: String(rows * columns), limit: `${limit} cells`, advice },
  ]);
}

function notCovered(lattice: Lattice, box: Box): Refused {
  const message = `The grid does not cover the district: its cells lie in ${boxText(extentOf(lattice))}, the district in ${boxText(box)}.`;
  const advice = 'Choose a file of the district, or check the coordinate system and the signs of the longitudes.';
  return new Refused(`${message} ${advice}`, [
    { severity: 'error', code: 'grid-not-covering', message, value: boxText(extentOf(lattice)), limit: boxText(box), advice },
  ]);
}

function warnPartCovered(lattice: Lattice, window: GridWindow, [west, south, east, north]: Box, findings: FindingList): void {
  const [cellWest, cellSouth, cellEast, cellNorth] = window.box;
  const [x, y] = [lattice.cellWidth, lattice.cellHeight];
  const sides = [
    ...(wrap(cellWest - west) > x ? ['west'] : []),
    ...(cellSouth - south > y ? ['south'] : []),
    ...(wrap(east - cellEast) > x ? ['east'] : []),
    ...(north - cellNorth > y ? ['north'] : []),
  ];
  if (sides.length === 0) return;
  findings.warn({
    code: 'grid-covers-part',
    message: `The grid ends inside the district on the ${sides.join(' and ')}: its cells lie in ${boxText(window.box)}, the district in ${boxText([west, south, east, north])}.`,
    advice: 'Parcels beyond the grid take the nearest cell; bring a file that covers them.',
  });
}

function windowOf(lattice: Lattice, keeps: (longitude: number, latitude: number) => boolean): GridWindow {
  return lattice.kind === 'rectilinear' ? windowOfAxes(lattice, keeps) : windowOfCells(lattice, keeps);
}

function windowOfAxes(lattice: Lattice, keeps: (longitude: number, latitude: number) => boolean): GridWindow {
  const middle = (values: Float64Array, test: (value: number) => boolean) => Array.from(values.keys()).filter((i) => test(values[i]));
  const rowsAt = (longitude: number) => middle(lattice.latitudes, (latitude) => keeps(longitude, latitude));
  const column = Array.from(lattice.longitudes).find((longitude) => rowsAt(longitude).length > 0);
  const keptRows = column === undefined ? [] : rowsAt(column);
  const keptColumns =
    keptRows.length === 0 ? [] : middle(lattice.longitudes, (longitude) => keeps(longitude, lattice.latitudes[keptRows[0]]));
  const count = keptRows.length * keptColumns.length;
  const [rows, columns] = [new Int32Array(count), new Int32Array(count)];
  let cell = 0;
  for (const row of keptRows) {
    for (const keptColumn of keptColumns) {
      rows[cell] = row;
      columns[cell++] = keptColumn;
    }
  }
  return { rows, columns, box: boxOfCells(lattice, rows, columns) };
}

function windowOfCells(lattice: Lattice, keeps: (longitude: number, latitude: number) => boolean): GridWindow {
  const kept: number[] = [];
  for (let cell = 0; cell < lattice.rows * lattice.columns; cell++)
    if (keeps(lattice.longitudes[cell], lattice.latitudes[cell])) kept.push(cell);
  const rows = Int32Array.from(kept, (cell) => Math.floor(cell / lattice.columns));
  const columns = Int32Array.from(kept, (cell) => cell % lattice.columns);
  return { rows, columns, box: boxOfCells(lattice, rows, columns) };
}

/** Box of the centres of cells; west may be east of east where they cross the date line. */
function boxOfCells(lattice: Lattice, rows: Int32Array, columns: Int32Array): Box {
  if (rows.length === 0) return [Number.NaN, Number.NaN, Number.NaN, Number.NaN];
  const [origin] = cellPlace(lattice, rows[0], columns[0]);
  let [west, south, east, north] = [0, 90, 0, -90];
  for (let i = 0; i < rows.length; i++) {
    const [longitude, latitude] = cellPlace(lattice, rows[i], columns[i]);
    const turn = wrap(longitude - origin);
    west = Math.min(west, turn);
    east = Math.max(east, turn);
    south = Math.min(south, latitude);
    north = Math.max(north, latitude);
  }
  return [wrap(origin + west), south, wrap(origin + east), north];
}

function extentOf(lattice: Lattice): Box {
  let [west, south, east, north] = [180, 90, -180, -90];
  for (const longitude of lattice.longitudes) [west, east] = [Math.min(west, longitude), Math.max(east, longitude)];
  for (const latitude of lattice.latitudes) [south, north] = [Math.min(south, latitude), Math.max(north, latitude)];
  return [west, south, east, north];
}

/** A box in words. @example boxText([-1.5, 40, 2, 42]) // '40 to 42 °N, -1.5 to 2 °E' */
export function boxText([west, south, east, north]: Box): string {
  const short = (value: number) => String(Number(value.toFixed(3)));
  return `${short(south)} to ${short(north)} °N, ${short(west)} to ${short(east)} °E`;
}

/** The hyperslabs of a file that hold the cells kept; two where they lie on both sides of the seam of the longitudes. */
export function segmentsOf(
  window: GridWindow,
  lattice: { readonly rows: number; readonly columns: number },
  { flipRows, flipColumns }: Orientation,
): Segment[] {
  const rows = flipRows ? window.rows.map((row) => lattice.rows - 1 - row) : window.rows;
  const columns = flipColumns ? window.columns.map((column) => lattice.columns - 1 - column) : window.columns;
  const rowStart = rows.reduce((a, b) => Math.min(a, b), lattice.rows);
  const rowCount = rows.reduce((a, b) => Math.max(a, b), -1) - rowStart + 1;
  return columnRuns(columns).map(([from, to]) => {
    const members = Array.from(columns.keys()).filter((i) => columns[i] >= from && columns[i] <= to);
    return {
      ...{ rowStart, rowCount, columnStart: from, columnCount: to - from + 1 },
      cells: Int32Array.from(members),
      rows: Int32Array.from(members, (i) => rows[i] - rowStart),
      columns: Int32Array.from(members, (i) => columns[i] - from),
    };
  });
}

/** Runs of columns; a gap shorter than the columns kept is read along. */
function columnRuns(columns: Int32Array): [number, number][] {
  const present = [...new Set(columns)].sort((a, b) => a - b);
  const runs: [number, number][] = [];
  for (const column of present) {
    const last = runs.at(-1);
    if (last && column - last[1] <= Math.max(1, present.length)) last[1] = column;
    else runs.push([column, column]);
  }
  return runs;
}

/** How a lattice runs against another, or null when they are not the same cells. */
export function orientationOf(lattice: GridShape, reference: GridShape): Orientation | null {
  if (lattice.rows !== reference.rows || lattice.columns !== reference.columns) return null;
  if ((lattice.x === null) !== (reference.x === null)) return null;
  if (lattice.x === null || lattice.y === null || reference.x === null || reference.y === null)
    return { flipRows: false, flipColumns: false };
  const flipRows = axisFlip(lattice.y, reference.y, false);
  const flipColumns = axisFlip(lattice.x, reference.x, lattice.kind === 'rectilinear');
  return flipRows === null || flipColumns === null ? null : { flipRows, flipColumns };
}

function axisFlip(values: readonly number[], reference: readonly number[], turns: boolean): boolean | null {
  const last = values.length - 1;
  const cell = last > 0 ? Math.abs((reference[last] - reference[0]) / last) : 1;
  const same = (i: number, j: number) => {
    const difference = turns ? wrap(values[j] - reference[i]) : values[j] - reference[i];
    return Math.abs(difference) <= LATTICE_TOLERANCE * cell + SINGLE_PRECISION * Math.abs(reference[i]);
  };
  const every = (place: (i: number) => number) => values.every((_, i) => same(i, place(i)));
  if (every((i) => i)) return false;
  return every((i) => last - i) ? true : null;
}
