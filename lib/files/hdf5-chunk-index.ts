/**
 * Where the chunks of an HDF5 dataset lie: the part of the format that NetCDF-4 files are written in, read without the library, so that chunks
 * can be unpacked side by side by the platform's zlib. Anything else is told as `null`, and the library reads it.
 *
 * Source: HDF5 File Format Specification version 3.0: II.A superblock, III.A.1 version 1 B-trees (node type 1), IV.A object headers,
 * IV.A.2.i data layout message (version 3), IV.A.2.q continuation message.
 */
import type { ByteSource } from './byte-source.ts';

/** Chunks of a dataset by their place in the grid of chunks, row-major. */
export interface ChunkIndex {
  readonly chunk: readonly number[];
  /** number of chunks along each dimension */
  readonly grid: readonly number[];
  /** byte where each chunk begins; 0: not stored */
  readonly offset: Float64Array;
  /** stored bytes of each chunk */
  readonly length: Uint32Array;
  /** filters that were left out for each chunk, as bits */
  readonly skipped: Uint32Array;
}

/** Most chunks that are indexed. */
const CHUNK_COUNT_LIMIT = 4_000_000;
/** Most bytes of object headers and tree nodes that are looked at. */
const BLOCK_LIMIT = 16 * 1024 * 1024;
const TREE_DEPTH_LIMIT = 12;
const MESSAGE = { layout: 0x08, continuation: 0x10 } as const;
const CHUNKED = 2;

/** True when the file has the plain superblock that addresses can be taken from: eight-byte addresses that count from its first byte. */
export async function hasPlainSuperblock(source: ByteSource): Promise<boolean> {
  const bytes = await source.read(0, 96);
  if (bytes.length < 48 || bytes[0] !== 0x89 || bytes[1] !== 0x48) return false;
  const view = viewOf(bytes);
  const version = bytes[8];
  if (version === 0 || version === 1) return bytes[13] === 8 && bytes[14] === 8 && view.getBigUint64(version === 0 ? 24 : 28, true) === 0n;
  return (version === 2 || version === 3) && bytes[9] === 8 && bytes[10] === 8 && view.getBigUint64(12, true) === 0n;
}

/**
 * The chunks of a dataset.
 *
 * @param address byte of its object header
 * @returns null when it is not laid out in the way read here
 */
export async function readChunkIndex(source: ByteSource, address: number, shape: readonly number[]): Promise<ChunkIndex | null> {
  try {
    const layout = await findLayout(source, address);
    if (layout === null || layout.chunk.length !== shape.length) return null;
    const grid = shape.map((length, k) => Math.ceil(length / layout.chunk[k]));
    const count = grid.reduce((product, length) => product * length, 1);
    if (count === 0 || count > CHUNK_COUNT_LIMIT) return null;
    const index = {
      chunk: layout.chunk,
      grid,
      offset: new Float64Array(count),
      length: new Uint32Array(count),
      skipped: new Uint32Array(count),
    };
    const budget = { nodes: count + 1000 };
    if (layout.tree !== UNDEFINED) await readNode(source, layout.tree, index, TREE_DEPTH_LIMIT, budget);
    return index;
  } catch (error) {
    if (error instanceof RangeError || error instanceof OtherLayout) return null;
    throw error;
  }
}

class OtherLayout extends Error {}

const UNDEFINED = Number.POSITIVE_INFINITY;

interface Layout {
  readonly tree: number;
  readonly chunk: readonly number[];
}

function viewOf(bytes: Uint8Array): DataView {
  return new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
}

/** An address or a length of eight bytes; all bits set: none. */
function addressAt(view: DataView, at: number): number {
  const high = view.getUint32(at + 4, true);
  return high === 0xffffffff ? UNDEFINED : high * 2 ** 32 + view.getUint32(at, true);
}

async function blockAt(source: ByteSource, address: number, length: number): Promise<DataView> {
  if (!(address >= 0) || !(length > 0) || length > BLOCK_LIMIT || address + length > source.size) throw new OtherLayout();
  return viewOf(await source.read(address, length));
}

async function findLayout(source: ByteSource, address: number): Promise<Layout | null> {
  const head = await blockAt(source, address, Math.min(32, source.size - address));
  const isVersion2 = head.getUint32(0) === 0x4f484452;
  return isVersion2 ? findLayout2(source, address, head) : findLayout1(source, address, head);
}

