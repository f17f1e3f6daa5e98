/**
 * Gaps of the record through the API, and runs whose reference ET is carried from the sites. The weather is invented: waves and constants, so that every
 * expected value can be worked by hand.
 */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as daily } from '../../app/api/v1/runs/[id]/parcels/[code]/daily/route.ts';
import { GET as working } from '../../app/api/v1/runs/[id]/parcels/[code]/working/route.ts';
import { GET as runParcels } from '../../app/api/v1/runs/[id]/parcels/route.ts';
import { GET as reaches } from '../../app/api/v1/runs/[id]/reaches/route.ts';
import { GET as readRun } from '../../app/api/v1/runs/[id]/route.ts';
import { GET as summary } from '../../app/api/v1/runs/[id]/summary/route.ts';
import { POST as createRun } from '../../app/api/v1/runs/route.ts';
import { GET as gaps } from '../../app/api/v1/weather/gaps/route.ts';
import { GET as gapsCsv } from '../../app/api/v1/weather/gaps.csv/route.ts';
import type { Tx } from '../../db/connect.ts';
import { site, weatherBlock, weatherSource } from '../../db/schema/weather.ts';
import { stopQueue } from '../../lib/jobs/queue.ts';
import { finishRun } from '../../lib/jobs/run-finish.ts';
import { computeSlice } from '../../lib/jobs/run-slice.ts';
import { startRun } from '../../lib/jobs/run-start.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { type Fixture, makeFixture, RUN, request } from './district-fixture.ts';

const MONTHS = [
  ['2024-02-01', 29],
  ['2024-03-01', 31],
  ['2024-04-01', 30],
] as const;
/** 0 on 1 February */
const APRIL = 60;
const [HOLE, END] = [APRIL + 4, APRIL + 8];
const wave = (day: number) => 22 + 6 * Math.sin(day / 3);

let fresh: TestDatabase;
let made: Fixture;
let token: string;

beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
  token = made.tokens.write;
  await fresh.db.inDistrict(made.a.id, makeWeather);
}, 60_000);
afterAll(async () => {
  await stopQueue();
  await fresh.close();
});

async function makeWeather(tx: Tx): Promise<void> {
  const districtId = made.a.id;
  await tx.insert(weatherSource).values([
    { districtId, sourceId: 1, name: 'stations', rank: 1 },
    {
      districtId,
      sourceId: 2,
      name: 'cells',
      rank: 2,
      kind: 'grid',
      grid: { rows: 2, columns: 2, kind: 'rectilinear', x: [-116.05, -115.95], y: [43.65, 43.55], crs: 'EPSG:4326' },
    },
  ]);
  const station = { districtId, sourceId: 1, elevation: 700, windHeight: 2, latitude: 43.6 };
  await tx.insert(site).values([
    { ...station, ordinal: 0, code: 'S0', name: 'Holed', longitude: -116 },
    { ...station, ordinal: 1, code: 'S1', name: 'Whole', longitude: -116.2 },
  ]);
  await tx.insert(site).values(
    [0, 1, 2, 3].map((ordinal) => ({
      ...{ districtId, sourceId: 2, ordinal, code: `r${ordinal >> 1}c${ordinal & 1}`, name: `Cell ${ordinal}`, elevation: 700 },
      ...{
        longitude: [-116.05, -115.95][ordinal & 1],
        latitude: [43.65, 43.55][ordinal >> 1],
        gridRow: ordinal >> 1,
        gridColumn: ordinal & 1,
      },
    })),
  );
  const holed = (day: number) => (day >= HOLE && day <= END ? Number.NaN : wave(day) * 0.9 + 1);
  await put(tx, 1, 'air_temperature_max_c', [holed, wave]);
  await put(tx, 1, 'air_temperature_min_c', [() => 8, () => 8]);
  await put(tx, 1, 'dew_point_c', [() => 5, () => 5]);
  await put(tx, 1, 'solar_radiation_mj_m2_d', [() => 20, () => 20]);
  await put(tx, 1, 'wind_speed_m_s', [() => 2.5, () => 2.5]);
  await put(tx, 1, 'precipitation_mm', [() => 0, () => 0]);
  await put(tx, 2, 'reference_et_given_mm', [() => 4, () => 4, () => 6, () => 6]);
  await put(tx, 2, 'precipitation_mm', [() => 1, () => 1, () => 1, () => 1]);
  await tx.insert(weatherBlock).values(hoursOfApril(districtId));
}

