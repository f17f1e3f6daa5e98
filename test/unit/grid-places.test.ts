/** Where cells and stations are, which are kept, and what is refused. */
import { describe, expect, it } from 'vitest';
import type { ArrayFile } from '../../lib/files/array-file.ts';
import { FindingList } from '../../lib/files/finding-list.ts';
import { fieldDimensions } from '../../lib/files/grid-axes.ts';
import { cellPlace, readLattice } from '../../lib/files/grid-lattice.ts';
import { gridSystem } from '../../lib/files/grid-projection.ts';
import { chooseWindow, orientationOf, segmentsOf } from '../../lib/files/grid-window.ts';
import {
  blocksOf,
  type FakeReads,
  type FakeVariable,
  fakeArrays,
  findingCodes,
  gridAxes,
  gridField,
  readFakes,
  stagedValue,
} from '../support/fake-arrays.ts';
import { importContext } from '../support/import-context.ts';

const DAYS = { units: 'days since 2024-01-01' };
const range = (count: number, first: number, step: number) => Array.from({ length: count }, (_, i) => first + i * step);

async function latticeOf(file: ArrayFile, name = 'tas') {
  const variable = file.variables.find((candidate) => candidate.name === name);
  const dimensions = variable && fieldDimensions(file, variable);
  if (!variable || !dimensions) throw new Error('no field');
  return readLattice(file, variable, dimensions, undefined);
}

