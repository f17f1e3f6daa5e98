/** NetCDF-4 and other HDF5 files, read by slices from disk: described by the HDF5 library in a thread of its own, plain chunks read directly. */
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { ArrayFile, AttributeValue } from './array-file.ts';
import { checkSlab, runsOf, unreadable, variableOf, variableUnreadable } from './array-slab.ts';
import { openBytes } from './byte-source.ts';
import { type FindingList, shown } from './finding-list.ts';
import { ChunkReader } from './hdf5-chunks.ts';
import { Hdf5Handle } from './hdf5-host.ts';
import type { Hdf5Contents, Hdf5Variable } from './hdf5-messages.ts';
import type { ImportFile } from './reading.ts';

const SIGNATURE = [0x89, 0x48, 0x44, 0x46, 0x0d, 0x0a, 0x1a, 0x0a];
/** The signature may stand behind a block of the writer's own, at these bytes. Source: HDF5 file format specification, section II.A. */
const SIGNATURE_PLACES = [0, 512, 1024, 2048, 4096, 8192];

/** True when a file has the HDF5 signature where it may stand. */
export async function findHdf5(file: ImportFile): Promise<boolean> {
  const source = await openBytes(file);
  try {
    for (const place of SIGNATURE_PLACES) {
      if (place + SIGNATURE.length > source.size) return false;
      const bytes = await source.read(place, SIGNATURE.length);
      if (SIGNATURE.every((byte, k) => bytes[k] === byte)) return true;
    }
    return false;
  } finally {
    await source.close();
  }
}

/**
 * Opens a NetCDF-4 file.
 *
 * @throws {Refused} when it is damaged or cut short, or has more variables than are read
 */
export async function openNetcdf4(file: ImportFile, findings?: FindingList): Promise<ArrayFile> {
  const onDisk = file.path === undefined ? await writeAside(file) : { path: file.path, remove: async () => undefined };
  const handle = new Hdf5Handle(onDisk.path);
  try {
    const contents = await handle.open();
    const chunks = await ChunkReader.open(onDisk.path);
    noteLeftOut(file.name, contents, findings);
    return new Netcdf4File(file.name, handle, chunks, contents, onDisk.remove);
  } catch (error) {
    await handle.close();
    await onDisk.remove();
    const reason = error instanceof Error ? error.message : String(error);
    const advice = 'Copy or download it again, and check it with a NetCDF tool.';
    throw unreadable(file.name, `cannot be read as NetCDF-4 (HDF5): ${reason}`, advice, undefined, error);
  }
}

function noteLeftOut(file: string, { leftOut, variables }: Hdf5Contents, findings?: FindingList): void {
  for (const name of leftOut) {
    findings?.note({
      code: 'link-left-out',
      message: `"${shown(name)}" is a link to another place or file and is left out.`,
      file,
      column: name,
    });
  }
  for (const { name, fault } of variables) {
    if (fault === null) continue;
    findings?.note({ code: 'variable-unreadable', message: `Variable "${shown(name)}" cannot be read: ${fault}.`, file, column: name });
  }
}

/** The library opens files by path: one that is only in memory is put in the system's temporary folder until it is closed. */
async function writeAside(file: ImportFile) {
  const folder = await mkdtemp(join(tmpdir(), 'tillwater-'));
  const path = join(folder, 'file.nc');
  await writeFile(path, file.bytes);
  return { path, remove: () => rm(folder, { recursive: true, force: true }) };
}

/** Lengths of the part of a slab that is stored; null when all of it is. */
function storedPart({ storedShape }: Hdf5Variable, start: readonly number[], count: readonly number[]): number[] | null {
  const stored = count.map((length, k) => Math.max(0, Math.min(length, storedShape[k] - start[k])));
  return stored.every((length, k) => length === count[k]) ? null : stored;
}

