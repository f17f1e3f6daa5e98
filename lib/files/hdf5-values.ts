/** Values of HDF5 datasets and attributes as the library lays them in its memory, brought to numbers and texts. Runs in the HDF5 thread. */
import type { Module } from 'h5wasm/node';
import type { ArrayVariable, AttributeValue } from './array-file.ts';
import { textOf } from './array-slab.ts';

export type Hdf5Library = typeof Module;
export type Hdf5Type = ReturnType<Hdf5Library['get_dataset_metadata']>;

/** Classes of HDF5 number types, by the library's numbering (H5Tpublic.h). */
const CLASS = { integer: 0, float: 1, text: 3, enumeration: 8 } as const;
/** Longest text [bytes]. */
const TEXT_LIMIT = 1024 * 1024;
/** Largest attribute that is read [bytes]. */
const ATTRIBUTE_LIMIT = 16 * 1024 * 1024;

/** Stored type of a dataset, in the words of the array contract. */
export function typeOf({ type, size, signed }: Hdf5Type): ArrayVariable['type'] {
  if (type === CLASS.text) return 'text';
  if (type === CLASS.float) return size === 8 ? 'float64' : size === 4 ? 'float32' : 'other';
  if (type !== CLASS.integer && type !== CLASS.enumeration) return 'other';
  if (size === 1 || size === 2 || size === 4 || size === 8) return `${signed ? 'int' : 'uint'}${(size * 8) as 8 | 16 | 32 | 64}`;
  return 'other';
}

/** Numbers of a hyperslab. @throws when the library cannot read them */
export function readNumbers(
  library: Hdf5Library,
  file: bigint,
  path: string,
  start: readonly number[],
  count: readonly number[],
): Float64Array {
  const stored = library.get_dataset_metadata(file, path);
  return readSlab(library, file, path, stored, start, count, (bytes) => numbersOf(bytes, typeOf(stored)));
}

/** Texts of a hyperslab; characters kept one by one are joined along the last dimension. @throws when the library cannot read them */
export function readTexts(library: Hdf5Library, file: bigint, path: string, start: readonly number[], count: readonly number[]): string[] {
  const stored = library.get_dataset_metadata(file, path);
  return readSlab(library, file, path, stored, start, count, (bytes) => {
    if (stored.vlen) return pointedTexts(library, bytes);
    const length = count.at(-1) ?? 1;
    return fixedTexts(bytes, stored.size === 1 && count.length > 0 ? length : stored.size);
  });
}

function readSlab<T>(
  library: Hdf5Library,
  file: bigint,
  path: string,
  stored: Hdf5Type,
  start: readonly number[],
  count: readonly number[],
  decode: (bytes: Uint8Array) => T,
): T {
  const values = count.reduce((product, length) => product * length, 1);
  const size = stored.size * values;
  const pointer = allocate(library, size);
  library.HEAPU8.fill(0, pointer, pointer + size);
  const counts = count.map(BigInt);
  try {
    const status =
      count.length === 0
        ? library.get_dataset_data(file, path, null, null, null, BigInt(pointer))
        : library.get_dataset_data(
            file,
            path,
            counts,
            start.map(BigInt),
            count.map(() => 1n),
            BigInt(pointer),
          );
    if (Number(status) < 0) throw new Error('its stored bytes are damaged, cut short, or packed by a filter that is not read');
    return decode(library.HEAPU8.slice(pointer, pointer + size));
  } finally {
    if (stored.vlen) {
      if (count.length === 0) library.reclaim_vlen_memory(file, path, '', BigInt(pointer));
      else library.reclaim_vlen_memory_count(file, path, '', BigInt(pointer), counts);
    }
    library._free(pointer);
  }
}

function allocate(library: Hdf5Library, size: number): number {
  const pointer = library._malloc(Math.max(1, size));
  if (pointer === 0) throw new Error(`there is no memory for ${size} bytes`);
  return pointer;
}

/** Little-endian numbers as doubles. */
export function numbersOf(bytes: Uint8Array, type: ArrayVariable['type']): Float64Array {
  const { buffer } = bytes.byteOffset % 8 === 0 && bytes.byteLength === bytes.buffer.byteLength ? bytes : bytes.slice();
  if (type === 'float64') return new Float64Array(buffer);
  if (type === 'float32') return Float64Array.from(new Float32Array(buffer));
  if (type === 'int16') return Float64Array.from(new Int16Array(buffer));
  if (type === 'int32') return Float64Array.from(new Int32Array(buffer));
  if (type === 'int8') return Float64Array.from(new Int8Array(buffer));
  if (type === 'uint8') return Float64Array.from(new Uint8Array(buffer));
  if (type === 'uint16') return Float64Array.from(new Uint16Array(buffer));
  if (type === 'uint32') return Float64Array.from(new Uint32Array(buffer));
  if (type === 'int64') return Float64Array.from(new BigInt64Array(buffer) as never, Number);
  if (type === 'uint64') return Float64Array.from(new BigUint64Array(buffer) as never, Number);
  throw new Error('its numbers are of a type that is not read');
}

function fixedTexts(bytes: Uint8Array, length: number): string[] {
  return Array.from({ length: length === 0 ? 0 : Math.floor(bytes.length / length) }, (_, k) =>
    textOf(bytes.subarray(k * length, (k + 1) * length)),
  );
}

/** Texts that the library keeps elsewhere in its memory, by their addresses. */
function pointedTexts(library: Hdf5Library, bytes: Uint8Array): string[] {
  const pointers = new Uint32Array(bytes.slice().buffer);
  return Array.from(pointers, (pointer) => {
    if (pointer === 0) return '';
    const heap = library.HEAPU8;
    const end = heap.indexOf(0, pointer);
    return textOf(heap.slice(pointer, Math.min(end < 0 ? heap.length : end, pointer + TEXT_LIMIT)));
  });
}

/** An attribute of an object; null when it is neither numbers nor text. */
export function readAttribute(library: Hdf5Library, file: bigint, path: string, name: string): AttributeValue | null {
  const stored = library.get_attribute_metadata(file, path, name);
  const type = typeOf(stored);
  if (type === 'other') return null;
  if (stored.shape === null) return type === 'text' ? '' : null;
  const size = stored.size * stored.total_size;
  if (size > ATTRIBUTE_LIMIT) return null;
  const pointer = allocate(library, size);
  library.HEAPU8.fill(0, pointer, pointer + size);
  try {
    const status = library.get_attribute_data(file, path, name, BigInt(pointer));
    if (Number(status) < 0) return null;
    const bytes = library.HEAPU8.slice(pointer, pointer + size);
    if (type !== 'text') return Array.from(numbersOf(bytes, type));
    const texts = stored.vlen ? pointedTexts(library, bytes) : fixedTexts(bytes, stored.size);
    return texts.length === 1 ? texts[0] : texts;
  } finally {
    if (stored.vlen) library.reclaim_vlen_memory(file, path, name, BigInt(pointer));
    library._free(pointer);
  }
}
