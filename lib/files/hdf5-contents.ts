/**
 * What an HDF5 file holds, in the terms of NetCDF-4: variables with named dimensions and attributes. Runs in the HDF5 thread.
 *
 * Source: NetCDF-4 file format, appendix C of the NetCDF User Guide (dimension scales, _Netcdf4Dimid, _Netcdf4Coordinates, hidden attributes);
 * HDF5 dimension scale specification.
 */
import type { AttributeValue } from './array-file.ts';
import { CHUNK_LIMIT, DIMENSION_LIMIT, sizeOf, VARIABLE_LIMIT } from './array-slab.ts';
import type { Hdf5Contents, Hdf5Layout, Hdf5Variable } from './hdf5-messages.ts';
import { type Hdf5Library, type Hdf5Type, readAttribute, typeOf } from './hdf5-values.ts';

/** Deepest nesting of groups. */
const GROUP_DEPTH = 16;
/** Most attributes of one object that are read. */
const ATTRIBUTE_COUNT = 1000;
/** Filters that the library undoes: deflate, shuffle, checksum, szip, n-bit, scale-offset. */
const KNOWN_FILTERS = [1, 2, 3, 4, 5, 6];
const FILTER_NAMES: Readonly<Record<number, string>> = {
  4: 'szip',
  307: 'bzip2',
  32000: 'LZF',
  32001: 'Blosc',
  32004: 'LZ4',
  32008: 'bitshuffle',
  32013: 'ZFP',
  32015: 'Zstandard',
  32026: 'Blosc2',
};
/** Attributes by which the format keeps house. */
const HIDDEN = [
  'DIMENSION_LIST',
  'REFERENCE_LIST',
  'CLASS',
  'NAME',
  '_Netcdf4Dimid',
  '_Netcdf4Coordinates',
  '_nc3_strict',
  '_NCProperties',
];
const NOT_COORDINATE = '_nc4_non_coord_';
const DIMENSION_ONLY = 'This is a netCDF dimension but not a netCDF variable';

interface Found {
  readonly path: string;
  readonly stored: Hdf5Type;
  readonly attributes: Readonly<Record<string, AttributeValue>>;
}

/** Describes every dataset of an open file. @throws when it has more groups, variables or dimensions than are read */
export function describeFile(library: Hdf5Library, file: bigint): Omit<Hdf5Contents, 'handle'> {
  const found: Found[] = [];
  const leftOut: string[] = [];
  walk(library, file, '/', new Set(), found, leftOut);
  const dimensionOfId = new Map<number, string>();
  for (const { path, attributes } of found) {
    const id = attributes._Netcdf4Dimid;
    if (attributes.CLASS === 'DIMENSION_SCALE' && Array.isArray(id)) dimensionOfId.set(Number(id[0]), nameOf(path));
  }
  const variables = found
    .filter(({ attributes }) => !String(attributes.NAME ?? '').startsWith(DIMENSION_ONLY))
    .map((dataset) => describeVariable(library, file, dataset, dimensionOfId));
  return { variables: withGrownDimensions(variables, found), attributes: shownAttributes(attributesOf(library, file, '/')), leftOut };
}

function walk(library: Hdf5Library, file: bigint, group: string, seen: Set<string>, found: Found[], leftOut: string[]): void {
  const address = String(addressOf(library, file, group));
  if (seen.has(address)) return;
  seen.add(address);
  if (group.split('/').length > GROUP_DEPTH) throw new Error(`its groups are nested deeper than ${GROUP_DEPTH} levels`);
  for (const name of library.get_names(file, group, false)) {
    const path = group === '/' ? `/${name}` : `${group}/${name}`;
    if (library.get_external_link(file, path)?.filename !== undefined || library.get_symbolic_link(file, path) !== null) {
      leftOut.push(nameOf(path));
      continue;
    }
    const kind = library.get_type(file, path);
    if (kind === library.H5G_GROUP) walk(library, file, path, seen, found, leftOut);
    if (kind !== library.H5G_DATASET) continue;
    found.push({ path, stored: library.get_dataset_metadata(file, path), attributes: attributesOf(library, file, path) });
    if (found.length > VARIABLE_LIMIT) throw new Error(`it has more than ${VARIABLE_LIMIT} variables`);
  }
}

function addressOf(library: Hdf5Library, file: bigint, path: string): number {
  const reference = Uint8Array.from((library as unknown as ReferenceMaker).create_object_reference(file, path));
  return reference.length === 8 ? Number(new DataView(reference.buffer).getBigUint64(0, true)) : 0;
}

interface ReferenceMaker {
  create_object_reference(file: bigint, path: string): ArrayLike<number>;
}

