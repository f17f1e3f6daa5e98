/** Zarr stores, versions 2 and 3, in a zip archive or a folder: arrays are read chunk by chunk, and what is not stored is the fill value. */
import { type DataType, isZarritaError, open, UnknownCodecError, type Array as ZarrArray } from 'zarrita';
import { Refused } from '../base/errors.ts';
import { type Block, copyBlock, eachBlock, isWantedAgain } from './array-block.ts';
import type { ArrayFile, ArrayVariable, AttributeValue } from './array-file.ts';
import { CHUNK_LIMIT, checkLayout, checkSlab, sizeOf, unreadable, variableOf, variableUnreadable, widthOf } from './array-slab.ts';
import { BlockCache } from './block-cache.ts';
import type { FindingList } from './finding-list.ts';
import { installBoundedCodecs } from './zarr-codecs.ts';
import { type DescribedArray, describeV2, describeV3, type JsonObject, parseZarrJson } from './zarr-metadata.ts';
import type { ZarrPieces } from './zarr-store.ts';

/** Largest metadata document [bytes]. */
const METADATA_LIMIT = 16 * 1024 * 1024;
/** Chunks decoded at a time, and the bytes they may hold together. */
const IN_FLIGHT = 4;
const IN_FLIGHT_BYTES = 64 * 1024 * 1024;

/**
 * Opens the arrays of a Zarr store.
 *
 * An array that cannot be understood is noted and kept as one that cannot be read; a store without any array is refused.
 * @throws {Refused} when the store has no readable description of an array
 */
export async function openZarr(file: string, pieces: ZarrPieces, findings?: FindingList): Promise<ArrayFile> {
  installBoundedCodecs();
  try {
    const documents = await readDocuments(file, pieces);
    const arrays = await openArrays(file, documents, pieces, findings);
    if (arrays.length === 0) throw unreadable(file, 'is a Zarr store without arrays', 'Send the store with its arrays.');
    const attributes = groupAttributes(documents);
    return new ZarrFile(file, arrays, attributes, pieces);
  } catch (error) {
    await pieces.close();
    throw error;
  }
}

interface OpenedArray {
  readonly variable: ArrayVariable;
  readonly described: DescribedArray | null;
  readonly array: ZarrArray<DataType> | null;
  /** folder of the array, with a slash at its end unless it is the root */
  readonly prefix: string;
  /** why it cannot be read */
  readonly fault: string | null;
}

interface Documents {
  /** folder of the root, empty or with a slash at its end */
  readonly root: string;
  readonly byKey: ReadonlyMap<string, JsonObject>;
}

async function readDocuments(file: string, pieces: ZarrPieces): Promise<Documents> {
  const keys = pieces.metadataKeys.filter((key) => !key.split('/').includes('__MACOSX'));
  const nodes = keys.filter((key) => !key.endsWith('.zattrs'));
  const root = commonFolder(nodes);
  checkLayout(file, keys.filter((key) => key.endsWith('.zarray')).length, 0);
  if (keys.length > 4 * METADATA_COUNT)
    throw unreadable(file, `has ${keys.length} metadata documents`, 'Send fewer arrays.', `${4 * METADATA_COUNT}`);
  const byKey = new Map<string, JsonObject>();
  const consolidated = await readDocument(pieces, `${root}.zmetadata`);
  for (const [key, value] of Object.entries((consolidated?.metadata as JsonObject | undefined) ?? {})) {
    if (typeof value === 'object' && value !== null) byKey.set(root + key, value as JsonObject);
  }
  for (const key of keys) {
    if (byKey.has(key) || key.endsWith('.zmetadata')) continue;
    const document = await readDocument(pieces, key);
    if (document !== null) byKey.set(key, document);
  }
  return { root, byKey };
}

const METADATA_COUNT = 5000;

/** A metadata document; null where it is absent or no JSON. */
async function readDocument(pieces: ZarrPieces, key: string): Promise<JsonObject | null> {
  const bytes = await pieces.get(key);
  if (bytes === undefined || bytes.length > METADATA_LIMIT) return null;
  try {
    return parseZarrJson(new TextDecoder().decode(bytes));
  } catch {
    return null;
  }
}

/** The folder that holds all of these keys: "a/b/" or "". */
function commonFolder(keys: readonly string[]): string {
  const folders = keys.map((key) => key.slice(0, key.lastIndexOf('/') + 1));
  let common = folders[0] ?? '';
  for (const folder of folders) {
    while (!folder.startsWith(common)) common = common.slice(0, common.slice(0, -1).lastIndexOf('/') + 1);
  }
  return common;
}

