/** Classic NetCDF files (classic, 64-bit offset, 64-bit data), read by slices: only the records and rows asked for are taken from disk. */
import type { ArrayFile, AttributeValue } from './array-file.ts';
import { checkSlab, runsOf, sizeOf, textOf, unreadable, variableOf, variableUnreadable, widthOf } from './array-slab.ts';
import { type ByteSource, openBytes } from './byte-source.ts';
import { type ClassicHeader, type ClassicVariable, decodeBigEndian, readClassicHeader } from './netcdf3-header.ts';
import type { ImportFile } from './reading.ts';

/** Stretches closer than this are read in one go [bytes]. */
const NEAR = 64 * 1024;
/** Most bytes read in one go. */
const SPAN_LIMIT = 8 * 1024 * 1024;

/** True when bytes start like a classic NetCDF file. */
export function isClassicNetcdf(head: Uint8Array): boolean {
  return head.length >= 4 && head[0] === 0x43 && head[1] === 0x44 && head[2] === 0x46 && [1, 2, 5].includes(head[3]);
}

/**
 * Opens a classic NetCDF file.
 *
 * @throws {Refused} when its header is damaged or the file ends before its values
 */
export async function openClassicNetcdf(file: ImportFile): Promise<ArrayFile> {
  const source = await openBytes(file);
  try {
    return new ClassicFile(file.name, source, await readClassicHeader(source, file.name));
  } catch (error) {
    await source.close();
    throw error instanceof RangeError
      ? unreadable(file.name, 'has a header that cannot be read', 'Download it again.', undefined, error)
      : error;
  }
}

/** A stretch of values on disk and where they belong. */
interface Stretch {
  /** first byte */
  readonly offset: number;
  readonly into: number;
  readonly length: number;
}

type Take = (bytes: Uint8Array, at: number, into: number, length: number) => void;

class ClassicFile implements ArrayFile {
  readonly format = 'netcdf-3' as const;
  readonly variables: readonly ClassicVariable[];
  readonly attributes: Readonly<Record<string, AttributeValue>>;

  constructor(
    private readonly name: string,
    private readonly source: ByteSource,
    private readonly header: ClassicHeader,
  ) {
    this.variables = header.variables;
    this.attributes = header.attributes;
  }

  async read(name: string, start: readonly number[], count: readonly number[]): Promise<Float64Array> {
    const variable = variableOf(this.variables, name);
    const values = new Float64Array(checkSlab(variable, start, count));
    await this.eachStretch(variable, start, count, (bytes, at, into, length) => {
      decodeBigEndian(bytes, at, variable.type, values, into, length);
    });
    return values;
  }

  async readText(name: string, start: readonly number[], count: readonly number[]): Promise<string[]> {
    const variable = variableOf(this.variables, name);
    if (variable.type !== 'text') throw variableUnreadable(this.name, name, 'holds numbers, not text', 'Read it as numbers.');
    const characters = new Uint8Array(checkSlab(variable, start, count));
    await this.eachStretch(variable, start, count, (bytes, at, into, length) => {
      characters.set(bytes.subarray(at, at + length), into);
    });
    const length = count.at(-1) ?? 1;
    const texts = sizeOf(count.slice(0, -1));
    return Array.from({ length: texts }, (_, k) => textOf(characters.subarray(k * length, (k + 1) * length)));
  }

  async close(): Promise<void> {
    await this.source.close();
  }

  /** Reads the stretches of a slab, those that lie near one another together. */
  private async eachStretch(variable: ClassicVariable, start: readonly number[], count: readonly number[], take: Take): Promise<void> {
    const width = widthOf(variable.type);
    let near: Stretch[] = [];
    let end = 0;
    for (const stretch of this.stretches(variable, start, count, width)) {
      const reach = stretch.offset + stretch.length * width;
      if (near.length > 0 && (stretch.offset - end > NEAR || reach - near[0].offset > SPAN_LIMIT)) {
        await this.readStretches(variable, near, end, take);
        near = [];
      }
      near.push(stretch);
      end = reach;
    }
    if (near.length > 0) await this.readStretches(variable, near, end, take);
  }

  private async readStretches(variable: ClassicVariable, stretches: readonly Stretch[], end: number, take: Take): Promise<void> {
    const first = stretches[0].offset;
    const bytes = await this.source.read(first, end - first);
    if (bytes.length < end - first) throw variableUnreadable(this.name, variable.name, 'is cut short', 'Copy or download the file again.');
    for (const { offset, into, length } of stretches) take(bytes, offset - first, into, length);
  }

  private *stretches(
    { shape, begin, isRecord }: ClassicVariable,
    start: readonly number[],
    count: readonly number[],
    width: number,
  ): Generator<Stretch> {
    const records = isRecord ? count[0] : 1;
    const axis = isRecord ? 1 : 0;
    const perRecord = sizeOf(count.slice(axis));
    for (let record = 0; record < records; record++) {
      const offset = isRecord ? begin + (start[0] + record) * this.header.recordSize : begin;
      for (const { from, into, length } of runsOf(shape.slice(axis), start.slice(axis), count.slice(axis))) {
        yield { offset: offset + from * width, into: record * perRecord + into, length };
      }
    }
  }
}