async function put(tx: Tx, sourceId: number, variable: string, ofSite: readonly ((day: number) => number)[]): Promise<void> {
  let first = 0;
  for (const [month, dayCount] of MONTHS) {
    const begin = first;
    const values = Float32Array.from({ length: ofSite.length * dayCount }, (_, i) =>
      ofSite[Math.floor(i / dayCount)](begin + (i % dayCount)),
    );
    const quality = Uint8Array.from(values, (value) => (Number.isNaN(value) ? 0 : 1));
    const block = { districtId: made.a.id, sourceId, variable, month, siteCount: ofSite.length, dayCount, quality };
    await tx.insert(weatherBlock).values({ ...block, values: new Uint8Array(values.buffer) });
    first += dayCount;
  }
}

/** Hours of the first station on 1 to 7 April: a warm day, a dry air. */
function hoursOfApril(districtId: string) {
  const hours: Record<string, (hour: number) => number> = {
    hour_air_temperature_c: (hour) => 15 + 8 * Math.sin(((hour - 9) * Math.PI) / 12),
    hour_dew_point_c: () => 5,
    hour_wind_speed_m_s: () => 2.5,
    hour_solar_radiation_mj_m2: (hour) => Math.max(0, 2.6 * Math.sin(((hour - 5.5) * Math.PI) / 13)),
  };
  return Object.entries(hours).map(([variable, of]) => {
    const values = Float32Array.from({ length: 30 * 24 }, (_, i) => (i < 7 * 24 ? of(i % 24) : Number.NaN));
    const quality = Uint8Array.from(values, (value) => (Number.isNaN(value) ? 0 : 1));
    return {
      districtId,
      sourceId: 1,
      variable,
      month: '2024-04-01',
      siteCount: 1,
      dayCount: 30,
      steps: 24,
      quality,
      values: new Uint8Array(values.buffer),
    };
  });
}

async function json(response: Response) {
  expect(response.status).toBe(200);
  return response.json();
}

/** A run of the season through its three pieces; its address. */
async function runOf(settings: Record<string, unknown>): Promise<string> {
  const response = await createRun(request('/api/v1/runs', { token, body: { season: '2024', settings } }));
  expect(response.status).toBe(202);
  const { id } = await response.json();
  const job = { districtId: made.a.id, runId: id };
  await startRun(job);
  await computeSlice({ ...job, slice: 0 });
  await finishRun(job);
  return `/api/v1/runs/${id}`;
}

