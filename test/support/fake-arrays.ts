/** Array files held in memory, for tests of what arrays mean. */
import type { ArrayFile, ArrayVariable, AttributeValue } from '../../lib/files/array-file.ts';
import type { OpenArray } from '../../lib/files/grid-files.ts';
import { readGridWeather } from '../../lib/files/grid-weather.ts';
import type { ImportContext, ImportOptions, ImportReading, StagedBlock } from '../../lib/files/reading.ts';
import { importContext } from './import-context.ts';

export interface FakeVariable {
  readonly dimensions: readonly string[];
  readonly shape: readonly number[];
  readonly data: ArrayLike<number> | readonly string[];
  readonly attributes?: Record<string, AttributeValue>;
  readonly type?: ArrayVariable['type'];
  readonly chunk?: readonly number[];
}

/** Reads that were asked of a fake file. */
export interface FakeReads {
  readonly variable: string;
  readonly start: readonly number[];
  readonly count: readonly number[];
}

export function fakeArrays(
  variables: Record<string, FakeVariable>,
  over: { format?: ArrayFile['format']; attributes?: Record<string, AttributeValue>; reads?: FakeReads[] } = {},
): ArrayFile {
  const list: ArrayVariable[] = Object.entries(variables).map(([name, { dimensions, shape, attributes = {}, type, chunk, data }]) => ({
    ...{ name, dimensions, shape, attributes, chunk: chunk ?? null },
    type: type ?? (typeof data[0] === 'string' ? 'text' : 'float64'),
  }));
  function slab<T>(name: string, start: readonly number[], count: readonly number[]): T[] {
    const { shape, data } = variables[name];
    const total = count.reduce((product, length) => product * length, 1);
    return Array.from({ length: total }, (_, flat) => {
      let [rest, place, stride] = [flat, 0, 1];
      for (let i = shape.length - 1; i >= 0; i--) {
        const index = start[i] + (rest % count[i]);
        if (index >= shape[i]) throw new RangeError(`${name}: ${start.join(',')} + ${count.join(',')} outside ${shape.join(',')}`);
        rest = Math.floor(rest / count[i]);
        place += index * stride;
        stride *= shape[i];
      }
      return data[place] as T;
    });
  }
  return {
    format: over.format ?? 'netcdf-4',
    variables: list,
    attributes: over.attributes ?? {},
    async read(variable, start, count) {
      over.reads?.push({ variable, start, count });
      return Float64Array.from(slab<number>(variable, start, count));
    },
    async readText(variable, start, count) {
      return slab<string>(variable, start, count);
    },
    async close() {},
  };
}

/** Reads fake files, by name, as an import. */
export async function readFakes(
  files: Record<string, ArrayFile>,
  options: ImportOptions = {},
  context: Partial<ImportContext> = {},
): Promise<ImportReading> {
  const open: OpenArray = async (file) => files[file.name];
  const given = Object.keys(files).map((name) => ({ name, bytes: new Uint8Array(0) }));
  return readGridWeather(given, options, importContext({ timeZone: 'UTC', ...context }), () => undefined, undefined, open);
}

/** Latitude, longitude and time of a small grid. */
export function gridAxes(
  latitudes: readonly number[],
  longitudes: readonly number[],
  times: readonly number[],
  timeAttributes: Record<string, AttributeValue>,
): Record<string, FakeVariable> {
  return {
    lat: {
      dimensions: ['lat'],
      shape: [latitudes.length],
      data: latitudes,
      attributes: { units: 'degrees_north', standard_name: 'latitude' },
    },
    lon: {
      dimensions: ['lon'],
      shape: [longitudes.length],
      data: longitudes,
      attributes: { units: 'degrees_east', standard_name: 'longitude' },
    },
    time: { dimensions: ['time'], shape: [times.length], data: times, attributes: timeAttributes },
  };
}

/** A field [time × lat × lon] from a function of its indices. */
export function gridField(
  counts: readonly [number, number, number],
  attributes: Record<string, AttributeValue>,
  value: (time: number, row: number, column: number) => number,
): FakeVariable {
  const [times, rows, columns] = counts;
  const data = new Float64Array(times * rows * columns);
  for (let t = 0, i = 0; t < times; t++) for (let r = 0; r < rows; r++) for (let c = 0; c < columns; c++) data[i++] = value(t, r, c);
  return { dimensions: ['time', 'lat', 'lon'], shape: counts, data, attributes };
}

export function blocksOf(reading: ImportReading): readonly StagedBlock[] {
  return reading.staged.kind === 'weather' ? reading.staged.blocks : [];
}

/** One value of the staged blocks; NaN when it is missing or not there. */
export function stagedValue(reading: ImportReading, variable: string, code: string, date: string, step = 0): number {
  const block = blocksOf(reading).find((candidate) => candidate.variable === variable && candidate.month === `${date.slice(0, 8)}01`);
  const site = block ? block.siteCodes.indexOf(code) : -1;
  if (!block || site < 0) return Number.NaN;
  const stride = block.values.length / block.siteCodes.length;
  return block.values[site * stride + (Number(date.slice(8)) - 1) * block.steps + step];
}

export function findingCodes(reading: ImportReading): string[] {
  return reading.findings.map(({ code }) => code);
}