interface ScaleReader {
  get_attached_scales(file: bigint, path: string, dimension: number): string[];
}

function attributesOf(library: Hdf5Library, file: bigint, path: string): Record<string, AttributeValue> {
  const attributes: Record<string, AttributeValue> = {};
  for (const name of library.get_attribute_names(file, path).slice(0, ATTRIBUTE_COUNT)) {
    const value = readAttribute(library, file, path, name);
    if (value !== null) attributes[name] = value;
  }
  return attributes;
}

function shownAttributes(attributes: Readonly<Record<string, AttributeValue>>): Record<string, AttributeValue> {
  return Object.fromEntries(Object.entries(attributes).filter(([name]) => !HIDDEN.includes(name)));
}

/** Path without its first slash, as variables and dimensions are called. */
function nameOf(path: string): string {
  return path.slice(1).replace(NOT_COORDINATE, '');
}

function describeVariable(
  library: Hdf5Library,
  file: bigint,
  { path, stored, attributes }: Found,
  dimensionOfId: ReadonlyMap<number, string>,
): Hdf5Variable {
  const shape = stored.shape ?? [];
  const filters = library.get_dataset_filters(file, path).map(({ id }) => id);
  const fault = faultOf(stored, filters);
  const layout: Hdf5Layout = {
    address: addressOf(library, file, path),
    width: stored.size,
    isLittleEndian: stored.littleEndian || stored.size === 1,
    filters,
  };
  return {
    name: nameOf(path),
    path,
    dimensions: dimensionsOf(library, file, { path, stored, attributes }, dimensionOfId),
    shape,
    storedShape: shape,
    type: fault === null ? typeOf(stored) : 'other',
    chunk: stored.chunks,
    attributes: shownAttributes(attributes),
    fault,
    layout,
  };
}

function faultOf(stored: Hdf5Type, filters: readonly number[]): string | null {
  const shape = stored.shape;
  if (shape === null) return 'it holds nothing';
  if (shape.length > DIMENSION_LIMIT) return `it has ${shape.length} dimensions; at most ${DIMENSION_LIMIT} are read`;
  if (stored.virtual_sources !== undefined) return 'its values lie in other files';
  if (typeOf(stored) === 'other') return 'its values are neither plain numbers nor text';
  const unknown = filters.find((filter) => !KNOWN_FILTERS.includes(filter));
  if (unknown !== undefined) return `it is packed by the filter ${FILTER_NAMES[unknown] ?? 'number'} (${unknown}), which is not read`;
  const chunk = stored.chunks;
  return chunk !== null && sizeOf(chunk) * stored.size > CHUNK_LIMIT ? `its chunks are larger than ${CHUNK_LIMIT / 2 ** 20} MB` : null;
}

/** A growing dimension is as long as its longest variable; a shorter one ends in fill values. */
function withGrownDimensions(variables: readonly Hdf5Variable[], found: readonly Found[]): Hdf5Variable[] {
  const lengths = new Map<string, number>();
  for (const { path, stored, attributes } of found) {
    const isScale = attributes.CLASS === 'DIMENSION_SCALE';
    if (isScale && stored.shape?.length === 1) lengths.set(nameOf(path), stored.shape[0]);
  }
  for (const { dimensions, storedShape } of variables) {
    for (const [k, dimension] of dimensions.entries()) {
      if (lengths.has(dimension)) lengths.set(dimension, Math.max(lengths.get(dimension) ?? 0, storedShape[k]));
    }
  }
  const growing = new Map(
    found.map(({ path, stored }) => [path, (stored.shape ?? []).map((length, k) => (stored.maxshape?.[k] ?? length) > length)]),
  );
  return variables.map((variable) => {
    const { storedShape, dimensions, path } = variable;
    const shape = storedShape.map((length, k) => (growing.get(path)?.[k] ? (lengths.get(dimensions[k]) ?? length) : length));
    return { ...variable, shape };
  });
}

function dimensionsOf(
  library: Hdf5Library,
  file: bigint,
  { path, stored, attributes }: Found,
  dimensionOfId: ReadonlyMap<number, string>,
): string[] {
  const rank = stored.shape?.length ?? 0;
  const ids = attributes._Netcdf4Coordinates;
  const isScale = attributes.CLASS === 'DIMENSION_SCALE';
  return Array.from({ length: rank }, (_, k) => {
    const byId = Array.isArray(ids) ? dimensionOfId.get(Number(ids[k])) : undefined;
    if (byId !== undefined) return byId;
    if (isScale && rank === 1) return nameOf(path);
    const scale = isScale ? undefined : (library as unknown as ScaleReader).get_attached_scales(file, path, k)[0];
    return scale === undefined ? `dimension_${k}` : nameOf(scale);
  });
}
