/**
 * Where the cells of a grid are: the lattice of their centres.
 */
import { Refused } from '../base/errors.ts';
import type { GridShape } from '../weather/variable.ts';
import type { ArrayFile, ArrayVariable } from './array-file.ts';
import { axisVariable, type FieldDimensions, isPlace } from './grid-axes.ts';
import { gridMappingDefinition, gridSystem, wrap } from './grid-projection.ts';
import { textAttribute } from './grid-roles.ts';

/** Cells of a grid that gives places in two dimensions: more are not read. */
const CURVILINEAR_CELL_LIMIT = 20_000_000;

/** Centres of the cells of a whole grid. */
export interface Lattice extends GridShape {
  /** degrees; one a column for rectilinear grids, one a cell [row × column] for others; longitudes −180 … 180 */
  readonly longitudes: Float64Array;
  /** degrees; one a row for rectilinear grids, one a cell for others */
  readonly latitudes: Float64Array;
  /** size of a cell [degrees] */
  readonly cellWidth: number;
  readonly cellHeight: number;
}

/** Reads the lattice of a field. @param crs system given by the user, before what the file says @throws {Refused} when places are missing */
export async function readLattice(
  file: ArrayFile,
  variable: ArrayVariable,
  dimensions: FieldDimensions,
  crs: string | undefined,
): Promise<Lattice> {
  const [rowName, columnName] = [variable.dimensions[dimensions.row], variable.dimensions[dimensions.column]];
  const [y, x] = [axisVariable(file, rowName), axisVariable(file, columnName)];
  const isGeographic = y !== null && x !== null && isPlace(y, 'latitude') && isPlace(x, 'longitude');
  if (isGeographic && crs === undefined) return rectilinear(file, y, x);
  const twoDimensional = placesInTwoDimensions(file, variable, rowName, columnName);
  if (twoDimensional && crs === undefined) return curvilinear(file, twoDimensional, { y, x, mapping: mappingOf(file, variable) });
  if (y === null || x === null) throw noPlaces(variable);
  return projected(file, variable, { y, x }, crs);
}

function noPlaces(variable: ArrayVariable): Refused {
  return new Refused(
    `Nothing says where the cells of "${variable.name}" are: latitude and longitude, or x and y with a coordinate system, are missing.`,
  );
}

async function rectilinear(file: ArrayFile, y: ArrayVariable, x: ArrayVariable): Promise<Lattice> {
  const [latitudes, longitudes] = [await axisValues(file, y), await axisValues(file, x)];
  return {
    ...{ rows: latitudes.length, columns: longitudes.length, kind: 'rectilinear', crs: 'EPSG:4326' },
    ...{ x: Array.from(longitudes), y: Array.from(latitudes), latitudes, longitudes: longitudes.map(wrap) },
    cellWidth: (await boundsSize(file, x)) ?? spacing(longitudes),
    cellHeight: (await boundsSize(file, y)) ?? spacing(latitudes),
  };
}

async function axisValues(file: ArrayFile, variable: ArrayVariable): Promise<Float64Array> {
  const raw = await file.read(variable.name, [0], [variable.shape[0]]);
  const scale = scaleOf(variable);
  const values = raw.map((value) => decimal(value * scale.factor + scale.offset, variable));
  const bad = values.findIndex((value) => !Number.isFinite(value));
  if (bad >= 0) throw new Refused(`Value ${bad + 1} of the axis "${variable.name}" is missing.`);
  return values;
}

/** A number of single precision as its writer typed it: −63.4, not −63.40000152587890625. */
export function decimal(value: number, { type }: ArrayVariable): number {
  return type === 'float32' ? Number(value.toPrecision(7)) : value;
}

function scaleOf(variable: ArrayVariable): { factor: number; offset: number } {
  const number = (name: string, otherwise: number) => {
    const value = variable.attributes[name];
    return Array.isArray(value) && typeof value[0] === 'number' ? value[0] : otherwise;
  };
  return { factor: number('scale_factor', 1), offset: number('add_offset', 0) };
}

/** Middle size of the cells along an axis from its bounds, or null without bounds. */
async function boundsSize(file: ArrayFile, axis: ArrayVariable): Promise<number | null> {
  const name = textAttribute(axis.attributes, 'bounds');
  const bounds = name === '' ? undefined : file.variables.find((candidate) => candidate.name === name);
  if (bounds?.shape.length !== 2 || bounds.shape[1] !== 2) return null;
  const values = await file.read(bounds.name, [0, 0], bounds.shape);
  const sizes = Array.from({ length: bounds.shape[0] }, (_, i) => Math.abs(values[2 * i + 1] - values[2 * i])).sort((a, b) => a - b);
  const middle = sizes[sizes.length >> 1];
  return middle > 0 ? middle : null;
}