async function openArrays(file: string, { root, byKey }: Documents, pieces: ZarrPieces, findings?: FindingList): Promise<OpenedArray[]> {
  const arrays: OpenedArray[] = [];
  for (const [key, document] of byKey) {
    const isV2 = key.endsWith('.zarray');
    if (!isV2 && !(key.endsWith('zarr.json') && document.node_type === 'array')) continue;
    const prefix = key.slice(0, key.lastIndexOf('/') + 1);
    const path = prefix.slice(root.length, -1);
    const name = path === '' ? file.replace(/^.*\//, '').replace(/(\.zarr)?(\.zip)?$/i, '') : path;
    const opened = await openArray(name, prefix, document, isV2 ? (byKey.get(`${prefix}.zattrs`) ?? {}) : null, pieces);
    if (opened.fault !== null) {
      findings?.note({ code: 'variable-unreadable', message: `Array "${name}" cannot be read: ${opened.fault}.`, file, column: name });
    }
    arrays.push(opened);
  }
  checkLayout(file, arrays.length, Math.max(0, ...arrays.map(({ variable }) => variable.shape.length)));
  return arrays;
}

async function openArray(
  name: string,
  prefix: string,
  document: JsonObject,
  attributes: JsonObject | null,
  pieces: ZarrPieces,
): Promise<OpenedArray> {
  const unread = { name, dimensions: [], shape: [], type: 'other', chunk: null, attributes: {} } as const;
  try {
    const described = attributes === null ? describeV3(name, document) : describeV2(name, document, attributes);
    const { dimensions, shape, chunk, type } = described;
    const variable: ArrayVariable = { name, dimensions, shape, type, chunk, attributes: described.attributes };
    const fault = faultOf(described, document);
    if (fault !== null) return { variable: { ...variable, type: 'other' }, described, array: null, prefix, fault };
    const array = await (attributes === null ? open.v3 : open.v2)(arrayStore(prefix, document, attributes, pieces), { kind: 'array' });
    return { variable, described, array, prefix, fault: null };
  } catch (error) {
    if (!(error instanceof SyntaxError || isZarritaError(error) || error instanceof TypeError)) throw error;
    return { variable: unread, described: null, array: null, prefix, fault: error.message };
  }
}

function faultOf({ type, chunk, shape }: DescribedArray, document: JsonObject): string | null {
  if (type === 'other') return `its values are of type ${JSON.stringify(document.dtype ?? document.data_type)}, which is not read`;
  if (chunk === null) return 'its chunks are not of one size';
  if (chunk.length !== shape.length || chunk.some((length) => length === 0)) return 'its chunks do not fit its shape';
  if (sizeOf(chunk) * widthOf(type) > CHUNK_LIMIT) return `its chunks are larger than ${CHUNK_LIMIT / 2 ** 20} MB`;
  return null;
}

/** The pieces of one array as a store of its own, so that no name of the file can be taken for a path or an address. */
function arrayStore(prefix: string, document: JsonObject, attributes: JsonObject | null, pieces: ZarrPieces) {
  const encoder = new TextEncoder();
  const metadata: Record<string, JsonObject | undefined> =
    attributes === null ? { '/zarr.json': document } : { '/.zarray': document, '/.zattrs': attributes };
  return {
    async get(key: string): Promise<Uint8Array | undefined> {
      const told = metadata[key];
      return told === undefined ? pieces.get(prefix + key.slice(1)) : encoder.encode(JSON.stringify(told));
    },
    async getRange(key: string, range: { offset: number; length: number } | { suffixLength: number }): Promise<Uint8Array | undefined> {
      const path = prefix + key.slice(1);
      if ('suffixLength' in range) return pieces.getRange(path, -range.suffixLength, 0);
      if (range.length > CHUNK_LIMIT) throw new Error('a part of the shard is larger than any chunk');
      return pieces.getRange(path, range.offset, range.offset + range.length);
    },
  };
}

function groupAttributes({ root, byKey }: Documents): Record<string, AttributeValue> {
  const attributes = byKey.get(`${root}.zattrs`) ?? byKey.get(`${root}zarr.json`)?.attributes ?? {};
  const described = describeV2('', { shape: [], chunks: [], dtype: '|u1', fill_value: null }, attributes as JsonObject);
  return { ...described.attributes };
}

/** A chunk's values and the distances between neighbours along each dimension. */
interface DecodedChunk {
  readonly data: unknown;
  readonly stride: readonly number[];
}

class ZarrFile implements ArrayFile {
  readonly format = 'zarr' as const;
  readonly variables: readonly ArrayVariable[];
  private readonly cache = new BlockCache<DecodedChunk>();

  constructor(
    private readonly name: string,
    private readonly arrays: readonly OpenedArray[],
    readonly attributes: Readonly<Record<string, AttributeValue>>,
    private readonly pieces: ZarrPieces,
  ) {
    this.variables = arrays.map(({ variable }) => variable);
  }

  async read(name: string, start: readonly number[], count: readonly number[]): Promise<Float64Array> {
    const variable = variableOf(this.variables, name);
    const opened = this.readable(name);
    if (variable.type === 'text') throw variableUnreadable(this.name, name, 'holds text, not numbers', 'Read it as text.');
    const values = new Float64Array(checkSlab(variable, start, count));
    await this.eachChunk(opened, start, count, (block, chunk) => {
      if (chunk === null) copyBlock(block, null, values, opened.described.fill);
      else copyBlock(block, chunk, values, 0);
    });
    return values;
  }

  async readText(name: string, start: readonly number[], count: readonly number[]): Promise<string[]> {
    const variable = variableOf(this.variables, name);
    const opened = this.readable(name);
    if (variable.type !== 'text') throw variableUnreadable(this.name, name, 'holds numbers, not text', 'Read it as numbers.');
    const texts = new Array<string>(checkSlab(variable, start, count)).fill('');
    await this.eachChunk(opened, start, count, (block, chunk) => {
      if (chunk !== null) copyBlock(block, chunk, texts, '');
    });
    return texts;
  }

  async filledWith(name: string, start: readonly number[], count: readonly number[]): Promise<number | null> {
    checkSlab(variableOf(this.variables, name), start, count);
    const { described, array, prefix, variable } = this.readable(name);
    if (described.isSharded || variable.type === 'text') return null;
    for (const { place } of eachBlock(array.chunks, start, count)) {
      if (await this.pieces.has(prefix + described.chunkKey(place))) return null;
    }
    return described.fill;
  }

  async close(): Promise<void> {
    this.cache.dismiss();
    await this.pieces.close();
  }

  private readable(name: string): OpenedArray & { described: DescribedArray; array: ZarrArray<DataType> } {
    const opened = this.arrays.find(({ variable }) => variable.name === name) as OpenedArray;
    if (opened.array === null || opened.described === null) {
      throw variableUnreadable(
        this.name,
        name,
        `cannot be read: ${opened.fault}`,
        'Write it again as plain numbers with a common compressor.',
      );
    }
    return opened as OpenedArray & { described: DescribedArray; array: ZarrArray<DataType> };
  }

  private async eachChunk(
    opened: OpenedArray & { described: DescribedArray; array: ZarrArray<DataType> },
    start: readonly number[],
    count: readonly number[],
    take: (block: Block, chunk: DecodedChunk | null) => void,
  ): Promise<void> {
    const { described, array, prefix, variable } = opened;
    const chunkShape = array.chunks;
    const bytes = sizeOf(chunkShape) * Math.max(1, widthOf(described.type));
    const together = Math.max(1, Math.min(IN_FLIGHT, Math.floor(IN_FLIGHT_BYTES / bytes)));
    const one = async (block: Block) => {
      if (!described.isSharded && !(await this.pieces.has(prefix + described.chunkKey(block.place)))) return take(block, null);
      const key = `${prefix} ${block.place.join()}`;
      const chunk = await this.cache.get(
        key,
        bytes,
        () => this.decoded(variable.name, () => array.getChunk([...block.place])),
        isWantedAgain(block, chunkShape, variable.shape),
      );
      if ((chunk.data as ArrayLike<unknown>).length < sizeOf(chunkShape)) {
        throw variableUnreadable(this.name, variable.name, 'has a chunk that is cut short', 'Copy or download the store again.');
      }
      take(block, chunk);
    };
    let flight: Promise<void>[] = [];
    for (const block of eachBlock(chunkShape, start, count)) {
      flight.push(one(block));
      if (flight.length < together) continue;
      await Promise.all(flight);
      flight = [];
    }
    await Promise.all(flight);
  }

  private async decoded<T>(name: string, work: () => Promise<T>): Promise<T> {
    try {
      return await work();
    } catch (error) {
      if (error instanceof Refused) throw error;
      if (error instanceof UnknownCodecError) {
        const advice = 'Write it again with blosc, zstd, gzip or no compressor.';
        throw variableUnreadable(this.name, name, `is packed in a way that is not read (${error.message})`, advice, error);
      }
      const cause = error instanceof Error && error.cause instanceof Error ? `${error.message}: ${error.cause.message}` : String(error);
      throw variableUnreadable(this.name, name, `has a damaged chunk (${cause})`, 'Copy or download the store again.', error);
    }
  }
}
