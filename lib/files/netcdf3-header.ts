/**
 * The header of a classic NetCDF file, in its three versions: classic, 64-bit offset and 64-bit data.
 *
 * Source: "The NetCDF Classic Format Specification", Unidata, NetCDF User Guide, appendix B (grammar of the header, padding, record sizes).
 */
import type { ArrayVariable, AttributeValue } from './array-file.ts';
import { checkLayout, sizeOf, textOf, unreadable } from './array-slab.ts';
import type { ByteSource } from './byte-source.ts';

export interface ClassicVariable extends ArrayVariable {
  /** first byte of its values */
  readonly begin: number;
  /** its first dimension grows with the records, which all such variables share in turn */
  readonly isRecord: boolean;
  /** bytes of one record, or of all values where it has none; without padding */
  readonly bytes: number;
}

export interface ClassicHeader {
  readonly variables: readonly ClassicVariable[];
  readonly attributes: Readonly<Record<string, AttributeValue>>;
  /** bytes from one record to the next */
  readonly recordSize: number;
  readonly recordCount: number;
}

const TAG = { dimension: 10, variable: 11, attribute: 12 } as const;
const TYPES: readonly (readonly [ArrayVariable['type'], number] | undefined)[] = [
  undefined,
  ['int8', 1],
  ['text', 1],
  ['int16', 2],
  ['int32', 4],
  ['float32', 4],
  ['float64', 8],
  ['uint8', 1],
  ['uint16', 2],
  ['uint32', 4],
  ['int64', 8],
  ['uint64', 8],
];
const FIRST_READ = 64 * 1024;
/** Longest header that is read [bytes]. */
const HEADER_LIMIT = 64 * 1024 * 1024;
/** Number of records of a file whose writer did not know it (all bits set). */
const STREAMING = { classic: 0xffffffff, wide: 2 ** 63 } as const;

class HeaderEnds extends Error {}

/**
 * Reads the header, taking no more of the file than it fills.
 *
 * @throws {Refused} when it is cut short, contradicts itself, or the values it announces do not fit in the file
 */
export async function readClassicHeader(source: ByteSource, file: string): Promise<ClassicHeader> {
  for (let length = FIRST_READ; ; length *= 4) {
    const bytes = await source.read(0, Math.min(length, HEADER_LIMIT));
    try {
      return new HeaderParser(bytes, file, source.size).parse();
    } catch (error) {
      if (!(error instanceof HeaderEnds)) throw error;
      if (bytes.length === source.size) throw broken(file, 'its header is cut short');
      if (bytes.length >= HEADER_LIMIT) throw broken(file, `its header is longer than ${HEADER_LIMIT / 2 ** 20} MB`);
    }
  }
}

interface Dimension {
  readonly name: string;
  readonly length: number;
  readonly isRecord: boolean;
}

/** Everything said of a variable but the number of records. */
interface Declared extends Omit<ClassicVariable, 'shape' | 'bytes'> {
  readonly fixedShape: readonly number[];
  readonly width: number;
}

class HeaderParser {
  private at = 4;
  private readonly view: DataView;
  private readonly version: number;

  constructor(
    private readonly bytes: Uint8Array,
    private readonly file: string,
    private readonly fileSize: number,
  ) {
    this.view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
    this.version = bytes[3];
  }

  parse(): ClassicHeader {
    if (![1, 2, 5].includes(this.version)) throw broken(this.file, `its version byte is ${this.version}, not 1, 2 or 5`);
    const stated = this.version === 5 ? this.count() : this.uint32();
    const dimensions = this.dimensions();
    const attributes = this.attributes();
    const declared = this.variables(dimensions);
    const records = declared.filter(({ isRecord }) => isRecord);
    const recordBytes = records.map(({ fixedShape, width }) => sizeOf(fixedShape) * width);
    const recordSize = records.length === 1 ? recordBytes[0] : recordBytes.reduce((sum, bytes) => sum + padded(bytes), 0);
    const first = Math.min(...records.map(({ begin }) => begin));
    const fitting = recordSize > 0 && records.length > 0 ? Math.floor((this.fileSize - first) / recordSize) : 0;
    const streamed = stated >= (this.version === 5 ? STREAMING.wide : STREAMING.classic);
    const recordCount = streamed ? Math.max(0, fitting) : stated;
    const variables = declared.map(({ fixedShape, width, ...rest }) => ({
      ...rest,
      shape: rest.isRecord ? [recordCount, ...fixedShape] : fixedShape,
      bytes: sizeOf(fixedShape) * width,
    }));
    this.checkEnd(variables, recordSize, recordCount);
    return { variables, attributes, recordSize, recordCount };
  }

  private checkEnd(variables: readonly ClassicVariable[], recordSize: number, recordCount: number): void {
    for (const { name, begin, bytes, isRecord } of variables) {
      const end = isRecord ? begin + (recordCount - 1) * recordSize + bytes : begin + bytes;
      if (bytes === 0 || (isRecord && recordCount === 0)) continue;
      if (!Number.isSafeInteger(end)) throw broken(this.file, `the size of variable "${name}" is beyond any file`);
      if (end > this.fileSize) {
        throw broken(this.file, `variable "${name}" reaches to byte ${end}, and the file ends at byte ${this.fileSize}`);
      }
    }
  }

  private dimensions(): Dimension[] {
    return this.list(TAG.dimension, () => {
      const name = this.name();
      const length = this.count();
      return { name, length, isRecord: length === 0 };
    });
  }

