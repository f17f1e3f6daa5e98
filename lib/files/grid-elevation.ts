/**
 * Elevation of the cells of a grid: from a field of the same lattice, or sampled from another raster.
 *
 * A raster coarser than the cells is read bilinearly at their centres; a finer one is averaged over each cell.
 */

import type { Field } from './grid-fields.ts';
import { cellPlace, type Lattice, readLattice } from './grid-lattice.ts';
import { degreesTo, wrap } from './grid-projection.ts';
import { textAttribute } from './grid-roles.ts';
import { slabOf, tileSegments } from './grid-slab.ts';
import { type GridUnit, gridUnit } from './grid-units.ts';
import { newTally, packingOf, type Unpacking, unpackingOf, unpackStep } from './grid-unpack.ts';
import { type GridWindow, orientationOf } from './grid-window.ts';

/** Numbers of a raster that are read at once. */
const STRIP_NUMBERS = 8_000_000;
/** A raster is averaged where its cells are smaller than this share of the grid's. */
const FINER = 0.5;

/**
 * Elevation of each cell kept [m], NaN where the raster has none.
 *
 * @param crs system of the raster given by the user
 */
export async function readElevations(field: Field, lattice: Lattice, window: GridWindow, crs: string | undefined): Promise<Float64Array> {
  const raster = await readLattice(
    field.file.arrays,
    field.variable,
    field.dimensions,
    field.file.arrays.format === 'geotiff' ? crs : undefined,
  );
  const unit = gridUnit('elevation_m', textAttribute(field.variable.attributes, 'units')) ?? METRES;
  const unpacking = unpackingOf('elevation_m', packingOf(field.variable), unit, { seconds: 86400, daily: true });
  const orientation = orientationOf(raster, lattice);
  if (orientation)
    return readSameLattice(field, { rows: window.rows, columns: window.columns, lattice, orientation, list: false }, unpacking);
  return sampleRaster(field, raster, unpacking, { lattice, window });
}

const METRES: GridUnit = { name: 'm', factor: 1, offset: 0, per: 'value' };

async function readSameLattice(field: Field, cells: Parameters<typeof tileSegments>[0], unpacking: Unpacking): Promise<Float64Array> {
  const elevations = new Float64Array(cells.rows.length).fill(Number.NaN);
  for (const segment of tileSegments(cells, 0, cells.rows.length)) {
    const slab = slabOf(field.variable, field.dimensions, segment, { start: 0, count: 1 });
    const raw = await field.file.arrays.read(field.variable.name, slab.start, slab.count);
    unpackStep(raw, 0, slab.places, unpacking, elevations, newTally(), 0);
  }
  return elevations;
}

/** Fractional row and column of a place in a raster. */
type IndexOf = (longitude: number, latitude: number) => readonly [number, number];

async function sampleRaster(
  field: Field,
  raster: Lattice,
  unpacking: Unpacking,
  grid: { lattice: Lattice; window: GridWindow },
): Promise<Float64Array> {
  const indexOf = indexer(raster);
  const { rows, columns } = grid.window;
  const elevations = new Float64Array(rows.length).fill(Number.NaN);
  if (!indexOf) return elevations;
  const reach = [0.5 * grid.lattice.cellHeight, 0.5 * grid.lattice.cellWidth];
  const finer = raster.cellHeight < FINER * grid.lattice.cellHeight;
  for (let from = 0; from < rows.length; ) {
    let to = from + 1;
    while (to < rows.length && rows[to] === rows[from]) to++;
    const boxes = [];
    for (let cell = from; cell < to; cell++)
      boxes.push(rasterBox(indexOf, cellPlace(grid.lattice, rows[cell], columns[cell]), finer ? reach : null));
    await sampleRow(field, raster, unpacking, { boxes, from, elevations, finer });
    from = to;
  }
  return elevations;
}

function indexer(raster: Lattice): IndexOf | null {
  const { x, y } = raster;
  if (x === null || y === null) return null;
  const along = (values: readonly number[], value: number) =>
    values.length < 2 ? value - values[0] : ((value - values[0]) * (values.length - 1)) / (values[values.length - 1] - values[0]);
  if (raster.kind === 'rectilinear') {
    const middle = (x[0] + x[x.length - 1]) / 2;
    return (longitude, latitude) => [along(y, latitude), along(x, middle + wrap(longitude - middle))];
  }
  const project = degreesTo(raster.crs);
  return (longitude, latitude) => {
    const [easting, northing] = project(longitude, latitude);
    return [along(y, northing), along(x, easting)];
  };
}

/** Fractional rows and columns that a cell covers, or its centre alone. */
interface RasterBox {
  readonly row: number;
  readonly column: number;
  readonly rowFrom: number;
  readonly rowTo: number;
  readonly columnFrom: number;
  readonly columnTo: number;
}