/** Puts a smaller slab at the beginning of a larger one. */
function place<T extends Float64Array | string[]>(part: T, partCount: readonly number[], into: T, count: readonly number[]): void {
  for (const { from, into: first, length } of runsOf(
    count,
    count.map(() => 0),
    partCount,
  )) {
    for (let k = 0; k < length; k++) into[from + k] = part[first + k];
  }
}

/** What stands where nothing was written. Source of the defaults: netcdf.h of NetCDF-C, NC_FILL_BYTE and following. */
function fillOf({ type, attributes }: Hdf5Variable): number {
  const stated = attributes._FillValue;
  return Array.isArray(stated) && typeof stated[0] === 'number' ? stated[0] : (DEFAULT_FILL[type] ?? Number.NaN);
}

const DEFAULT_FILL: Partial<Record<Hdf5Variable['type'], number>> = {
  int8: -127,
  uint8: 255,
  int16: -32767,
  uint16: 65535,
  int32: -2147483647,
  uint32: 4294967295,
  int64: Number(-9223372036854775806n),
  uint64: Number(18446744073709551614n),
  float32: Math.fround(9.969209968386869e36),
  float64: 9.969209968386869e36,
};

class Netcdf4File implements ArrayFile {
  readonly format = 'netcdf-4' as const;
  readonly variables: readonly Hdf5Variable[];
  readonly attributes: Readonly<Record<string, AttributeValue>>;

  constructor(
    private readonly name: string,
    private readonly handle: Hdf5Handle,
    private readonly chunks: ChunkReader,
    contents: Hdf5Contents,
    private readonly remove: () => Promise<unknown>,
  ) {
    this.variables = contents.variables;
    this.attributes = contents.attributes;
  }

  async read(name: string, start: readonly number[], count: readonly number[]): Promise<Float64Array> {
    const variable = variableOf(this.variables, name);
    const size = checkSlab(variable, start, count);
    this.checkReadable(variable);
    if (variable.type === 'text') throw variableUnreadable(this.name, name, 'holds text, not numbers', 'Read it as text.');
    if (size === 0) return new Float64Array(0);
    return this.told(variable, async () => {
      const stored = storedPart(variable, start, count);
      if (stored === null) return this.readStored(variable, start, count);
      const values = new Float64Array(size).fill(fillOf(variable));
      if (!stored.includes(0)) place(await this.readStored(variable, start, stored), stored, values, count);
      return values;
    });
  }

  async readText(name: string, start: readonly number[], count: readonly number[]): Promise<string[]> {
    const variable = variableOf(this.variables, name);
    const size = checkSlab(variable, start, count);
    this.checkReadable(variable);
    if (variable.type !== 'text') throw variableUnreadable(this.name, name, 'holds numbers, not text', 'Read it as numbers.');
    if (size === 0) return [];
    return this.told(variable, async () => {
      const stored = storedPart(variable, start, count);
      if (stored === null) return this.handle.readText(variable.path, start, count);
      const texts = new Array<string>(size).fill('');
      if (!stored.includes(0)) place(await this.handle.readText(variable.path, start, stored), stored, texts, count);
      return texts;
    });
  }

  async close(): Promise<void> {
    await this.handle.close();
    await this.chunks.close();
    await this.remove();
  }

  private async readStored(variable: Hdf5Variable, start: readonly number[], count: readonly number[]): Promise<Float64Array> {
    return (await this.chunks.read(variable, start, count)) ?? this.handle.read(variable.path, start, count);
  }

  private checkReadable({ name, fault }: Hdf5Variable): void {
    if (fault === null) return;
    throw variableUnreadable(
      this.name,
      name,
      `cannot be read: ${fault}`,
      'Write it again as plain numbers, packed by deflate or not at all.',
    );
  }

  private async told<T>(variable: Hdf5Variable, work: () => Promise<T>): Promise<T> {
    try {
      return await work();
    } catch (error) {
      if (error instanceof ReferenceError || error instanceof TypeError) throw error;
      const reason = error instanceof Error ? error.message : String(error);
      throw variableUnreadable(this.name, variable.name, `cannot be read: ${reason}`, 'Copy or download the file again.', error);
    }
  }
}
