/** Stations of which a file stores nothing: told without reading, and left out only where what stands for them means missing. */
import { describe, expect, it } from 'vitest';
import type { ArrayFile } from '../../lib/files/array-file.ts';
import { fileOnDisk } from '../../lib/files/file-on-disk.ts';
import type { Series } from '../../lib/files/grid-series.ts';
import type { CellsOfFile } from '../../lib/files/grid-slab.ts';
import { tilesOf } from '../../lib/files/grid-tiles.ts';
import { openArrayFile } from '../../lib/files/open-array-file.ts';
import { type FakeReads, fakeArrays, findingCodes, readFakes, stagedValue } from '../support/fake-arrays.ts';

const [STATIONS, STEPS] = [12, 100];
const STORED = 7;

/** A series of stations of which one is stored; `filled` stands for the others, and the code for missing is -9. */
function seriesOf(filledWith: ArrayFile['filledWith']): { series: Series; cellsOf: () => CellsOfFile } {
  const variable = {
    name: 'pr',
    dimensions: ['site', 'time'],
    shape: [STATIONS, STEPS],
    type: 'float32',
    chunk: [1, STEPS],
    attributes: {},
  };
  const field = { file: { arrays: { filledWith } }, variable, dimensions: { site: 0, row: -1, column: -1, time: 1 } };
  const packing = {
    scale: 1,
    offset: 0,
    fills: Float64Array.of(-9),
    validLow: Number.NEGATIVE_INFINITY,
    validHigh: Number.POSITIVE_INFINITY,
  };
  const input = { fields: [field], unpackings: [{ packing }] };
  const series = { inputs: [input], steps: { runs: [{ piece: 0, first: 0, count: STEPS }] } } as unknown as Series;
  const rows = Int32Array.from({ length: STATIONS }, (_, k) => k);
  const cells = { rows, columns: new Int32Array(STATIONS), list: true } as unknown as CellsOfFile;
  return { series, cellsOf: () => cells };
}

function parts(filledWith: ArrayFile['filledWith']) {
  const { series, cellsOf } = seriesOf(filledWith);
  return tilesOf(series, cellsOf, STATIONS, 5);
}

describe('stations of which nothing is stored', () => {
  const storedBut =
    (filled: number): ArrayFile['filledWith'] =>
    async (_, [site], [count]) =>
      STORED >= site && STORED < site + count ? null : filled;

  it.each([-9, Number.NaN])('make parts of their own where %d stands for them, which means missing', async (filled) => {
    expect(await parts(storedBut(filled))).toEqual([
      { first: 0, count: 5, isStored: false },
      { first: 5, count: 2, isStored: false },
      { first: 7, count: 1, isStored: true },
      { first: 8, count: 4, isStored: false },
    ]);
  });

  it.each([
    ['0 stands for them, which is a value', storedBut(0)],
    ['the format cannot tell', undefined],
  ])('are read like others where %s', async (_, filledWith) => {
    expect(await parts(filledWith)).toEqual([
      { first: 0, count: 5, isStored: true },
      { first: 5, count: 5, isStored: true },
      { first: 10, count: 2, isStored: true },
    ]);
  });

  it('are not read, and are counted as missing', async () => {
    const [count, hours] = [25, 500_000];
    const data = new Float32Array(count * hours).fill(-9);
    data.fill(0.5, STORED * hours, (STORED + 1) * hours);
    const along = (first: number, units: string) => ({
      ...{ dimensions: ['site'], shape: [count], attributes: { units } },
      data: Float64Array.from({ length: count }, (_, k) => first + 0.1 * k),
    });
    const reads: FakeReads[] = [];
    const time = { dimensions: ['time'], shape: [hours], attributes: { units: 'hours since 1970-01-01' } };
    const file = fakeArrays(
      {
        lat: along(40, 'degrees_north'),
        lon: along(5, 'degrees_east'),
        time: { ...time, data: Float64Array.from({ length: hours }, (_, k) => k) },
        pr: {
          ...{ dimensions: ['site', 'time'], shape: [count, hours], data, chunk: [1, hours] },
          attributes: { units: 'mm', long_name: 'precipitation amount', _FillValue: [-9] },
        },
      },
      { reads },
    );
    const reading = await readFakes({ 'a.nc': { ...file, filledWith: storedBut(-9) } }, { stamp: 'start' });
    const long = reads.filter(({ variable, count: length }) => variable === 'pr' && length[1] > 1000);
    expect(long.map(({ start, count: length }) => [start[0], length[0]])).toEqual([[STORED, 1]]);
    expect(reading.staged).toMatchObject({ sites: 1 });
    expect(stagedValue(reading, 'precipitation_mm', 's08', '2001-07-01')).toBe(12);
    expect(findingCodes(reading)).toContain('empty-stations');
    expect(reading.findings.find(({ code }) => code === 'missing-value')?.message).toContain(String((count - 1) * hours));
  }, 30_000);
});

describe('Zarr tells what is not stored', () => {
  const within = async (name: string, ask: (file: ArrayFile) => Promise<void>) => {
    const file = await openArrayFile(fileOnDisk(name, new URL(`../data/arrays/${name}`, import.meta.url).pathname));
    if (file === null) throw new Error(`${name} is not told as an array file`);
    await ask(file);
    await file.close();
  };

  it('by the chunks that are there', () =>
    within('version2.zarr.zip', async (file) => {
      expect(await file.filledWith?.('absent', [3, 0, 0], [4, 5, 6])).toBe(65535);
      expect(await file.filledWith?.('absent', [0, 2, 0], [3, 3, 6])).toBe(65535);
      expect(await file.filledWith?.('absent', [2, 1, 3], [4, 4, 3])).toBeNull();
      expect(await file.filledWith?.('zstd', [0, 0, 0], [1, 1, 1])).toBeNull();
    }));

  it('and not of shards, which hold several chunks', () =>
    within('version3.zarr.zip', async (file) => {
      expect(await file.filledWith?.('sharded', [2, 4], [2, 2])).toBeNull();
      expect(await file.filledWith?.('big', [2, 4], [2, 2])).toBeNaN();
    }));
});