describe('rectilinear grids', () => {
  const tas = (rows: number, columns: number) => gridField([2, rows, columns], { units: 'degC' }, (_, r, c) => r / 10 + c);

  it.each([
    ['descending', range(20, 49.5, -0.5)],
    ['ascending', range(20, 40, 0.5)],
  ])('keeps the cells around the district, latitude %s', async (_, latitudes) => {
    const file = fakeArrays({ ...gridAxes(latitudes, range(30, 0, 0.5), [0, 1], DAYS), tas: tas(20, 30) });
    const reading = await readFakes({ 'a.nc': file }, {}, { districtBox: [4.9, 44.9, 5.6, 45.1] });
    if (reading.staged.kind !== 'weather' || !reading.staged.cells) throw new Error('no cells');
    const { cells } = reading.staged;
    expect([...new Set(cells.map(({ latitude }) => latitude))].sort()).toEqual([44.5, 45, 45.5]);
    expect([...new Set(cells.map(({ longitude }) => longitude))].sort()).toEqual([4.5, 5, 5.5, 6]);
    const cell = cells.find(({ latitude, longitude }) => latitude === 45 && longitude === 5.5);
    const row = latitudes.indexOf(45);
    expect(cell).toMatchObject({ row, column: 11, code: `r${String(row).padStart(2, '0')}c11` });
    expect(stagedValue(reading, 'air_temperature_mean_c', cell?.code ?? '', '2024-01-01')).toBeCloseTo(row / 10 + 11, 5);
  });

  it('reads the window alone, in step with the stored blocks', async () => {
    const reads: FakeReads[] = [];
    const field = { ...gridField([60, 100, 100], { units: 'degC' }, () => 1), chunk: [20, 10, 10] };
    const file = fakeArrays({ ...gridAxes(range(100, 60, -0.1), range(100, 0, 0.1), range(60, 0, 1), DAYS), tas: field }, { reads });
    await readFakes({ 'a.nc': file }, {}, { districtBox: [5, 55, 5.2, 55.2] });
    const whole = reads.filter(({ variable, count }) => variable === 'tas' && count[0] > 1);
    expect(whole.length).toBeGreaterThan(0);
    for (const { start, count } of whole)
      expect([count[1] <= 8, count[2] <= 8, start[0] % 20 === 0 || count[0] < 60]).toEqual([true, true, true]);
  });

  it('takes longitudes of 0 to 360 across the seam', async () => {
    const file = fakeArrays({ ...gridAxes([51, 50, 49], range(36, 0, 10), [0, 1], DAYS), tas: tas(3, 36) });
    const reading = await readFakes({ 'a.nc': file }, {}, { districtBox: [-3, 49.5, 3, 50.5] });
    if (reading.staged.kind !== 'weather' || !reading.staged.cells) throw new Error('no cells');
    expect([...new Set(reading.staged.cells.map(({ longitude }) => longitude))].sort((a, b) => a - b)).toEqual([-10, 0, 10]);
    expect(stagedValue(reading, 'air_temperature_mean_c', 'r1c35', '2024-01-01')).toBeCloseTo(35.1, 5);
    expect(stagedValue(reading, 'air_temperature_mean_c', 'r1c01', '2024-01-01')).toBeCloseTo(1.1, 5);
    expect(reading.understood.boundingBox).toEqual([-10, 49, 10, 51]);
  });

  it('cuts a window across the seam into two reads', async () => {
    const lattice = await latticeOf(
      fakeArrays({ ...gridAxes([51, 50, 49], range(36, 0, 10), [0], DAYS), tas: gridField([1, 3, 36], {}, () => 1) }),
    );
    const window = chooseWindow(lattice, {}, importContext({ districtBox: [-3, 49.5, 3, 50.5] }), new FindingList());
    expect(
      segmentsOf(window, lattice, { flipRows: false, flipColumns: false }).map(({ columnStart, columnCount }) => [
        columnStart,
        columnCount,
      ]),
    ).toEqual([
      [0, 2],
      [35, 1],
    ]);
  });

  it('refuses a grid elsewhere with both boxes', async () => {
    const file = fakeArrays({ ...gridAxes([51, 50, 49], [10, 11, 12], [0, 1], DAYS), tas: tas(3, 3) });
    const reading = await readFakes({ 'a.nc': file }, {}, { districtBox: [-121, 37, -120, 38] });
    const finding = reading.findings.find(({ code }) => code === 'grid-not-covering');
    expect(finding?.message).toContain('49 to 51 °N, 10 to 12 °E');
    expect(finding?.message).toContain('37 to 38 °N, -121 to -120 °E');
    expect(reading.staged).toMatchObject({ blocks: [], rows: 0 });
  });

  it('warns of a grid that ends inside the district', async () => {
    const file = fakeArrays({ ...gridAxes([51, 50, 49], [10, 11, 12], [0, 1], DAYS), tas: tas(3, 3) });
    const reading = await readFakes({ 'a.nc': file }, {}, { districtBox: [11, 49.5, 16, 50.5] });
    expect(reading.findings.find(({ code }) => code === 'grid-covers-part')?.message).toContain('on the east');
    expect(blocksOf(reading).length).toBe(1);
  });

  it('does not read a large grid whole without a place, and does on request up to a limit', async () => {
    const file = () =>
      fakeArrays({
        ...gridAxes(range(200, 60, -0.1), range(150, 0, 0.1), [0, 1], DAYS),
        tas: gridField([2, 200, 150], { units: 'degC' }, () => 4),
      });
    expect(findingCodes(await readFakes({ 'a.nc': file() }))).toContain('grid-too-large');
    expect((await readFakes({ 'a.nc': file() }, { wholeGrid: true })).staged).toMatchObject({ sites: 30000 });
  });

  it('joins files whose axes run the other way, and refuses other cells', async () => {
    const up = fakeArrays({
      ...gridAxes([49, 50, 51], [10, 11], [0, 1], DAYS),
      tasmin: gridField([2, 3, 2], { units: 'degC' }, (_, r) => r),
    });
    const down = fakeArrays({
      ...gridAxes([51, 50, 49], [10, 11], [0, 1], DAYS),
      tasmax: gridField([2, 3, 2], { units: 'degC' }, (_, r) => 20 + r),
    });
    const other = fakeArrays({ ...gridAxes([52, 51, 50], [10, 11], [0, 1], DAYS), pr: gridField([2, 3, 2], { units: 'mm' }, () => 1) });
    const reading = await readFakes({ 'x.nc': down, 'n.nc': up, 'p.nc': other });
    expect(stagedValue(reading, 'air_temperature_max_c', 'r0c0', '2024-01-01')).toBe(20);
    expect(stagedValue(reading, 'air_temperature_min_c', 'r0c0', '2024-01-01')).toBe(2);
    expect(findingCodes(reading)).toContain('other-lattice');
  });

  it('holds the lattice against that of the source', async () => {
    const file = () => fakeArrays({ ...gridAxes([51, 50, 49], [10, 11], [0, 1], DAYS), tas: tas(3, 2) });
    const grid = { rows: 3, columns: 2, kind: 'rectilinear', crs: 'EPSG:4326', x: [10, 11], y: [51, 50, 49] } as const;
    const source = (changed: object) => ({ sources: [{ name: 'grid', kind: 'grid' as const, grid: { ...grid, ...changed } }] });
    expect((await readFakes({ 'a.nc': file() }, { source: 'grid' }, source({}))).findingCounts.error).toBe(0);
    expect((await readFakes({ 'a.nc': file() }, { source: 'grid' }, source({ x: [10.00005, 11.00005] }))).findingCounts.error).toBe(0);
    expect(findingCodes(await readFakes({ 'a.nc': file() }, { source: 'grid' }, source({ x: [10.001, 11.001] })))).toContain(
      'other-lattice',
    );
    expect(findingCodes(await readFakes({ 'a.nc': file() }, { source: 'grid' }, source({ y: [49, 50, 51] })))).toContain('other-lattice');
    const stations = { sources: [{ name: 'grid', kind: 'stations' as const, grid: null }] };
    expect(findingCodes(await readFakes({ 'a.nc': file() }, { source: 'grid' }, stations))).toContain('source-of-stations');
  });

  it('sees a lattice of single precision as the same', () => {
    const lattice = (x: readonly number[]) => ({ rows: 1, columns: 2, kind: 'rectilinear', crs: 'EPSG:4326', x, y: [40] }) as const;
    const exact = [-120.0208333, -119.9791667];
    expect(orientationOf(lattice(exact.map(Math.fround)), lattice(exact))).toEqual({ flipRows: false, flipColumns: false });
  });
});

