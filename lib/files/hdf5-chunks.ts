/**
 * Reads chunks of HDF5 datasets directly: deflate by the platform's zlib, several chunks at a time on its threads, shuffle undone while
 * copying the part that is wanted. What it does not know (other filters, layouts, byte orders, chunks never written) it leaves to the library.
 *
 * Source: HDF5 File Format Specification version 3.0, IV.A.2.l filter pipeline message; H5Z shuffle filter (byte k of all values together).
 */
import { promisify } from 'node:util';
import { inflate } from 'node:zlib';
import { type Block, eachBlock, isWantedAgain } from './array-block.ts';
import { sizeOf } from './array-slab.ts';
import { BLOCK_CACHE_LIMIT, BlockCache } from './block-cache.ts';
import { type ByteSource, openBytes } from './byte-source.ts';
import { type ChunkIndex, hasPlainSuperblock, readChunkIndex } from './hdf5-chunk-index.ts';
import { copyChunk, isCopied } from './hdf5-copy.ts';
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
    if (!this.isPlain || chunk === null || !isKnown || !layout.isLittleEndian || !isCopied(type)) return null;
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
    copyChunk(bytes, isApplied(layout, index, place, SHUFFLE), type, shape, block, into);
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