async function findLayout1(source: ByteSource, address: number, head: DataView): Promise<Layout | null> {
  if (head.getUint8(0) !== 1) return null;
  const blocks: [number, number][] = [[address + 16, head.getUint32(8, true)]];
  for (let turn = 0; turn < blocks.length && turn < 100; turn++) {
    const view = await blockAt(source, ...blocks[turn]);
    for (let at = 0; at + 8 <= view.byteLength; ) {
      const size = view.getUint16(at + 2, true);
      const found = message(view, view.getUint16(at, true), at + 8, view.getUint8(at + 4), blocks);
      if (found !== null) return found;
      at += 8 + size;
    }
  }
  return null;
}

async function findLayout2(source: ByteSource, address: number, head: DataView): Promise<Layout | null> {
  const flags = head.getUint8(5);
  const sizeAt = 6 + (flags & 0x20 ? 16 : 0) + (flags & 0x10 ? 4 : 0);
  const width = 1 << (flags & 3);
  const length = width === 1 ? head.getUint8(sizeAt) : width === 2 ? head.getUint16(sizeAt, true) : head.getUint32(sizeAt, true);
  const blocks: [number, number][] = [[address + sizeAt + width, length]];
  const headBytes = 4 + (flags & 4 ? 2 : 0);
  for (let turn = 0; turn < blocks.length && turn < 100; turn++) {
    const view = await blockAt(source, ...blocks[turn]);
    // a continuation has a signature before its messages and a checksum behind them
    const end = view.byteLength - (turn === 0 ? 0 : 4);
    for (let at = turn === 0 ? 0 : 4; at + headBytes <= end; ) {
      const size = view.getUint16(at + 1, true);
      const found = message(view, view.getUint8(at), at + headBytes, view.getUint8(at + 3), blocks);
      if (found !== null) return found;
      at += headBytes + size;
    }
  }
  return null;
}

/** Looks at one message: the layout is returned, a continuation is put on the list of blocks. */
function message(view: DataView, type: number, at: number, flags: number, blocks: [number, number][]): Layout | null {
  if (type === MESSAGE.continuation) blocks.push([addressAt(view, at), addressAt(view, at + 8)]);
  if (type !== MESSAGE.layout) return null;
  const isShared = (flags & 2) !== 0;
  if (isShared || view.getUint8(at) !== 3 || view.getUint8(at + 1) !== CHUNKED) throw new OtherLayout();
  const rank = view.getUint8(at + 2) - 1;
  const chunk = Array.from({ length: rank }, (_, k) => view.getUint32(at + 11 + 4 * k, true));
  if (rank < 1 || chunk.some((length) => length === 0)) throw new OtherLayout();
  return { tree: addressAt(view, at + 3), chunk };
}

async function readNode(source: ByteSource, address: number, index: ChunkIndex, depth: number, budget: { nodes: number }): Promise<void> {
  if (depth === 0 || budget.nodes-- <= 0) throw new OtherLayout();
  const head = await blockAt(source, address, 24);
  if (head.getUint32(0) !== 0x54524545 || head.getUint8(4) !== 1) throw new OtherLayout();
  const level = head.getUint8(5);
  const entries = head.getUint16(6, true);
  const keyBytes = 8 + 8 * (index.chunk.length + 1);
  if (entries === 0) return;
  const view = await blockAt(source, address + 24, entries * (keyBytes + 8));
  for (let k = 0; k < entries; k++) {
    const at = k * (keyBytes + 8);
    const child = addressAt(view, at + keyBytes);
    if (level > 0) await readNode(source, child, index, depth - 1, budget);
    else enter(view, at, child, index);
  }
}

function enter(view: DataView, at: number, offset: number, { chunk, grid, ...index }: ChunkIndex): void {
  let place = 0;
  for (let k = 0; k < chunk.length; k++) {
    const along = addressAt(view, at + 8 + 8 * k) / chunk[k];
    // chunks beyond the present extent stay behind when a dataset is shortened
    if (along >= grid[k]) return;
    if (!Number.isInteger(along)) throw new OtherLayout();
    place = place * grid[k] + along;
  }
  index.offset[place] = offset;
  index.length[place] = view.getUint32(at, true);
  index.skipped[place] = view.getUint32(at + 4, true);
}