describe('other systems', () => {
  it.each([
    // pyproj 3.4.1 (PROJ 9.1.1), inverse of ob_tran with the same parameters
    [-10, 5, 0.6362348892498384, 54.574485426141614],
    [3, -12, 21.759633707056356, 38.67377554515684],
    [0, 0, 18, 50.75],
  ])('rotated pole %d %d', (x, y, longitude, latitude) => {
    const [east, north] =
      gridSystem('+proj=ob_tran +o_proj=longlat +o_lat_p=39.25 +o_lon_p=0 +lon_0=18 +R=6371229 +no_defs')?.toDegrees(x, y) ?? [];
    expect(east).toBeCloseTo(longitude, 8);
    expect(north).toBeCloseTo(latitude, 8);
  });

  const rotated: Record<string, FakeVariable> = {
    rlat: { dimensions: ['rlat'], shape: [2], data: [5, -12], attributes: { standard_name: 'grid_latitude', units: 'degrees' } },
    rlon: { dimensions: ['rlon'], shape: [2], data: [-10, 3], attributes: { standard_name: 'grid_longitude', units: 'degrees' } },
    time: { dimensions: ['time'], shape: [2], data: [0, 1], attributes: DAYS },
    pole: {
      dimensions: [],
      shape: [],
      data: [0],
      attributes: {
        grid_mapping_name: 'rotated_latitude_longitude',
        grid_north_pole_latitude: [39.25],
        grid_north_pole_longitude: [-162],
        earth_radius: [6371229],
      },
    },
    tas: {
      dimensions: ['time', 'rlat', 'rlon'],
      shape: [2, 2, 2],
      data: [1, 2, 3, 4, 5, 6, 7, 8],
      attributes: { units: 'degC', grid_mapping: 'pole' },
    },
  };

  it('places a rotated grid by its mapping', async () => {
    const lattice = await latticeOf(fakeArrays(rotated));
    expect(lattice.kind).toBe('projected');
    const [longitude, latitude] = cellPlace(lattice, 1, 1);
    expect([longitude.toFixed(6), latitude.toFixed(6)]).toEqual(['21.759634', '38.673776']);
  });

  it('places a grid by latitudes and longitudes of two dimensions, and keeps those near the district', async () => {
    const place = (data: readonly number[], units: string): FakeVariable => ({
      dimensions: ['rlat', 'rlon'],
      shape: [2, 2],
      data,
      attributes: { units },
    });
    const { pole: _, ...rest } = rotated;
    const file = fakeArrays({
      ...rest,
      lat: place([50, 50.1, 49, 49.1], 'degrees_north'),
      lon: place([359, 1, 358.9, 1.1], 'degrees_east'),
    });
    expect((await latticeOf(file)).kind).toBe('curvilinear');
    const reading = await readFakes({ 'a.nc': file }, { margin: 0.2 }, { districtBox: [0.9, 49, 1.1, 50.2] });
    expect(reading.staged).toMatchObject({ cells: [{ code: 'r0c1', longitude: 1, latitude: 50.1 }, { code: 'r1c1' }] });
    expect(stagedValue(reading, 'air_temperature_mean_c', 'r1c1', '2024-01-02')).toBe(8);
  });

  it('asks for a coordinate system where x and y have none', async () => {
    const axis = (data: readonly number[], name: string): FakeVariable => ({
      dimensions: [name],
      shape: [data.length],
      data,
      attributes: { units: 'm' },
    });
    const file = () =>
      fakeArrays({
        y: axis([5e6, 4.99e6], 'y'),
        x: axis([5e5, 5.1e5], 'x'),
        time: rotated.time,
        tas: { ...rotated.tas, dimensions: ['time', 'y', 'x'], attributes: { units: 'degC' } },
      });
    const reading = await readFakes({ 'a.nc': file() });
    expect(reading.findings[0].message).toContain('names no coordinate system');
    expect((await readFakes({ 'a.nc': file() }, { crs: 'EPSG:32633' })).staged).toMatchObject({ grid: { kind: 'projected' }, sites: 4 });
  });
});

