/** Weights of a run's parcels by its settings. */
import { describe, expect, test } from 'vitest';
import { mulberry32 } from '../../lib/base/random.ts';
import { DEFAULT_RUN_SETTINGS, type RunSettings } from '../../lib/jobs/run-settings.ts';
import { parcelWeights, type WeightsWanted } from '../../lib/jobs/run-weights.ts';
import { type CompletedWeather, FALLBACK, type GridShape, type Site } from '../../lib/weather/variable.ts';

const DAYS = 40;
const PARCELS = [
  { longitude: -115.93, latitude: 43.52 },
  { longitude: -115.55, latitude: 43.9 },
];

function siteAt(code: string, longitude: number, latitude: number, elevation: number): Site {
  return { code, name: `Site ${code} (invented)`, longitude, latitude, elevation, windHeight: 2 };
}

/** Corners of a 40 km lattice in UTM zone 11 north, and a place 10 km east and 10 km south of the north-west one: cs2cs of PROJ 9.1.1. */
const PROJECTED = [
  { code: 'nw', longitude: -116.004032619, latitude: 43.88876144 },
  { code: 'ne', longitude: -115.506188319, latitude: 43.88333728 },
  { code: 'sw', longitude: -116.00997813, latitude: 43.528656805 },
  { code: 'se', longitude: -115.515103529, latitude: 43.523300011 },
];
const MIDDLE = { longitude: -115.881242619, latitude: 43.797588324 };

/** Eight invented stations; the last never reports. */
const STATIONS = [
  siteAt('A', -116, 43.5, 700),
  siteAt('B', -115.9, 43.6, 760),
  siteAt('C', -115.8, 43.45, 810),
  siteAt('D', -115.7, 43.8, 1020),
  siteAt('E', -115.6, 43.55, 900),
  siteAt('F', -115.5, 43.95, 1400),
  siteAt('G', -115.4, 43.7, 1150),
  siteAt('H', -115.95, 43.51, 705),
];
const USABLE = [0, 1, 2, 3, 4, 5, 6];

/** Temperature falls by exactly 5 °C per km and everything else is the same everywhere but for a little noise. */
function weatherOf(sites: readonly Site[], change: (weather: CompletedWeather) => void = () => {}): CompletedWeather {
  const random = mulberry32(20260403);
  const rows = (value: (site: Site, day: number) => number) =>
    Float64Array.from({ length: sites.length * DAYS }, (_, i) => value(sites[Math.floor(i / DAYS)], i % DAYS));
  const noise = () => 0.01 * random();
  const weather: CompletedWeather = {
    siteCount: sites.length,
    dayCount: DAYS,
    airTemperatureMax: rows(({ elevation }, day) => 30 + Math.sin(day) - 0.005 * elevation),
    airTemperatureMin: rows(({ elevation }, day) => 15 + Math.cos(day) - 0.005 * elevation),
    actualVapourPressure: rows(() => 1.2 + noise()),
    solarRadiation: rows(({ longitude }, day) => 20 + 5 * (longitude + 116) + Math.sin(day) + noise()),
    windSpeed2m: rows(() => 2 + noise()),
    precipitation: rows((_, day) => (day % 9 === 0 ? 4 + noise() : 0)),
    flags: new Uint32Array(sites.length * DAYS),
  };
  change(weather);
  return weather;
}

function weights(settings: Partial<RunSettings>, given: Partial<WeightsWanted> = {}) {
  return parcelWeights({
    parcels: PARCELS,
    sites: STATIONS,
    grid: null,
    usable: USABLE,
    settings: { ...DEFAULT_RUN_SETTINGS, ...settings },
    weather: weatherOf(STATIONS),
    startDate: '2024-04-01',
    ...given,
  });
}

const total = (list: readonly { weight: number }[]) => list.reduce((sum, { weight }) => sum + weight, 0);

