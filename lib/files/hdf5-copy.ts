/**
 * From the bytes of an unpacked chunk to the doubles of a slab: only the rows that the slab wants, each by a plain loop for its type.
 *
 * Source: HDF5 File Format Specification version 3.0, H5Z shuffle filter: byte k of all values of the chunk stands together.
 */
import type { Block } from './array-block.ts';
import type { ArrayVariable } from './array-file.ts';
import { stridesOf, widthOf } from './array-slab.ts';

type ValueType = ArrayVariable['type'];
type Numbers = Float32Array | Float64Array | Int8Array | Uint8Array | Int16Array | Uint16Array | Int32Array | Uint32Array;

const VIEWS: Partial<Record<ValueType, (buffer: ArrayBufferLike, offset: number, length: number) => Numbers>> = {
  int8: (...place) => new Int8Array(...place),
  uint8: (...place) => new Uint8Array(...place),
  int16: (...place) => new Int16Array(...place),
  uint16: (...place) => new Uint16Array(...place),
  int32: (...place) => new Int32Array(...place),
  uint32: (...place) => new Uint32Array(...place),
  float32: (...place) => new Float32Array(...place),
  float64: (...place) => new Float64Array(...place),
};

/** Rows from this length are copied by the platform, shorter ones by a loop: the call costs more than it saves. */
const LONG_ROW = 128;

/** True for the types that are copied here. */
export function isCopied(type: ValueType): boolean {
  return VIEWS[type] !== undefined;
}

/** The stretches of a chunk that a slab wants, all of one length, counted in values. */
interface Rows {
  /** first value of each in the chunk */
  readonly from: Int32Array;
  /** its place in the slab */
  readonly to: Int32Array;
  readonly length: number;
}

/**
 * Copies the part of a chunk that belongs to a slab.
 *
 * @param bytes of the whole chunk, little-endian
 * @param isShuffled byte k of all values stands together
 * @param shape of the chunk
 */
export function copyChunk(
  bytes: Uint8Array,
  isShuffled: boolean,
  type: ValueType,
  shape: readonly number[],
  block: Block,
  into: Float64Array,
): void {
  const rows = rowsOf(shape, block);
  if (!isShuffled || widthOf(type) === 1) copyRows(numbersIn(bytes, type), rows, into);
  else if (type === 'int16') gatherInt16(bytes, rows, into);
  else if (type === 'uint16') gatherUint16(bytes, rows, into);
  else if (type === 'float32') gatherFloat32(bytes, rows, into);
  else if (type === 'float64') gatherFloat64(bytes, rows, into);
  else gatherInt32(bytes, type === 'uint32', rows, into);
}

function rowsOf(shape: readonly number[], { from: first, count, into, intoStride }: Block): Rows {
  const strides = stridesOf(shape);
  let inner = shape.length - 1;
  let length = count[inner];
  // trailing dimensions that are taken whole, and lie without gaps in the slab, make longer rows
  while (inner > 0 && count[inner] === shape[inner] && intoStride[inner - 1] === length) length *= count[--inner];
  const rowCount = count.slice(0, inner).reduce((product, along) => product * along, 1);
  const from = new Int32Array(rowCount);
  const to = new Int32Array(rowCount);
  from[0] = first.reduce((sum, index, k) => sum + index * strides[k], 0);
  to[0] = into;
  for (let k = inner - 1, made = 1; k >= 0; k--) {
    const before = made;
    for (let along = 1; along < count[k]; along++) {
      for (let row = 0; row < before; row++, made++) {
        from[made] = from[row] + along * strides[k];
        to[made] = to[row] + along * intoStride[k];
      }
    }
  }
  return { from, to, length };
}

function numbersIn(bytes: Uint8Array, type: ValueType): Numbers {
  const width = widthOf(type);
  const aligned = bytes.byteOffset % width === 0 ? bytes : bytes.slice();
  const make = VIEWS[type];
  if (make === undefined) throw new RangeError(`Numbers of type ${type} are not copied.`);
  return make(aligned.buffer, aligned.byteOffset, aligned.byteLength / width);
}

function copyRows(numbers: Numbers, { from, to, length }: Rows, into: Float64Array): void {
  for (let row = 0; row < from.length; row++) {
    const first = from[row];
    const end = first + length;
    if (length >= LONG_ROW) {
      into.set(numbers.subarray(first, end), to[row]);
      continue;
    }
    const shift = to[row] - first;
    for (let k = first; k < end; k++) into[k + shift] = numbers[k];
  }
}

function gatherInt16(bytes: Uint8Array, { from, to, length }: Rows, into: Float64Array): void {
  const values = bytes.length / 2;
  const high = new Int8Array(bytes.buffer, bytes.byteOffset + values, values);
  for (let row = 0; row < from.length; row++) {
    const first = from[row];
    const shift = to[row] - first;
    for (let k = first, end = first + length; k < end; k++) into[k + shift] = (high[k] << 8) | bytes[k];
  }
}

function gatherUint16(bytes: Uint8Array, { from, to, length }: Rows, into: Float64Array): void {
  const high = bytes.subarray(bytes.length / 2);
  for (let row = 0; row < from.length; row++) {
    const first = from[row];
    const shift = to[row] - first;
    for (let k = first, end = first + length; k < end; k++) into[k + shift] = (high[k] << 8) | bytes[k];
  }
}

/** The planes of the four bytes of a value, or of one half of it. */
function planesOf(bytes: Uint8Array, planes: number, first: number): readonly [Uint8Array, Uint8Array, Uint8Array, Uint8Array] {
  const values = bytes.length / planes;
  const plane = (k: number) => bytes.subarray((first + k) * values, (first + k + 1) * values);
  return [plane(0), plane(1), plane(2), plane(3)];
}

function gatherFloat32(bytes: Uint8Array, { from, to, length }: Rows, into: Float64Array): void {
  const [a, b, c, d] = planesOf(bytes, 4, 0);
  const words = new Int32Array(length);
  const numbers = new Float32Array(words.buffer);
  for (let row = 0; row < from.length; row++) {
    const first = from[row];
    const place = to[row];
    for (let k = 0, at = first; k < length; k++, at++) words[k] = a[at] | (b[at] << 8) | (c[at] << 16) | (d[at] << 24);
    for (let k = 0; k < length; k++) into[place + k] = numbers[k];
  }
}

function gatherInt32(bytes: Uint8Array, isUnsigned: boolean, { from, to, length }: Rows, into: Float64Array): void {
  const [a, b, c, d] = planesOf(bytes, 4, 0);
  for (let row = 0; row < from.length; row++) {
    const first = from[row];
    const shift = to[row] - first;
    for (let k = first, end = first + length; k < end; k++) {
      const word = a[k] | (b[k] << 8) | (c[k] << 16) | (d[k] << 24);
      into[k + shift] = isUnsigned ? word >>> 0 : word;
    }
  }
}

function gatherFloat64(bytes: Uint8Array, { from, to, length }: Rows, into: Float64Array): void {
  const words = new Int32Array(into.buffer, into.byteOffset, 2 * into.length);
  for (const half of [0, 1]) {
    const [a, b, c, d] = planesOf(bytes, 8, 4 * half);
    for (let row = 0; row < from.length; row++) {
      const first = from[row];
      let place = 2 * to[row] + half;
      for (let k = first, end = first + length; k < end; k++, place += 2) {
        words[place] = a[k] | (b[k] << 8) | (c[k] << 16) | (d[k] << 24);
      }
    }
  }
}