describe('elevation of cells', () => {
  it('takes a field of the same cells, geopotential as height', async () => {
    const z: FakeVariable = {
      dimensions: ['lat', 'lon'],
      shape: [2, 2],
      data: [980.665, 1961.33, 0, 9806.65],
      attributes: { units: 'm**2 s**-2', standard_name: 'geopotential' },
    };
    const file = fakeArrays({ ...gridAxes([51, 50], [10, 11], [0, 1], DAYS), tas: gridField([2, 2, 2], { units: 'degC' }, () => 1), z });
    const reading = await readFakes({ 'a.nc': file });
    expect(reading.staged.kind === 'weather' && reading.staged.cells?.map(({ elevation }) => elevation)).toEqual([100, 200, 0, 1000]);
  });

  it('samples a coarser raster between its centres', async () => {
    const raster = fakeArrays({
      lat: { dimensions: ['lat'], shape: [2], data: [52, 48], attributes: { units: 'degrees_north' } },
      lon: { dimensions: ['lon'], shape: [2], data: [8, 12], attributes: { units: 'degrees_east' } },
      elevation: { dimensions: ['lat', 'lon'], shape: [2, 2], data: [100, 200, 300, 400], attributes: { units: 'm' } },
    });
    const file = fakeArrays({ ...gridAxes([51, 50], [10, 11], [0, 1], DAYS), tas: gridField([2, 2, 2], { units: 'degC' }, () => 1) });
    const reading = await readFakes({ 'a.nc': file, 'dem.nc': raster });
    // 51° N: a quarter of the way south; 10° E: half way east: 100 + 0.25 · 200 + 0.5 · 100
    expect(reading.staged.kind === 'weather' && reading.staged.cells?.map(({ elevation }) => elevation)).toEqual([200, 225, 250, 275]);
  });
});