describe('stations', () => {
  test('inverse distance is shared by every series, and leaves out the site that never reports', () => {
    const { parcels, record } = weights({});
    for (const parcel of parcels) {
      expect(parcel.series).toBeUndefined();
      expect(parcel.weights).toHaveLength(6);
      expect(total(parcel.weights)).toBeCloseTo(1, 12);
      expect(parcel.weights.map(({ site }) => site)).not.toContain(7);
    }
    expect(record).toMatchObject({ interpolation: 'inverse-distance', source: 'stations', site_count: 7, series: {}, notes: [] });
  });
  test('nearest', () => {
    expect(weights({ interpolation: 'nearest' }).parcels.map((parcel) => parcel.weights)).toEqual([
      [{ site: 0, weight: 1 }],
      [{ site: 5, weight: 1 }],
    ]);
  });
  test('a fitted trend keeps the weights and brings the slope: −5 °C per km', () => {
    const { parcels, record } = weights({ elevation_trend: 'fitted' });
    const { airTemperatureMax, precipitation } = parcels[0].series ?? {};
    expect(airTemperatureMax?.gradient).toBeCloseTo(-0.005, 9);
    expect(airTemperatureMax?.weights).toEqual(parcels[0].weights);
    expect(precipitation).toBeUndefined();
    expect(record.series.airTemperatureMax?.gradient_per_m).toBeCloseTo(-0.005, 9);
  });
  test('kriging: every series has its own weights and variance, the shared ones stay by inverse distance', () => {
    const { parcels, record } = weights({ interpolation: 'kriging' });
    const own = Object.entries(parcels[1].series ?? {});
    expect(own.map(([name]) => name)).toEqual([
      'airTemperatureMax',
      'airTemperatureMin',
      'actualVapourPressure',
      'solarRadiation',
      'windSpeed2m',
      'precipitation',
    ]);
    for (const [, series] of own) {
      expect(total(series.weights)).toBeCloseTo(1, 8);
      expect(series.weights.every(({ site }) => USABLE.includes(site))).toBe(true);
      expect(series.variance).toBeGreaterThanOrEqual(0);
    }
    expect(parcels[1].series?.airTemperatureMax?.gradient).toBe(-0.0065);
    expect(parcels[1].series?.solarRadiation?.gradient).toBe(0);
    expect(parcels[1].weights).toEqual(weights({}).parcels[1].weights);
    expect(record.series.solarRadiation?.variogram?.kind).toBeDefined();
  });
  test('kriging with too few sites says so and goes by inverse distance', () => {
    const { parcels, record } = weights({ interpolation: 'kriging' }, { usable: [0, 1, 2] });
    expect(parcels[0].series).toBeUndefined();
    expect(record.notes.join()).toContain('kriging needs at least 6 sites');
  });
  test('automatic takes the way with the lowest error: the exact slope for temperature, and none that tells nothing', () => {
    const { parcels, record } = weights({ interpolation: 'automatic' });
    expect(record.series.airTemperatureMax?.method).toMatch(/-fitted$|^nearest-fitted$/);
    expect(record.series.airTemperatureMax?.leave_one_out?.rmse).toBeLessThan(1e-9);
    expect(parcels[0].series?.airTemperatureMax?.gradient).toBeCloseTo(-0.005, 9);
  });
  test('automatic looks past values that were assumed', () => {
    const weather = weatherOf(STATIONS, ({ flags }) => flags.fill(FALLBACK.windAssumed));
    const { parcels, record } = weights({ interpolation: 'automatic' }, { weather });
    expect(parcels[0].series?.windSpeed2m).toBeUndefined();
    expect(record.notes.join()).toContain('No site could be held against another for windSpeed2m');
  });
  test('on days when none of the sites reports, the nearest that does stands in', () => {
    const weather = weatherOf(STATIONS, ({ airTemperatureMax }) => airTemperatureMax.fill(Number.NaN, 0, 3));
    const [first, second] = weights({ interpolation: 'nearest' }, { weather }).parcels;
    expect(first.weights).toEqual([
      { site: 0, weight: 1 },
      { site: 1, weight: 1e-9 },
    ]);
    expect(second.weights).toEqual([{ site: 5, weight: 1 }]);
  });
  test('bilinear is refused', () => {
    expect(() => weights({ interpolation: 'bilinear' })).toThrow('"bilinear" is for grids, and the weather source is stations');
  });
});