function spacing(values: ArrayLike<number>): number {
  if (values.length < 2) return 0;
  const steps = Array.from({ length: values.length - 1 }, (_, i) => Math.abs(values[i + 1] - values[i])).sort((a, b) => a - b);
  return steps[steps.length >> 1];
}

function placesInTwoDimensions(file: ArrayFile, variable: ArrayVariable, row: string, column: string) {
  const over = file.variables.filter(
    (candidate) =>
      candidate.dimensions.length === 2 &&
      candidate.dimensions.includes(row) &&
      candidate.dimensions.includes(column) &&
      candidate !== variable,
  );
  const latitude = over.find((candidate) => isPlace(candidate, 'latitude'));
  const longitude = over.find((candidate) => isPlace(candidate, 'longitude'));
  return latitude && longitude ? { latitude, longitude, row } : null;
}

interface Axes {
  readonly y: ArrayVariable | null;
  readonly x: ArrayVariable | null;
  readonly mapping: ArrayVariable | null;
}

async function curvilinear(
  file: ArrayFile,
  places: { latitude: ArrayVariable; longitude: ArrayVariable; row: string },
  axes: Axes,
): Promise<Lattice> {
  const byRow = places.latitude.dimensions[0] === places.row;
  const [rows, columns] = byRow ? places.latitude.shape : [places.latitude.shape[1], places.latitude.shape[0]];
  if (rows * columns > CURVILINEAR_CELL_LIMIT)
    throw new Refused(
      `The grid gives the places of ${rows} × ${columns} cells one by one; at most ${CURVILINEAR_CELL_LIMIT} are read. Cut the file to the district first.`,
    );
  const [rawLatitudes, rawLongitudes] = [await readPlaces(file, places.latitude), await readPlaces(file, places.longitude)];
  const latitudes = byRow ? rawLatitudes : transposed(rawLatitudes, columns, rows);
  const longitudes = (byRow ? rawLongitudes : transposed(rawLongitudes, columns, rows)).map(wrap);
  const definition = axes.mapping && gridMappingDefinition(axes.mapping);
  const axisPair = definition && axes.y && axes.x ? { y: await axisValues(file, axes.y), x: await axisValues(file, axes.x) } : null;
  const agrees = definition && axisPair ? placesAgree(definition, axisPair, latitudes, longitudes) : false;
  return {
    ...{ rows, columns, kind: agrees ? 'projected' : 'curvilinear', crs: agrees && definition ? definition : 'EPSG:4326' },
    x: agrees && axisPair ? Array.from(axisPair.x) : null,
    y: agrees && axisPair ? Array.from(axisPair.y) : null,
    ...{ latitudes, longitudes, ...((await verticesSize(file, places)) ?? cellSizes(latitudes, longitudes, rows, columns)) },
  };
}

async function readPlaces(file: ArrayFile, variable: ArrayVariable): Promise<Float64Array> {
  const raw = await file.read(variable.name, [0, 0], variable.shape);
  const { factor, offset } = scaleOf(variable);
  return raw.map((value) => (Math.abs(value) > 1e10 ? Number.NaN : decimal(value * factor + offset, variable)));
}

function transposed(values: Float64Array, rows: number, columns: number): Float64Array {
  const turned = new Float64Array(values.length);
  for (let r = 0; r < rows; r++) for (let c = 0; c < columns; c++) turned[c * rows + r] = values[r * columns + c];
  return turned;
}

/** True when the grid mapping puts the corners of the grid where its latitudes and longitudes say. */
function placesAgree(
  definition: string,
  axes: { x: Float64Array; y: Float64Array },
  latitudes: Float64Array,
  longitudes: Float64Array,
): boolean {
  const system = gridSystem(definition);
  const columns = axes.x.length;
  const allowed = 0.02 * Math.max(spacing(axes.y), 1e-3) * (definition.includes('ob_tran') || definition.includes('longlat') ? 1 : 1e-5);
  return (
    system !== null &&
    [0, columns - 1].every((c) =>
      [0, axes.y.length - 1].every((r) => {
        const [longitude, latitude] = system.toDegrees(axes.x[c], axes.y[r]);
        const turn = Math.abs(wrap(longitude - longitudes[r * columns + c])) * Math.cos((latitude * Math.PI) / 180);
        return Math.abs(latitude - latitudes[r * columns + c]) <= allowed && turn <= allowed;
      }),
    )
  );
}