  private attributes(): Record<string, AttributeValue> {
    const attributes: Record<string, AttributeValue> = Object.create(null);
    this.list(TAG.attribute, () => {
      const name = this.name();
      const [type, width] = this.type();
      const length = this.count();
      const values = this.take(length * width);
      this.at += padded(length * width) - length * width;
      attributes[name] = type === 'text' ? textOf(values) : classicNumbers(values, type, length);
    });
    return attributes;
  }

  private variables(dimensions: readonly Dimension[]): Declared[] {
    const variables = this.list(TAG.variable, () => this.variable(dimensions));
    checkLayout(this.file, variables.length, Math.max(0, ...variables.map(({ dimensions: names }) => names.length)));
    return variables;
  }

  private variable(dimensions: readonly Dimension[]): Declared {
    const name = this.name();
    const rank = this.count();
    this.need(rank * 4);
    const axes = Array.from({ length: rank }, () => this.dimension(dimensions, name));
    const attributes = this.attributes();
    const [type, width] = this.type();
    this.count();
    const begin = this.version === 1 ? this.uint32() : this.uint64();
    const isRecord = axes[0]?.isRecord ?? false;
    if (axes.slice(1).some((axis) => axis.isRecord))
      throw broken(this.file, `variable "${name}" has the record dimension not in first place`);
    const fixedShape = axes.slice(isRecord ? 1 : 0).map(({ length }) => length);
    return { name, dimensions: axes.map((axis) => axis.name), type, chunk: null, attributes, begin, isRecord, fixedShape, width };
  }

  private dimension(dimensions: readonly Dimension[], variable: string): Dimension {
    const id = this.count();
    if (id >= dimensions.length) throw broken(this.file, `variable "${variable}" names dimension ${id} of ${dimensions.length}`);
    return dimensions[id];
  }

  private list<T>(tag: number, item: () => T): T[] {
    const found = this.uint32();
    const length = this.count();
    if (found !== tag && !(found === 0 && length === 0)) throw broken(this.file, `its header has ${found} where a list should begin`);
    this.need(length * 8);
    return Array.from({ length }, item);
  }

  private name(): string {
    const length = this.count();
    const name = textOf(this.take(length));
    this.at += padded(length) - length;
    return name;
  }

  private type(): readonly [ArrayVariable['type'], number] {
    const code = this.uint32();
    const type = TYPES[code];
    if (type === undefined) throw broken(this.file, `it has a number type ${code}, which is none`);
    return type;
  }

  private count(): number {
    return this.version === 5 ? this.uint64() : this.uint32();
  }

  private uint32(): number {
    if (this.at + 4 > this.bytes.length) throw new HeaderEnds();
    this.at += 4;
    return this.view.getUint32(this.at - 4);
  }

  private uint64(): number {
    const high = this.uint32();
    return high * 2 ** 32 + this.uint32();
  }

  private take(length: number): Uint8Array {
    this.need(length);
    this.at += length;
    return this.bytes.subarray(this.at - length, this.at);
  }

  /** A length that the file cannot hold is a fault; one that only the bytes at hand cannot hold asks for more. */
  private need(length: number): void {
    if (this.at + length > this.fileSize) throw broken(this.file, 'its header announces more than the file holds');
    if (this.at + length > this.bytes.length) throw new HeaderEnds();
  }
}

/** Rounded up to whole words of four bytes. */
function padded(bytes: number): number {
  return Math.ceil(bytes / 4) * 4;
}

function broken(file: string, what: string): Error {
  return unreadable(file, `is not a sound NetCDF file: ${what}`, 'Copy or download it again, and check it with a NetCDF tool.');
}

/** Numbers of big-endian bytes, as doubles. */
export function classicNumbers(bytes: Uint8Array, type: ArrayVariable['type'], length: number): number[] {
  const into = new Float64Array(length);
  decodeBigEndian(bytes, 0, type, into, 0, length);
  return Array.from(into);
}

/** Decodes `length` big-endian numbers at byte `at` into `into` from place `place`. */
export function decodeBigEndian(
  bytes: Uint8Array,
  at: number,
  type: ArrayVariable['type'],
  into: Float64Array,
  place: number,
  length: number,
): void {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  if (type === 'float32') for (let k = 0; k < length; k++) into[place + k] = view.getFloat32(at + 4 * k);
  else if (type === 'int16') for (let k = 0; k < length; k++) into[place + k] = view.getInt16(at + 2 * k);
  else if (type === 'float64') for (let k = 0; k < length; k++) into[place + k] = view.getFloat64(at + 8 * k);
  else if (type === 'int32') for (let k = 0; k < length; k++) into[place + k] = view.getInt32(at + 4 * k);
  else if (type === 'int8') for (let k = 0; k < length; k++) into[place + k] = view.getInt8(at + k);
  else if (type === 'uint16') for (let k = 0; k < length; k++) into[place + k] = view.getUint16(at + 2 * k);
  else if (type === 'uint32') for (let k = 0; k < length; k++) into[place + k] = view.getUint32(at + 4 * k);
  else if (type === 'int64') for (let k = 0; k < length; k++) into[place + k] = Number(view.getBigInt64(at + 8 * k));
  else if (type === 'uint64') for (let k = 0; k < length; k++) into[place + k] = Number(view.getBigUint64(at + 8 * k));
  else for (let k = 0; k < length; k++) into[place + k] = bytes[at + k];
}