describe('a grid', () => {
  const axes = { x: [-116, -115.5], y: [44, 43.5] };
  const grid: GridShape = { rows: 2, columns: 2, kind: 'rectilinear', ...axes, crs: 'EPSG:4326' };
  // cells in an order of their own
  const cells = [
    siteAt('r1c1', -115.5, 43.5, 900),
    siteAt('r0c0', -116, 44, 900),
    siteAt('r0c1', -115.5, 44, 900),
    siteAt('r1c0', -116, 43.5, 900),
  ];
  const given = { sites: cells, grid, usable: [0, 1, 2, 3], weather: null };
  const bySite = (list: readonly { site: number; weight: number }[]) =>
    Object.fromEntries(list.map(({ site, weight }) => [cells[site].code, Math.round(weight * 1e6) / 1e6]));

  test('bilinear between the four cells, found by their places', () => {
    // fx = 0.07 / 0.5 = 0.14; fy from the south = 0.02 / 0.5 = 0.04
    const { parcels } = weights({ interpolation: 'bilinear' }, given);
    expect(bySite(parcels[0].weights)).toEqual({ r0c0: 0.0344, r0c1: 0.0056, r1c0: 0.8256, r1c1: 0.1344 });
    expect(weights({ interpolation: 'automatic' }, given).parcels).toEqual(parcels);
  });
  test('nearest cell', () => {
    expect(bySite(weights({ interpolation: 'nearest' }, given).parcels[0].weights)).toEqual({ r1c0: 1 });
  });
  test('a cell that is not at hand leaves its weight to the others', () => {
    const { parcels } = weights({ interpolation: 'bilinear' }, { ...given, usable: [0, 1, 2] });
    expect(bySite(parcels[0].weights)).toEqual({ r0c0: 0.197248, r0c1: 0.03211, r1c1: 0.770642 });
  });
  test('a projected grid: UTM zone 11 north, places by PROJ 9.1.1', () => {
    const shape: GridShape = {
      rows: 2,
      columns: 2,
      kind: 'projected',
      x: [580_000, 620_000],
      y: [4_860_000, 4_820_000],
      crs: '+proj=utm +zone=11 +datum=WGS84',
    };
    const places = PROJECTED.map(({ code, longitude, latitude }) => siteAt(code, longitude, latitude, 900));
    const { parcels } = weights(
      { interpolation: 'bilinear' },
      { sites: places, grid: shape, usable: [0, 1, 2, 3], weather: null, parcels: [MIDDLE] },
    );
    const found = Object.fromEntries(parcels[0].weights.map(({ site, weight }) => [places[site].code, weight]));
    // 10 km east and 10 km south of the north-west centre
    expect(found.nw).toBeCloseTo(0.75 * 0.75, 5);
    expect(found.ne).toBeCloseTo(0.25 * 0.75, 5);
    expect(found.sw).toBeCloseTo(0.75 * 0.25, 5);
    expect(found.se).toBeCloseTo(0.25 * 0.25, 5);
  });
  test('a grid without axes goes by the four nearest cells and says so', () => {
    const bare: GridShape = { ...grid, kind: 'curvilinear', x: null, y: null };
    const { parcels, record } = weights({ interpolation: 'bilinear' }, { ...given, grid: bare });
    expect(parcels[0].weights).toHaveLength(4);
    expect(record.notes.join()).toContain('no axes of its own');
  });
  test('kriging is refused', () => {
    expect(() => weights({ interpolation: 'kriging' }, given)).toThrow('"kriging" is for stations, and the weather source is a grid');
  });
});