/** Size of a cell from the corners that the file gives, or null. */
async function verticesSize(file: ArrayFile, { latitude, longitude }: { latitude: ArrayVariable; longitude: ArrayVariable }) {
  const size = async (variable: ArrayVariable) => {
    const name = textAttribute(variable.attributes, 'bounds');
    const corners = name === '' ? undefined : file.variables.find((candidate) => candidate.name === name);
    if (corners?.shape.length !== 3) return Number.NaN;
    const first = await file.read(corners.name, [0, 0, 0], [1, 1, corners.shape[2]]);
    return Math.max(...first) - Math.min(...first);
  };
  const [cellHeight, cellWidth] = [await size(latitude), await size(longitude)];
  return cellHeight > 0 && cellWidth > 0 && cellWidth < 180 ? { cellHeight, cellWidth } : null;
}

/** Largest steps between neighbours in the middle of the grid, in latitude and longitude. */
function cellSizes(latitudes: Float64Array, longitudes: Float64Array, rows: number, columns: number) {
  const here = (rows >> 1) * columns + (columns >> 1);
  const neighbours = [
    rows > 1 ? here + (rows >> 1 < rows - 1 ? columns : -columns) : here,
    columns > 1 ? here + (columns >> 1 < columns - 1 ? 1 : -1) : here,
  ];
  return {
    cellHeight: Math.max(...neighbours.map((there) => Math.abs(latitudes[there] - latitudes[here]))),
    cellWidth: Math.max(...neighbours.map((there) => Math.abs(wrap(longitudes[there] - longitudes[here])))),
  };
}

function mappingOf(file: ArrayFile, variable: ArrayVariable): ArrayVariable | null {
  const name = textAttribute(variable.attributes, 'grid_mapping').split(/[:\s]/)[0];
  return (name && file.variables.find((candidate) => candidate.name === name || candidate.name.endsWith(`/${name}`))) || null;
}

async function projected(
  file: ArrayFile,
  variable: ArrayVariable,
  { y, x }: { y: ArrayVariable; x: ArrayVariable },
  given: string | undefined,
): Promise<Lattice> {
  const mapping = mappingOf(file, variable);
  const definition =
    given ??
    (textAttribute(variable.attributes, 'crs') || textAttribute(file.attributes, 'crs') || (mapping && gridMappingDefinition(mapping)));
  if (!definition)
    throw new Refused(
      `The cells of "${variable.name}" have x and y, and the file names no coordinate system. Name it in the options, for example EPSG:32633.`,
    );
  const system = gridSystem(definition);
  if (!system)
    throw new Refused(
      `The coordinate system "${definition.slice(0, 80)}" of "${variable.name}" is not known. Name it in the options by its EPSG code.`,
    );
  const { toDegrees } = system;
  const factor = /^(km|kilomet(re|er)s?)$/i.test(textAttribute(x.attributes, 'units')) ? 1000 : 1;
  const [ys, xs] = [(await axisValues(file, y)).map((value) => value * factor), (await axisValues(file, x)).map((value) => value * factor)];
  const [rows, columns] = [ys.length, xs.length];
  if (isLongLat(toDegrees)) {
    return {
      ...{
        rows,
        columns,
        kind: 'rectilinear',
        crs: 'EPSG:4326',
        x: Array.from(xs),
        y: Array.from(ys),
        latitudes: ys,
        longitudes: xs.map(wrap),
      },
      cellWidth: spacing(xs),
      cellHeight: spacing(ys),
    };
  }
  if (rows * columns > CURVILINEAR_CELL_LIMIT)
    throw new Refused(
      `The grid has ${rows} × ${columns} cells in a projected system; at most ${CURVILINEAR_CELL_LIMIT} are read. Cut the file to the district first.`,
    );
  const latitudes = new Float64Array(rows * columns);
  const longitudes = new Float64Array(rows * columns);
  for (let r = 0, cell = 0; r < rows; r++)
    for (let c = 0; c < columns; c++, cell++) [longitudes[cell], latitudes[cell]] = toDegrees(xs[c], ys[r]);
  return {
    ...{ rows, columns, kind: 'projected', crs: system.definition, x: Array.from(xs), y: Array.from(ys), latitudes, longitudes },
    ...cellSizes(latitudes, longitudes, rows, columns),
  };
}

/** True when a system's x and y are WGS 84 degrees already. */
function isLongLat(toDegrees: (x: number, y: number) => readonly [number, number]): boolean {
  const [longitude, latitude] = toDegrees(11, 47);
  return Math.abs(longitude - 11) < 1e-4 && Math.abs(latitude - 47) < 1e-4;
}

/** Longitude and latitude of a cell [degrees]. */
export function cellPlace(lattice: Lattice, row: number, column: number): readonly [number, number] {
  if (lattice.kind === 'rectilinear') return [lattice.longitudes[column], lattice.latitudes[row]];
  const cell = row * lattice.columns + column;
  return [lattice.longitudes[cell], lattice.latitudes[cell]];
}