describe('stations', () => {
  const list = (data: readonly number[] | readonly string[], attributes = {}): FakeVariable => ({
    dimensions: ['station'],
    shape: [3],
    data,
    attributes,
  });
  const stations = {
    station: list(['Beta', 'Alfa', 'Gamma']),
    lat: list([50, 51, 52], { units: 'degrees_north' }),
    lon: list([10, 350, 12], { units: 'degrees_east' }),
    alt: list([100, 200, 300], { standard_name: 'surface_altitude', units: 'm' }),
    time: { dimensions: ['time'], shape: [2], data: [0, 1], attributes: DAYS },
  };

  it.each([
    ['(station, time)', ['station', 'time'], [3, 2], [1, 2, 11, 12, Number.NaN, Number.NaN]],
    ['(time, station)', ['time', 'station'], [2, 3], [1, 11, Number.NaN, 2, 12, Number.NaN]],
  ] as const)('are staged with their places from a field %s; one without values is left out', async (_, dimensions, shape, data) => {
    const file = fakeArrays({ ...stations, tas: { dimensions, shape, data, attributes: { units: 'degC' } } });
    const reading = await readFakes({ 'a.nc': file });
    expect(reading.staged).toMatchObject({
      stations: [
        { code: 'Alfa', longitude: -10, latitude: 51, elevation: 200 },
        { code: 'Beta', longitude: 10, latitude: 50, elevation: 100 },
      ],
      sites: 2,
    });
    expect(blocksOf(reading)[0].siteCodes).toEqual(['Alfa', 'Beta']);
    expect(stagedValue(reading, 'air_temperature_mean_c', 'Alfa', '2024-01-02')).toBe(12);
    expect(stagedValue(reading, 'air_temperature_mean_c', 'Beta', '2024-01-01')).toBe(1);
    expect(findingCodes(reading)).toContain('empty-stations');
  });

  it('are read part by part where the stored blocks are long in time', async () => {
    const [count, days] = [40, 130_000];
    const reads: FakeReads[] = [];
    const value = (site: number, day: number) => (site === 7 ? (day % 300) / 10 : site === 31 ? 5 : Number.NaN);
    const data = new Float64Array(count * days);
    for (let site = 0; site < count; site++) for (let day = 0; day < days; day++) data[site * days + day] = value(site, day);
    const along = (values: readonly number[], units: string): FakeVariable => ({
      dimensions: ['site'],
      shape: [count],
      data: values,
      attributes: { units },
    });
    const file = fakeArrays(
      {
        lat: along(range(count, 40, 0.1), 'degrees_north'),
        lon: along(range(count, 5, 0.1), 'degrees_east'),
        time: { dimensions: ['time'], shape: [days], data: range(days, 0, 1), attributes: { units: 'hours since 2000-01-01' } },
        ta: { dimensions: ['site', 'time'], shape: [count, days], data, attributes: { units: 'degC' }, chunk: [1, days] },
      },
      { reads },
    );
    const reading = await readFakes({ 'a.nc': file }, { stamp: 'start' });
    const slabs = reads.filter(({ variable, count: length }) => variable === 'ta' && length[1] > 1000);
    expect(Math.max(...slabs.map(({ count: length }) => length[0] * length[1]))).toBeLessThan(12_000_000);
    expect(slabs.every(({ start }) => start[1] === 0)).toBe(true);
    expect(reading.staged).toMatchObject({ sites: 2 });
    // hours 0 … 23 of the first day: mean 1.15
    expect(stagedValue(reading, 'air_temperature_mean_c', 's08', '2000-01-01')).toBeCloseTo(1.15, 5);
    expect(stagedValue(reading, 'air_temperature_max_c', 's32', '2010-05-05')).toBe(5);
  }, 30_000);

  it('are made of a grid of one cell, named by its place or by the options', async () => {
    const file = () => fakeArrays({ ...gridAxes([55.695], [12.495], [0, 1], DAYS), tas: gridField([2, 1, 1], { units: 'degC' }, () => 1) });
    expect((await readFakes({ 'a.nc': file() })).staged).toMatchObject({ stations: [{ code: '55.695N-12.495E', longitude: 12.495 }] });
    expect((await readFakes({ 'a.nc': file() }, { site: 'S1' })).staged).toMatchObject({ stations: [{ code: 'S1' }] });
    const known = await readFakes({ 'a.nc': file() }, { site: 'S1' }, { knownSites: [{ code: 'S1', name: 'Known' }] });
    expect(known.staged).not.toHaveProperty('stations');
    expect(blocksOf(known)[0].siteCodes).toEqual(['S1']);
  });
});

describe('files without weather', () => {
  it('are refused with what was found', async () => {
    const file = fakeArrays({ ...gridAxes([51, 50], [10, 11], [0, 1], DAYS), siconc: gridField([2, 2, 2], { units: '1' }, () => 1) });
    const reading = await readFakes({ 'a.nc': file });
    expect(reading.findings).toMatchObject([{ severity: 'error', code: 'no-weather-field' }]);
    expect(reading.findings[0].message).toContain('siconc');
  });

  it('do not stop on an unrelated field of four dimensions', async () => {
    const vectors: FakeVariable = { dimensions: ['time', 'ts', 'lon', 'lat'], shape: [2, 3, 2, 2], data: new Float64Array(24) };
    const file = fakeArrays({
      ...gridAxes([51, 50], [10, 11], [0, 1], DAYS),
      vectors,
      tas: gridField([2, 2, 2], { units: 'degC' }, () => 1),
    });
    const reading = await readFakes({ 'a.nc': file });
    expect(reading.findingCounts.error).toBe(0);
    expect(reading.understood.columns.map(({ header, role }) => [header, role])).toEqual([
      ['vectors', null],
      ['tas', 'air_temperature_mean_c'],
    ]);
  });
});
