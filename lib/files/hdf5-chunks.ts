/**
 * Reads chunks of HDF5 datasets directly: deflate by the platform's zlib, several chunks at a time on its threads, shuffle undone while
 * copying the part that is wanted. What it does not know (other filters, layouts, byte orders, chunks never written) it leaves to the library.
 *
 * Source: HDF5 File Format Specification version 3.0, IV.A.2.l filter pipeline message; H5Z shuffle filter (byte k of all values together).
 */
import { promisify } from 'node:util';
import { inflate } from 'node:zlib';
import { type Block, eachBlock, isWantedAgain } from './array-block.ts';
import type { ArrayVariable } from './array-file.ts';
import { sizeOf, stridesOf, widthOf } from './array-slab.ts';
import { BLOCK_CACHE_LIMIT, BlockCache } from './block-cache.ts';
import { type ByteSource, openBytes } from './byte-source.ts';
import { type ChunkIndex, hasPlainSuperblock, readChunkIndex } from './hdf5-chunk-index.ts';
import type { Hdf5Layout, Hdf5Variable } from './hdf5-messages.ts';

const inflateAsync = promisify(inflate);
const DEFLATE = 1;
const SHUFFLE = 2;
/** Bytes of room beyond a chunk's own, so that zlib does not ask for another buffer when the first is just full. */
const SPARE = 64;
/** Chunks unpacked at a time, and the bytes they may hold together. */
const IN_FLIGHT = 4;
const IN_FLIGHT_BYTES = 64 * 1024 * 1024;

export class ChunkReader {
  private readonly cache = new BlockCache<Uint8Array>();
  private readonly indices = new Map<string, Promise<ChunkIndex | null>>();

  private constructor(
    private readonly source: ByteSource,
    private readonly isPlain: boolean,
  ) {}

  static async open(path: string): Promise<ChunkReader> {
    const source = await openBytes({ name: path, path, bytes: new Uint8Array() });
    return new ChunkReader(source, await hasPlainSuperblock(source));
  }

  /** Numbers of a slab; null when the library must read them. @throws when a chunk is damaged */
  async read(variable: Hdf5Variable, start: readonly number[], count: readonly number[]): Promise<Float64Array | null> {
    const { layout, chunk, type } = variable;
    const isKnown = layout.filters.every(
      (filter, k) => (filter === SHUFFLE && k === 0) || (filter === DEFLATE && k === layout.filters.length - 1),
    );
    if (!this.isPlain || chunk === null || !isKnown || !layout.isLittleEndian || VIEWS[type] === undefined) return null;
    const index = await this.indexOf(variable);
    if (index === null || index.chunk.some((length, k) => length !== chunk[k])) return null;
    const blocks = [...eachBlock(chunk, start, count)];
    if (blocks.some(({ place }) => index.offset[placeIn(index, place)] === 0)) return null;
    const values = new Float64Array(sizeOf(count));
    const together = Math.max(1, Math.min(IN_FLIGHT, Math.floor(IN_FLIGHT_BYTES / (sizeOf(chunk) * layout.width))));
    const keep = blocks.length * sizeOf(chunk) * layout.width <= BLOCK_CACHE_LIMIT / 2;
    let next = 0;
    const lane = async () => {
      const room: Room = { bytes: new Uint8Array(0), keep };
      while (next < blocks.length) await this.copy(variable, index, blocks[next++], values, room);
    };
    await Promise.all(Array.from({ length: together }, lane));
    return values;
  }

  async close(): Promise<void> {
    this.cache.dismiss();
    await this.source.close();
  }

  private indexOf({ path, layout, storedShape }: Hdf5Variable): Promise<ChunkIndex | null> {
    const known = this.indices.get(path) ?? readChunkIndex(this.source, layout.address, storedShape);
    this.indices.set(path, known);
    return known;
  }

  private async copy(
    { path, layout, chunk, type, storedShape }: Hdf5Variable,
    index: ChunkIndex,
    block: Block,
    into: Float64Array,
    room: Room,
  ): Promise<void> {
    const shape = chunk as readonly number[];
    const place = placeIn(index, block.place);
    const size = sizeOf(shape) * layout.width;
    const bytes = await this.cache.get(
      `${path} ${place}`,
      size,
      () => this.unpacked(layout, index, place, size, room),
      room.keep && isWantedAgain(block, shape, storedShape),
    );
    copyPart(bytes, isApplied(layout, index, place, SHUFFLE) && layout.width > 1, type, shape, block, into);
  }

  private async unpacked(layout: Hdf5Layout, index: ChunkIndex, place: number, size: number, room: Room): Promise<Uint8Array> {
    const stored = index.length[place];
    if (stored > 2 * size + 65536) throw new Error(`a chunk of ${size} bytes is stored in ${stored}`);
    if (room.bytes.length < stored) room.bytes = new Uint8Array(Math.max(stored, size));
    const bytes = room.bytes.subarray(0, stored);
    if ((await this.source.readInto(bytes, index.offset[place])) < stored) throw new Error('a chunk reaches beyond the end of the file');
    const isPacked = isApplied(layout, index, place, DEFLATE);
    const plain = isPacked ? await inflateAsync(bytes, { maxOutputLength: size, chunkSize: size + SPARE }) : bytes.slice();
    if (plain.length !== size) throw new Error(`a chunk unpacks to ${plain.length} bytes, not ${size}`);
    return plain;
  }
}

