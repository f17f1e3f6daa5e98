/**
 * Codecs of Zarr chunks that keep a bound: a chunk that would unpack to more than its shape takes is refused before it is unpacked.
 *
 * Sources of the headers that are looked at: Blosc chunk format (nbytes at byte 4, little-endian), RFC 8878 section 3.1.1 (Zstandard frame
 * content size), numcodecs LZ4 (length in the first four bytes), numcodecs vlen-utf8 (number of items in the first four bytes).
 */
import { gunzipSync, inflateSync } from 'node:zlib';
import { registry } from 'zarrita';
import { CHUNK_LIMIT, sizeOf } from './array-slab.ts';

type Entry = Awaited<ReturnType<NonNullable<ReturnType<typeof registry.get>>>>;
type Codec = ReturnType<Entry['fromConfig']>;
type ChunkMeta = Parameters<Entry['fromConfig']>[1];

/** Room for what codecs add to the bare values: shard indices, checksums. */
const SLACK = 64 * 1024;

let installed = false;

/** Puts the bounded codecs in place of the library's; once for the process. */
export function installBoundedCodecs(): void {
  if (installed) return;
  installed = true;
  replace('gzip', () => (bytes, limit) => new Uint8Array(gunzipSync(bytes, { maxOutputLength: limit })));
  replace('zlib', () => (bytes, limit) => new Uint8Array(inflateSync(bytes, { maxOutputLength: limit })));
  guard('blosc', (bytes) => uint32At(bytes, 4));
  guard('lz4', (bytes) => uint32At(bytes, 0));
  guard('zstd', zstdContentSize);
  guard('vlen-utf8', (bytes, limit) => (uint32At(bytes, 0) * 4 > bytes.length ? limit + 1 : 0));
}

function names(codec: string): string[] {
  return [codec, `numcodecs.${codec}`].filter((name) => registry.has(name));
}

function replace(codec: string, make: () => (bytes: Uint8Array, limit: number) => Uint8Array): void {
  const fromConfig = (_: unknown, meta: ChunkMeta) => {
    const limit = limitOf(meta);
    const decode = make();
    return { kind: 'bytes_to_bytes', encode: refuseEncode, decode: (bytes: Uint8Array) => decode(bytes, limit) } as unknown as Codec;
  };
  for (const name of names(codec)) registry.set(name, async () => ({ kind: 'bytes_to_bytes', fromConfig }));
}

function guard(codec: string, announced: (bytes: Uint8Array, limit: number) => number): void {
  for (const name of names(codec)) {
    const original = registry.get(name);
    if (original === undefined) continue;
    registry.set(name, async () => {
      const entry = await original();
      const fromConfig = (config: unknown, meta: ChunkMeta) => guarded(entry.fromConfig(config, meta), announced, limitOf(meta));
      return { kind: entry.kind, fromConfig };
    });
  }
}

function guarded(codec: Codec, announced: (bytes: Uint8Array, limit: number) => number, limit: number): Codec {
  const decode = codec.decode.bind(codec) as (bytes: Uint8Array) => unknown;
  const checked = (bytes: Uint8Array) => {
    const size = announced(bytes, limit);
    if (size > limit) throw new Error(`the chunk announces ${size} bytes, and at most ${limit} belong to it`);
    return decode(bytes);
  };
  return { kind: codec.kind, encode: refuseEncode, decode: checked } as unknown as Codec;
}

/** Most bytes a chunk may unpack to; texts have no fixed length, so only the general limit holds for them. */
function limitOf({ dataType, shape }: ChunkMeta): number {
  const width = /(\d+)$/.exec(dataType)?.[1];
  const isNumber = /^(u?int|float)\d+$/.test(dataType);
  if (dataType === 'bool') return sizeOf(shape) + SLACK;
  return isNumber ? (sizeOf(shape) * Number(width)) / 8 + SLACK : CHUNK_LIMIT;
}

function refuseEncode(): never {
  throw new Error('chunks are only read');
}

function uint32At(bytes: Uint8Array, at: number): number {
  if (bytes.length < at + 4) throw new Error('the chunk is cut short');
  return new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength).getUint32(at, true);
}

/** Content size that a Zstandard frame states. @throws when it states none, or the bytes are no frame */
function zstdContentSize(bytes: Uint8Array): number {
  if (uint32At(bytes, 0) !== 0xfd2fb528) throw new Error('the chunk is no Zstandard frame');
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const descriptor = bytes[4];
  const single = (descriptor & 0x20) !== 0;
  const sizeFlag = descriptor >> 6;
  const at = 5 + (single ? 0 : 1) + [0, 1, 2, 4][descriptor & 3];
  if (bytes.length < at + 8) return 0;
  if (sizeFlag === 3) return Number(view.getBigUint64(at, true));
  if (sizeFlag === 2) return view.getUint32(at, true);
  if (sizeFlag === 1) return view.getUint16(at, true) + 256;
  return single ? bytes[at] : 0;
}