describe('GET /api/v1/weather/gaps', () => {
  const path = '/api/v1/weather/gaps?from=2024-04-01&to=2024-04-14';

  it('gives the gap with the regression that filled it', async () => {
    const answer = await json(await gaps(request(path, { token })));
    expect(answer).toMatchObject({ source: 'stations', from: '2024-04-01', to: '2024-04-14' });
    expect(answer.limits).toEqual({ least_r2: 0.7, least_slope: 0.7, greatest_slope: 1.3, least_common_days: 30, longest_in_time_days: 5 });
    expect(answer.items).toHaveLength(1);
    const [gap] = answer.items;
    expect(gap).toMatchObject({ site: 'S0', variable: 'air_temperature_max_c', from: '2024-04-05', to: '2024-04-09', days: 5 });
    expect(gap).toMatchObject({ from_neighbour_days: 5, left_days: 0, best_neighbour: 'S1', accepted: true, common_days: 81 });
    // 60 days before 5 April are 4 February on; to 30 April these are 86 days, 5 of them missing
    expect(gap.slope).toBeCloseTo(0.9, 3);
    expect(gap.intercept).toBeCloseTo(1, 3);
    expect(gap.r2).toBeCloseTo(1, 4);
  });

  it('tells each series day by day, with the share that was not measured', async () => {
    const { sites } = await json(await gaps(request(path, { token })));
    const [holed, whole] = sites;
    const max = holed.series.find((series: { series: string }) => series.series === 'air_temperature_max');
    expect(max.spans).toEqual([
      { from: '2024-04-01', to: '2024-04-04', method: 'measured' },
      { from: '2024-04-05', to: '2024-04-09', method: 'neighbour' },
      { from: '2024-04-10', to: '2024-04-14', method: 'measured' },
    ]);
    expect(max.estimated_share).toBeCloseTo(5 / 14, 4);
    expect(whole.estimated_share).toBe(0);
  });

  it('is a table too, one row for each gap', async () => {
    const text = await (await gapsCsv(request(path.replace('gaps?', 'gaps.csv?'), { token }))).text();
    const [head, row, ...rest] = text.trim().split('\r\n');
    expect(head).toBe(
      'site,name,variable,term,unit,from,to,days,from_neighbour_days,from_source_days,in_time_days,from_normal_days,left_days,best_neighbour,r2,slope,intercept,common_days,accepted',
    );
    expect(row).toMatch(/^S0,Holed,air_temperature_max_c,Maximum air temperature,°C,2024-04-05,2024-04-09,5,5,0,0,0,0,S1,/);
    expect(rest).toEqual([]);
  });

  it.each([
    ['from=2020-01-01&to=2024-04-14', 413, /at most 400/],
    ['from=2024-04-14&to=2024-04-01', 400, /is after/],
    ['source=nowhere', 404, /"nowhere" has no weather/],
    ['source=cells', 413, /name one of its cells/],
    ['source=cells&site=r9c9', 404, /no cell "r9c9"/],
    ['site=S9', 404, /no weather site "S9"/],
  ])('refuses %s', async (query, status, words) => {
    const response = await gaps(request(`/api/v1/weather/gaps?${query}`, { token }));
    expect(response.status).toBe(status);
    expect((await response.json()).detail).toMatch(words);
  });

  it('takes one cell of a grid, and shows another district nothing', async () => {
    const cell = await json(await gaps(request('/api/v1/weather/gaps?source=cells&site=r0c0&from=2024-04-01&to=2024-04-14', { token })));
    expect(cell.sites.map((one: { site: string }) => one.site)).toEqual(['r0c0']);
    const theirs = await json(await gaps(request('/api/v1/weather/gaps', { token: made.tokens.other })));
    expect(theirs).toMatchObject({ source: null, sites: [], items: [] });
  });
});

describe('a run over filled days', () => {
  it('says on parcels, reaches and totals how much of them rests on filled weather', async () => {
    const base = await runOf({ interpolation: 'nearest' });
    const run = await json(await readRun(request(base, { token })));
    expect(run.state).toBe('done');
    expect(run.balance.estimated_share).toBeCloseTo(5 / 14, 9);
    expect(run.balance.fallback_shares.temperatureFromNeighbour).toBeCloseTo(5 / 14, 9);
    expect(run.manifest).toMatchObject({ kernel_version: '3', reference_et: 'at-parcels', weather_source: 'stations' });
    const { items } = await json(await runParcels(request(`${base}/parcels?period=season`, { token })));
    for (const item of items) expect(item.estimated_share).toBeCloseTo(5 / 14, 4);
    const days = await json(await runParcels(request(`${base}/parcels?period=day&from=2024-04-04&to=2024-04-05&parcel=P-1`, { token })));
    expect(days.items.map((item: { estimated_share: number }) => item.estimated_share)).toEqual([0, 1]);
    const canal = await json(await reaches(request(`${base}/reaches?period=season`, { token })));
    for (const item of canal.items) expect(item.estimated_share).toBeCloseTo(5 / 14, 4);
    const totals = await json(await summary(request(`${base}/summary`, { token })));
    expect(totals.district.estimated_share).toBeCloseTo(5 / 14, 4);
    expect(totals.weeks.map((week: { estimated_share: number }) => week.estimated_share)).toEqual([
      expect.closeTo(3 / 7, 3),
      expect.closeTo(2 / 7, 3),
    ]);
  });

  it('without filling, a site without temperature drops out and nothing counts as filled', async () => {
    const base = await runOf({ interpolation: 'inverse-distance', fill_gaps: false });
    const run = await json(await readRun(request(base, { token })));
    expect(run.state).toBe('done');
    expect(run.balance.fallback_shares.temperatureFromNeighbour).toBeUndefined();
  });
});

