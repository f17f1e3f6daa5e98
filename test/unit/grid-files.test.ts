/**
 * Gridded weather from real files through the readers of the formats. The files are of our own making, see test/data/grids/make.py; expected
 * values of fields are what xarray 2023.01.0 and GDAL 3.6 read from them (Debian 12), places are from pyproj 3.4.1.
 */
import { readFileSync } from 'node:fs';
import { resolve } from 'node:path';
import { describe, expect, it } from 'vitest';
import { readGridWeather } from '../../lib/files/grid-weather.ts';
import type { ImportContext, ImportOptions, StagedBlock } from '../../lib/files/reading.ts';
import { type FakeVariable, fakeArrays, findingCodes, readFakes, stagedValue } from '../support/fake-arrays.ts';
import { importContext } from '../support/import-context.ts';

const FOLDER = resolve('test/data/grids');

async function readFiles(names: readonly string[], options: ImportOptions = {}, context: Partial<ImportContext> = {}) {
  const files = names.map((name) => ({ name, path: `${FOLDER}/${name}`, bytes: new Uint8Array(readFileSync(`${FOLDER}/${name}`)) }));
  return readGridWeather(files, options, importContext({ timeZone: 'UTC', ...context }), () => undefined);
}

describe('a packed field over two years in two formats', () => {
  // W m⁻² of xarray × 0.0864; the stamps are the ends of the days, their bounds say so
  it.each([
    ['r0c0', '2019-12-31', 120 * 0.0864],
    ['r2c7', '2020-01-01', 152.98 * 0.0864],
    ['r3c1', '2020-01-02', 178.14 * 0.0864],
    ['r0c0', '2020-01-03', 180 * 0.0864],
    ['r2c7', '2020-01-04', 212.98 * 0.0864],
  ])('%s on %s', async (code, date, expected) => {
    const reading = await readFiles(['packed-2020.nc', 'packed-2019.nc']);
    expect(stagedValue(reading, 'solar_radiation_mj_m2_d', code, date)).toBeCloseTo(expected, 4);
    expect(stagedValue(reading, 'solar_radiation_mj_m2_d', 'r0c3', date)).toBeNaN();
    expect(reading.understood).toMatchObject({ dateRange: { start: '2019-12-31', end: '2020-01-04' }, siteCount: 31 });
  });

  it('hands blocks on as they are complete and holds none', async () => {
    const given: StagedBlock[] = [];
    const file = { name: 'packed-2019.nc', path: `${FOLDER}/packed-2019.nc`, bytes: new Uint8Array(0) };
    const reading = await readGridWeather(
      [file],
      {},
      importContext({ timeZone: 'UTC' }),
      () => undefined,
      async (block) => {
        given.push(block);
      },
    );
    expect(given.map(({ month }) => month)).toEqual(['2019-12-01', '2020-01-01']);
    expect(reading.staged).toMatchObject({ blocks: [], rows: 3 * 31 });
  });

  it('tells progress up to the whole', async () => {
    const told: number[] = [];
    const file = { name: 'packed-2019.nc', path: `${FOLDER}/packed-2019.nc`, bytes: new Uint8Array(0) };
    await readGridWeather([file], {}, importContext({ timeZone: 'UTC' }), (share) => {
      told.push(share);
    });
    expect(told.at(-1)).toBe(1);
    expect([...told].sort((a, b) => a - b)).toEqual(told);
  });
});

describe('a zip of GeoTIFF days with an elevation raster', () => {
  it('reads days from the names, packing from the bands, places from the coordinate system', async () => {
    const reading = await readFiles(['series.zip']);
    if (reading.staged.kind !== 'weather') throw new Error('no weather');
    const { cells } = reading.staged;
    // stored 100 + 10 · row + column, scale 0.1; the second day 50 more
    expect(stagedValue(reading, 'air_temperature_max_c', 'r2c3', '2024-02-29')).toBeCloseTo(12.3, 5);
    expect(stagedValue(reading, 'air_temperature_max_c', 'r2c3', '2024-03-01')).toBeCloseTo(17.3, 5);
    expect(cells).toHaveLength(29);
    const cell = cells?.find(({ code }) => code === 'r2c3');
    expect(cell?.longitude).toBeCloseTo(15.44351778, 6);
    expect(cell?.latitude).toBeCloseTo(44.92756942, 6);
    // the raster is a plane, so its mean over a cell is near its value at the centre: 200 + 5 · 37.29 + 3 · 50.98
    expect(Math.abs((cell?.elevation ?? 0) - 539.4)).toBeLessThan(6);
    expect(reading.understood.grid).toMatchObject({ shape: { kind: 'projected', rows: 5, columns: 6 }, calendar: 'standard' });
  });

  it('asks for a date where a raster has none', async () => {
    const band = (attributes: Record<string, string>): FakeVariable => ({
      dimensions: ['y', 'x'],
      shape: [2, 2],
      data: [1, 2, 3, 4],
      attributes,
    });
    const axis = (name: string, data: readonly number[]): FakeVariable => ({ dimensions: [name], shape: [2], data });
    const raster = (description: string) =>
      fakeArrays(
        { y: axis('y', [45, 44]), x: axis('x', [10, 11]), band_1: band({ crs: 'EPSG:4326', long_name: description }) },
        { format: 'geotiff' },
      );
    const plan = { columns: { rainfall: { role: 'precipitation_mm', unit: 'mm' } } };
    const undated = await readFakes({ 'rainfall.tif': raster('') }, { plan });
    expect(undated.findings.find(({ code }) => code === 'no-date')?.advice).toContain('YYYYMMDD');
    expect(undated.staged).toMatchObject({ blocks: [] });
    const dated = await readFakes({ 'anything.tif': raster('rainfall 2024-02-29') }, { plan });
    expect(stagedValue(dated, 'precipitation_mm', 'r1c0', '2024-02-29')).toBe(3);
  });
});

describe('files that are none', () => {
  it('are refused by name', async () => {
    const file = { name: 'notes.txt', bytes: new TextEncoder().encode('no arrays here') };
    const reading = await readGridWeather([file], {}, importContext(), () => undefined);
    expect(findingCodes(reading)).toContain('not-an-array-file');
    expect(reading.staged).toMatchObject({ blocks: [], rows: 0 });
  });
});