/** One chunk after another: where stored bytes are read to, and whether what they unpack to is kept for later slabs. */
interface Room {
  bytes: Uint8Array;
  readonly keep: boolean;
}

/** Whether a filter was applied to a chunk: it may be left out where it did not help. */
function isApplied({ filters }: Hdf5Layout, index: ChunkIndex, place: number, filter: number): boolean {
  return filters.includes(filter) && (index.skipped[place] & (1 << filters.indexOf(filter))) === 0;
}

function placeIn({ grid }: ChunkIndex, place: readonly number[]): number {
  return place.reduce((sum, along, k) => sum * grid[k] + along, 0);
}

/** Copies the part of a chunk that belongs to the slab, row by row along the last dimension. */
function copyPart(
  bytes: Uint8Array,
  isShuffled: boolean,
  type: ArrayVariable['type'],
  shape: readonly number[],
  block: Block,
  into: Float64Array,
): void {
  const strides = stridesOf(shape);
  const inner = shape.length - 1;
  const values = sizeOf(shape);
  const length = block.count[inner];
  const copyRow = (isShuffled ? gatherOf(type, bytes, values, length) : takeOf(type, bytes)) as CopyRow;
  const index = new Array<number>(inner).fill(0);
  for (;;) {
    let from = block.from[inner];
    let to = block.into;
    for (let k = 0; k < inner; k++) {
      from += (block.from[k] + index[k]) * strides[k];
      to += index[k] * block.intoStride[k];
    }
    copyRow(from, into, to, length);
    let k = inner - 1;
    while (k >= 0 && ++index[k] === block.count[k]) {
      index[k] = 0;
      k--;
    }
    if (k < 0) return;
  }
}

/** Copies `length` values of a chunk, from its value `from` on, to place `to`. */
type CopyRow = (from: number, into: Float64Array, to: number, length: number) => void;

/** The chunk's bytes as numbers in their order; null for types that are left to the library. */
function takeOf(type: ArrayVariable['type'], bytes: Uint8Array): CopyRow | null {
  const width = widthOf(type);
  const plain = bytes.byteOffset % Math.max(1, width) === 0 ? bytes : bytes.slice();
  const make = VIEWS[type];
  if (make === undefined) return null;
  const numbers = make(plain.buffer as ArrayBuffer, plain.byteOffset, plain.byteLength / width);
  return (from, into, to, length) => into.set(numbers.subarray(from, from + length), to);
}

type Numbers = Float32Array | Float64Array | Int8Array | Uint8Array | Int16Array | Uint16Array | Int32Array | Uint32Array;

const VIEWS: Partial<Record<ArrayVariable['type'], (buffer: ArrayBuffer, offset: number, length: number) => Numbers>> = {
  int8: (...place) => new Int8Array(...place),
  uint8: (...place) => new Uint8Array(...place),
  int16: (...place) => new Int16Array(...place),
  uint16: (...place) => new Uint16Array(...place),
  int32: (...place) => new Int32Array(...place),
  uint32: (...place) => new Uint32Array(...place),
  float32: (...place) => new Float32Array(...place),
  float64: (...place) => new Float64Array(...place),
};

/** The chunk's bytes where byte k of all values stands together, `apart` values each. */
function gatherOf(type: ArrayVariable['type'], bytes: Uint8Array, apart: number, longest: number): CopyRow | null {
  if (type === 'int16') return (from, into, to, length) => gatherInt16(bytes, apart, from, into, to, length);
  if (type === 'uint16') return (from, into, to, length) => gatherUint16(bytes, apart, from, into, to, length);
  const width = widthOf(type);
  const numbers = VIEWS[type]?.(new ArrayBuffer(longest * width), 0, longest);
  if (numbers === undefined || width < 4) return null;
  const words = new Int32Array(numbers.buffer);
  const step = width / 4;
  return (from, into, to, length) => {
    for (let word = 0; word < step; word++) gatherWords(bytes, apart, from + 4 * word * apart, words, word, step);
    into.set(length === longest ? numbers : numbers.subarray(0, length), to);
  };
}

function gatherInt16(bytes: Uint8Array, apart: number, from: number, into: Float64Array, to: number, length: number): void {
  for (let k = 0; k < length; k++) into[to + k] = ((bytes[from + k] | (bytes[apart + from + k] << 8)) << 16) >> 16;
}

function gatherUint16(bytes: Uint8Array, apart: number, from: number, into: Float64Array, to: number, length: number): void {
  for (let k = 0; k < length; k++) into[to + k] = bytes[from + k] | (bytes[apart + from + k] << 8);
}

function gatherWords(bytes: Uint8Array, apart: number, from: number, words: Int32Array, first: number, step: number): void {
  for (let k = first, at = from; k < words.length; k += step, at++) {
    words[k] = bytes[at] | (bytes[at + apart] << 8) | (bytes[at + 2 * apart] << 16) | (bytes[at + 3 * apart] << 24);
  }
}