describe('reference ET carried from the sites', () => {
  it('as a grid gives it: between cells of 4 and 6 mm, by the place of the parcel; the standard climate is said', async () => {
    const base = await runOf({ source: 'cells' });
    const run = await json(await readRun(request(base, { token })));
    expect(run.error).toBeNull();
    expect(run.manifest).toMatchObject({ reference_et: 'given', weather_source: 'cells', weather_sites: 4 });
    const season = await json(await daily(request(`${base}/parcels/P-1/daily`, { token })));
    expect(season.reference_et).toBe('given');
    // P-1 lies at 43.6015° N: 0.485 of the way down from 43.65° to 43.55°, so 4 + 2 × 0.485
    for (const day of season.days) expect(day.reference_et_mm).toBeCloseTo(4.97, 2);
    expect(season.days[0].precipitation_mm).toBe(1);
    expect(season.days[0].fallbacks).toEqual(['climateAssumedStandard']);
    expect(season.estimated_share).toBe(0);
    const derived = await json(await working(request(`${base}/parcels/P-1/working?date=2024-04-03`, { token })));
    expect(derived.results.reference_et_mm).toBeCloseTo(4.97, 6);
    expect(derived.stored.reference_et_mm).toBe(4.97);
    expect(derived.inputs.map((input: { values: { reference_et_mm: number } }) => input.values.reference_et_mm).sort()).toEqual([
      4, 4, 6, 6,
    ]);
    expect(derived.steps.find((step: { symbol: string }) => step.symbol === 'ETo').source).toMatch(/given by the source/);
  });

  it('at the stations: every parcel has the mean of what stands there', async () => {
    const base = await runOf({ reference_et: 'at-sites', interpolation: 'nearest' });
    const run = await json(await readRun(request(base, { token })));
    expect(run.manifest.reference_et).toBe('at-sites');
    const season = await json(await daily(request(`${base}/parcels/P-2/daily`, { token })));
    const derived = await json(await working(request(`${base}/parcels/P-2/working?date=2024-04-03`, { token })));
    expect(derived.inputs[0].values.reference_et_mm).toBeCloseTo(season.days[2].reference_et_mm, 2);
  });

  it('as the sum of hours where there are hours, and from the day’s weather where there are none', async () => {
    const base = await runOf({ reference_et: 'hourly-sum', interpolation: 'nearest' });
    const season = await json(await daily(request(`${base}/parcels/P-1/daily`, { token })));
    const flagged = season.days.map((day: { fallbacks: string[] }) => day.fallbacks.includes('referenceEtFromDailyWeather'));
    expect(flagged).toEqual([...Array(7).fill(false), ...Array(RUN.days - 7).fill(true)]);
    expect(season.days[0].reference_et_mm).toBeGreaterThan(2);
    // the same weather on every day: only the sun rises a little higher
    const rise = season.days[6].reference_et_mm - season.days[0].reference_et_mm;
    expect(rise).toBeGreaterThan(0);
    expect(rise).toBeLessThan(0.15);
  });

  it.each([
    [{ reference_et: 'given' }, /brings no reference ET of its own/],
    [{ source: 'cells', reference_et: 'at-parcels' }, /no air temperature to compute it from/],
    [{ source: 'cells', reference_et: 'hourly-sum' }, /has no hourly weather in this season/],
  ])('%j fails with the reason', async (settings, words) => {
    const response = await createRun(request('/api/v1/runs', { token, body: { season: '2024', settings } }));
    const { id } = await response.json();
    await startRun({ districtId: made.a.id, runId: id }).catch(() => {});
    const run = await json(await readRun(request(`/api/v1/runs/${id}`, { token })));
    expect(run.state).toBe('failed');
    expect(run.error).toMatch(words);
  });
});
