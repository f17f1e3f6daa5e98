/**
 * What a Zarr store says of its arrays, versions 2 and 3: type, shape, chunks, attributes, dimension names.
 *
 * Source: Zarr storage specification version 2; Zarr core specification version 3.0 (metadata, data types, chunk key encoding). Names of
 * dimensions in version 2 by the common practice of `_ARRAY_DIMENSIONS`.
 */
import type { ArrayVariable, AttributeValue } from './array-file.ts';
import { attributeOf } from './array-slab.ts';

export type JsonObject = Readonly<Record<string, unknown>>;

/** One array as its metadata describe it; shape and chunks unchecked. */
export interface DescribedArray {
  readonly version: 2 | 3;
  readonly type: ArrayVariable['type'];
  readonly shape: readonly number[];
  /** stored block, the inner one of a sharded array; null when the grid is not regular */
  readonly chunk: readonly number[] | null;
  readonly dimensions: readonly string[];
  readonly attributes: Readonly<Record<string, AttributeValue>>;
  /** value of what is not stored; NaN where the store states none */
  readonly fill: number;
  readonly isSharded: boolean;
  /** key of a chunk, by its place in the grid */
  chunkKey(place: readonly number[]): string;
}

/** JSON as the common writers make it, which put NaN and Infinity bare; they become texts. @throws {SyntaxError} when it is not JSON */
export function parseZarrJson(text: string): JsonObject {
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch {
    value = JSON.parse(text.replace(/("(?:[^"\\]|\\.)*")|(-?Infinity|NaN)/g, (_, quoted?: string, bare?: string) => quoted ?? `"${bare}"`));
  }
  if (typeof value !== 'object' || value === null || Array.isArray(value)) throw new SyntaxError('it is not an object');
  return value as JsonObject;
}

/** Describes an array of version 2 from `.zarray` and `.zattrs`. */
export function describeV2(name: string, array: JsonObject, attributes: JsonObject): DescribedArray {
  const shape = lengthsOf(array.shape, 'shape');
  const chunk = lengthsOf(array.chunks, 'chunks');
  const separator = array.dimension_separator === '/' ? '/' : '.';
  const type = typeOfV2(array.dtype);
  const told = attributesOf(attributes);
  const fill = numberOf(array.fill_value);
  // A stated fill value marks missing values, by common practice; zero does not, for it is what writers put where nobody chose.
  const marks = type !== 'text' && array.fill_value !== null && array.fill_value !== undefined && fill !== 0;
  return {
    version: 2,
    type,
    shape,
    chunk,
    dimensions: dimensionsOf(attributes._ARRAY_DIMENSIONS, name, shape),
    attributes: marks && !('_FillValue' in told) ? { ...told, _FillValue: [fill] } : told,
    fill,
    isSharded: false,
    chunkKey: (place) => place.join(separator) || '0',
  };
}

/** Describes an array of version 3 from `zarr.json`. */
export function describeV3(name: string, node: JsonObject): DescribedArray {
  const shape = lengthsOf(node.shape, 'shape');
  const grid = objectOf(node.chunk_grid);
  const shard = asList(node.codecs)
    .map(objectOf)
    .find((codec) => codec.name === 'sharding_indexed');
  const block = shard ? objectOf(shard.configuration).chunk_shape : objectOf(grid.configuration).chunk_shape;
  const encoding = objectOf(node.chunk_key_encoding);
  const separator = objectOf(encoding.configuration).separator ?? (encoding.name === 'v2' ? '.' : '/');
  const type = typeOfV3(node.data_type);
  return {
    version: 3,
    type,
    shape,
    chunk: grid.name === 'regular' ? lengthsOf(block, 'chunk shape') : null,
    dimensions: dimensionsOf(node.dimension_names, name, shape),
    attributes: decodedFill(attributesOf(objectOf(node.attributes)), type),
    fill: numberOf(node.fill_value),
    isSharded: shard !== undefined,
    chunkKey: (place) => (encoding.name === 'v2' ? place.join(String(separator)) || '0' : ['c', ...place].join(String(separator))),
  };
}

function objectOf(value: unknown): JsonObject {
  return typeof value === 'object' && value !== null && !Array.isArray(value) ? (value as JsonObject) : {};
}

function asList(value: unknown): unknown[] {
  return Array.isArray(value) ? value : [];
}

function lengthsOf(value: unknown, what: string): number[] {
  const lengths = asList(value);
  if (!Array.isArray(value) || !lengths.every((length) => Number.isSafeInteger(length) && (length as number) >= 0)) {
    throw new SyntaxError(`its ${what} is not a list of whole numbers`);
  }
  return lengths as number[];
}

const V2_TYPES: Readonly<Record<string, ArrayVariable['type']>> = {
  b1: 'uint8',
  i1: 'int8',
  u1: 'uint8',
  i2: 'int16',
  u2: 'uint16',
  i4: 'int32',
  u4: 'uint32',
  i8: 'int64',
  u8: 'uint64',
  f4: 'float32',
  f8: 'float64',
};
const V3_TYPES = ['int8', 'uint8', 'int16', 'uint16', 'int32', 'uint32', 'int64', 'uint64', 'float32', 'float64'] as const;

function typeOfV2(dtype: unknown): ArrayVariable['type'] {
  if (typeof dtype !== 'string') return 'other';
  if (dtype === '|O' || /^[<>|][SU]\d+$/.test(dtype)) return 'text';
  return V2_TYPES[dtype.slice(1)] ?? 'other';
}

function typeOfV3(type: unknown): ArrayVariable['type'] {
  if (type === 'bool') return 'uint8';
  if (type === 'string') return 'text';
  return V3_TYPES.find((known) => known === type) ?? 'other';
}

function dimensionsOf(names: unknown, variable: string, shape: readonly number[]): string[] {
  const stated = asList(names);
  if (shape.length === 1 && stated.length === 0) return [variable];
  return shape.map((_, k) => (typeof stated[k] === 'string' && stated[k] !== '' ? (stated[k] as string) : `dimension_${k}`));
}

function attributesOf(attributes: JsonObject): Record<string, AttributeValue> {
  const told: Record<string, AttributeValue> = Object.create(null);
  for (const [name, value] of Object.entries(attributes)) {
    if (name === '_ARRAY_DIMENSIONS') continue;
    const attribute = isMissingCode(name) && typeof value === 'string' && BARE.includes(value) ? [Number(value)] : attributeOf(value);
    if (attribute !== null) told[name] = attribute;
  }
  return told;
}

const BARE = ['NaN', 'Infinity', '-Infinity'];

function isMissingCode(name: string): boolean {
  return name === '_FillValue' || name === 'missing_value';
}

/** Version 3 stores a missing code of a floating-point array as the base64 text of its eight bytes, by the practice of its most common writer. */
function decodedFill(attributes: Record<string, AttributeValue>, type: ArrayVariable['type']): Record<string, AttributeValue> {
  const code = attributes._FillValue;
  if (typeof code !== 'string' || !type.startsWith('float') || code.length !== 12) return attributes;
  const bytes = Buffer.from(code, 'base64');
  return bytes.length === 8 ? { ...attributes, _FillValue: [bytes.readDoubleLE(0)] } : attributes;
}

function numberOf(fill: unknown): number {
  if (typeof fill === 'boolean') return Number(fill);
  if (typeof fill === 'number') return fill;
  return typeof fill === 'string' && (BARE.includes(fill) || /^-?\d+$/.test(fill)) ? Number(fill) : Number.NaN;
}