function rasterBox(indexOf: IndexOf, [longitude, latitude]: readonly [number, number], reach: readonly number[] | null): RasterBox {
  const [row, column] = indexOf(longitude, latitude);
  if (reach === null)
    return {
      row,
      column,
      rowFrom: Math.floor(row),
      rowTo: Math.floor(row) + 1,
      columnFrom: Math.floor(column),
      columnTo: Math.floor(column) + 1,
    };
  const corners = [-1, 1].flatMap((a) => [-1, 1].map((b) => indexOf(longitude + a * reach[1], latitude + b * reach[0])));
  const [cornerRows, cornerColumns] = [corners.map(([r]) => r), corners.map(([, c]) => c)];
  return {
    ...{ row, column, rowFrom: Math.ceil(Math.min(...cornerRows)), rowTo: Math.floor(Math.max(...cornerRows)) },
    ...{ columnFrom: Math.ceil(Math.min(...cornerColumns)), columnTo: Math.floor(Math.max(...cornerColumns)) },
  };
}

interface RowSample {
  readonly boxes: readonly RasterBox[];
  readonly from: number;
  readonly elevations: Float64Array;
  readonly finer: boolean;
}

async function sampleRow(field: Field, raster: Lattice, unpacking: Unpacking, sample: RowSample): Promise<void> {
  const { boxes, from, elevations, finer } = sample;
  const strip = stripOf(boxes, raster);
  if (strip === null) return;
  if (strip.rowCount * strip.columnCount > STRIP_NUMBERS && boxes.length > 1) {
    for (const [i, box] of boxes.entries()) await sampleRow(field, raster, unpacking, { boxes: [box], from: from + i, elevations, finer });
    return;
  }
  const size = strip.rowCount * strip.columnCount;
  const all = Int32Array.from({ length: size }, (_, i) => i);
  const segment = {
    ...strip,
    cells: all,
    rows: all.map((i) => Math.floor(i / strip.columnCount)),
    columns: all.map((i) => i % strip.columnCount),
  };
  const slab = slabOf(field.variable, field.dimensions, segment, { start: 0, count: 1 });
  const heights = new Float64Array(size);
  unpackStep(await field.file.arrays.read(field.variable.name, slab.start, slab.count), 0, slab.places, unpacking, heights, newTally(), 0);
  const at = (row: number, column: number) => {
    const [r, c] = [row - strip.rowStart, column - strip.columnStart];
    return r < 0 || c < 0 || r >= strip.rowCount || c >= strip.columnCount ? Number.NaN : heights[r * strip.columnCount + c];
  };
  for (const [i, box] of boxes.entries()) elevations[from + i] = finer ? meanOf(box, at) : bilinear(box, at);
}

function stripOf(boxes: readonly RasterBox[], raster: Lattice) {
  const rowStart = Math.max(0, Math.min(...boxes.map((box) => box.rowFrom)));
  const rowEnd = Math.min(raster.rows - 1, Math.max(...boxes.map((box) => box.rowTo)));
  const columnStart = Math.max(0, Math.min(...boxes.map((box) => box.columnFrom)));
  const columnEnd = Math.min(raster.columns - 1, Math.max(...boxes.map((box) => box.columnTo)));
  if (!(rowEnd >= rowStart) || !(columnEnd >= columnStart)) return null;
  return { rowStart, rowCount: rowEnd - rowStart + 1, columnStart, columnCount: columnEnd - columnStart + 1 };
}

type HeightAt = (row: number, column: number) => number;

function meanOf(box: RasterBox, at: HeightAt): number {
  let [sum, count] = [0, 0];
  for (let row = box.rowFrom; row <= box.rowTo; row++) {
    for (let column = box.columnFrom; column <= box.columnTo; column++) {
      const height = at(row, column);
      if (Number.isNaN(height)) continue;
      sum += height;
      count++;
    }
  }
  return sum / count;
}

function bilinear({ row, column, rowFrom, columnFrom }: RasterBox, at: HeightAt): number {
  const [r, c] = [row - rowFrom, column - columnFrom];
  const corners = [
    [at(rowFrom, columnFrom), (1 - r) * (1 - c)],
    [at(rowFrom, columnFrom + 1), (1 - r) * c],
    [at(rowFrom + 1, columnFrom), r * (1 - c)],
    [at(rowFrom + 1, columnFrom + 1), r * c],
  ].filter(([height, weight]) => !Number.isNaN(height) && weight > 0);
  const weights = corners.reduce((sum, [, weight]) => sum + weight, 0);
  return weights < 0.25 ? Number.NaN : corners.reduce((sum, [height, weight]) => sum + height * weight, 0) / weights;
}
