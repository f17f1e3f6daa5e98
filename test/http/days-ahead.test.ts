/**
 * A season told ahead through imports and runs: three years of April as observed, a fourth up to the 7th, a forecast of three days, normals after it. Every
 * value is invented and constant by year, so that what stands on each day can be worked by hand.
 */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as mapDescription } from '../../app/api/v1/runs/[id]/map/route.ts';
import { GET as daily } from '../../app/api/v1/runs/[id]/parcels/[code]/daily/route.ts';
import { GET as runParcels } from '../../app/api/v1/runs/[id]/parcels/route.ts';
import { GET as readRun } from '../../app/api/v1/runs/[id]/route.ts';
import { POST as createRun } from '../../app/api/v1/runs/route.ts';
import { GET as siteDaily } from '../../app/api/v1/weather/sites/[code]/daily/route.ts';
import { GET as sitesList } from '../../app/api/v1/weather/sites/route.ts';
import { GET as sources } from '../../app/api/v1/weather/sources/route.ts';
import { planting, season } from '../../db/schema/land.ts';
import { site, weatherBlock, weatherSource } from '../../db/schema/weather.ts';
import { dayNumber } from '../../lib/base/civil-date.ts';
import { importOptions } from '../../lib/http/operations/imports.ts';
import { loadFrozenSeason } from '../../lib/jobs/frozen-season.ts';
import { performApply } from '../../lib/jobs/import-apply.ts';
import { performUndo } from '../../lib/jobs/import-undo.ts';
import { stopQueue } from '../../lib/jobs/queue.ts';
import { finishRun } from '../../lib/jobs/run-finish.ts';
import { computeSlice } from '../../lib/jobs/run-slice.ts';
import { startRun } from '../../lib/jobs/run-start.ts';
import { performWeatherCheck } from '../../lib/jobs/weather-check.ts';
import { FALLBACK } from '../../lib/weather/variable.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { block, inState, stage, stateOf, weather } from '../support/import-district.ts';
import { type Fixture, makeFixture, RUN, request } from './district-fixture.ts';

let fresh: TestDatabase;
let made: Fixture;
let token: string;

/** One day's weather at the station, null for no observation. */
type Of = (day: number) => Partial<Record<Variable, number>> | null;
const VARIABLES = [
  'air_temperature_max_c',
  'air_temperature_min_c',
  'dew_point_c',
  'solar_radiation_mj_m2_d',
  'wind_speed_m_s',
  'precipitation_mm',
] as const;
type Variable = (typeof VARIABLES)[number];

const day = (maximum: number, minimum: number, radiation: number, rain = 0) => ({
  air_temperature_max_c: maximum,
  air_temperature_min_c: minimum,
  dew_point_c: 5,
  solar_radiation_mj_m2_d: radiation,
  wind_speed_m_s: 2,
  precipitation_mm: rain,
});

/** Blocks of an April; `day` counts from 1. */
function april(year: number, of: Of) {
  return VARIABLES.map((variable) => block(`${year}-04-01`, ['S1'], (_, at) => of(at + 1)?.[variable] ?? null, variable));
}

/** Rain on the 11th to 14th: 8 mm in 2021, 3 mm in 2022, 20 mm in 2023; 2021 is in the middle. */
const PAST: Record<number, Of> = {
  2021: (at) => day(22, 9, 20, at === 13 ? 8 : 0),
  2022: (at) => day(20, 8, 18, at === 12 ? 3 : 0),
  2023: () => day(24, 10, 22, 5),
};

async function apply(kind: 'stations' | 'weather', staged: Parameters<typeof stage>[1], options: Record<string, unknown> = {}) {
  const own = await stage(made.a.id, staged, options);
  await inState(own, 'ready', 'applying');
  await performApply(own);
  return { ...own, ...(await stateOf(own)), kind };
}

const apply2024 = (of: Of) => apply('weather', weather(april(2024, of), 'Valley'), { source: 'Valley' });
const forecast = (of: Of) => apply('weather', weather(april(2024, of), 'issue of the day'), { role: 'forecast' });

async function runOf(settings: Record<string, unknown> = {}, code = '2024'): Promise<string> {
  const response = await createRun(request('/api/v1/runs', { token, body: { season: code, settings } }));
  const answer = await response.json();
  expect(response.status, JSON.stringify(answer)).toBe(202);
  const job = { districtId: made.a.id, runId: answer.id };
  await startRun(job);
  await computeSlice({ ...job, slice: 0 });
  await finishRun(job);
  return `/api/v1/runs/${answer.id}`;
}

async function json(response: Response) {
  expect(response.status).toBe(200);
  return response.json();
}
const read = async (base: string) => json(await readRun(request(base, { token })));

async function frozen(base: string) {
  const runId = base.slice(base.lastIndexOf('/') + 1);
  return fresh.db.inDistrict(made.a.id, (tx) => loadFrozenSeason(tx, made.a.id, runId, [0]));
}

beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
  token = made.tokens.write;
  const station = { code: 'S1', name: 'One', longitude: -116, latitude: 43.6, elevation: 700, windHeight: 2, zone: null };
  await apply('stations', { kind: 'stations', sites: [station] }, { source: 'Valley' });
  for (const [year, of] of Object.entries(PAST)) await apply('weather', weather(april(Number(year), of), 'Valley'), { source: 'Valley' });
  await apply2024((at) => (at <= 7 ? day(30, 12, 24) : null));
});
afterAll(async () => {
  await stopQueue();
  await fresh.close();
});

describe('a forecast', () => {
  it('has a source of its own, with the stations of the district taken over by their code', async () => {
    const { state, error } = await forecast((at) => (at >= 6 && at <= 10 ? day(26, 11, 21, at === 9 ? 2 : 0) : null));
    expect([state, error]).toEqual(['applied', null]);
    const { items } = await json(await sources(request('/api/v1/weather/sources', { token })));
    expect(items.map(({ name, role }: { name: string; role: string }) => [name, role])).toEqual([
      ['Valley', 'observed'],
      ['Forecast', 'forecast'],
    ]);
    expect(items[0].issued).toBeNull();
    expect(items[1].issued).toMatch(/^\d{4}-\d{2}-\d{2}$/);
    const listed = await json(await sitesList(request('/api/v1/weather/sites', { token })));
    expect(listed.items.map(({ source }: { source: string }) => source)).toEqual(['Valley']);
    const own = await json(await sitesList(request('/api/v1/weather/sites?source=Forecast', { token })));
    expect(own.items).toMatchObject([
      { code: 'S1', source: 'Forecast', elevation_m: 700, first_day: '2024-04-06', last_day: '2024-04-10' },
    ]);
  });

  it('leaves what was measured as it is', async () => {
    const valley = await json(await siteDaily(request('/api/v1/weather/sites/S1/daily?from=2024-04-01&to=2024-04-30', { token })));
    expect(valley.last_day).toBe('2024-04-07');
    expect(valley.items.map((one: { day_kind: string }) => one.day_kind)).toEqual(Array(7).fill('observed'));
    const told = await json(await siteDaily(request('/api/v1/weather/sites/S1/daily?source=Forecast', { token })));
    expect(told.items.map((one: { day_kind: string }) => one.day_kind)).toEqual(Array(5).fill('forecast'));
  });

  it('takes no observations, nor observations a forecast', async () => {
    const mixed = await apply('weather', weather(april(2024, () => day(1, 0, 1))), { source: 'Valley', role: 'forecast' });
    expect(mixed).toMatchObject({
      state: 'failed',
      error: expect.stringMatching(/"Valley" is a source of observations: it takes no forecast/),
    });
    const other = await apply('weather', weather(april(2024, () => day(1, 0, 1))), { source: 'Forecast', role: 'observed' });
    expect(other).toMatchObject({ state: 'failed', error: expect.stringMatching(/"Forecast" is a forecast: it takes no observations/) });
    expect(importOptions.safeParse({ role: 'guess' }).success).toBe(false);
    expect(importOptions.safeParse({ role: 'forecast' }).success).toBe(true);
  });

  it('of a station that nobody knows is refused', async () => {
    const blocks = [block('2024-04-01', ['S9'], () => 1)];
    expect(await apply('weather', weather(blocks), { role: 'forecast' })).toMatchObject({
      state: 'failed',
      error: expect.stringMatching(/S9/),
    });
  });

  it('is not checked, and cannot be the source of a run', async () => {
    await performWeatherCheck({ districtId: made.a.id, sourceId: 2 }, '2024-05-01');
    const refused = await createRun(request('/api/v1/runs', { token, body: { season: '2024', settings: { source: 'Forecast' } } }));
    expect(refused.status).toBe(422);
    expect((await refused.json()).detail).toMatch(/is a forecast/);
    const unknown = await createRun(request('/api/v1/runs', { token, body: { season: '2024', settings: { forecast_source: 'Oracle' } } }));
    expect((await unknown.json()).detail).toMatch(/"Oracle" is not a forecast of this district; known: Forecast/);
  });
});

describe('a season in progress', () => {
  let base: string;
  beforeAll(async () => {
    base = await runOf();
  });

  it('is observed, then forecast, then normal', async () => {
    const { days } = await json(await daily(request(`${base}/parcels/P-1/daily`, { token })));
    expect(days.map((one: { day_kind: string }) => one.day_kind)).toEqual([
      ...Array(7).fill('observed'),
      ...Array(3).fill('forecast'),
      ...Array(4).fill('normal'),
    ]);
    expect(days[8].fallbacks).toEqual(['aheadFromForecast']);
    expect(days[11].fallbacks).toEqual(['aheadFromNormal']);
    const rain = days.map((one: { precipitation_mm: number }) => one.precipitation_mm);
    expect(rain).toEqual([0, 0, 0, 0, 0, 0, 0, 0, 2, 0, 0, 0, 8, 0]);
  });

  it('has the means of the three years, and the forecast as it is', async () => {
    const { weather: carried } = await frozen(base);
    const at = (date: string) => dayNumber(date) - dayNumber(RUN.start);
    const values = (date: string) =>
      (['airTemperatureMax', 'airTemperatureMin', 'solarRadiation', 'windSpeed2m'] as const).map((name) => carried[name][at(date)]);
    expect(values('2024-04-06')).toEqual([30, 12, 24, 2]);
    expect(values('2024-04-09')).toEqual([26, 11, 21, 2]);
    // (20 + 22 + 24) / 3, (8 + 9 + 10) / 3, (18 + 20 + 22) / 3
    values('2024-04-12').forEach((value, i) => {
      expect(value).toBeCloseTo([22, 9, 20, 2][i], 6);
    });
    expect(carried.flags[at('2024-04-12')]).toBe(FALLBACK.aheadFromNormal);
  });

  it('says by period how many days are of each kind', async () => {
    const { items } = await json(await runParcels(request(`${base}/parcels?period=week&parcel=P-1`, { token })));
    expect(items).toMatchObject([
      { start: '2024-04-01', observed_days: 7, filled_days: 0, forecast_days: 0, normal_days: 0, analogue_days: 0, estimated_share: 0 },
      { start: '2024-04-08', observed_days: 0, filled_days: 0, forecast_days: 3, normal_days: 4, analogue_days: 0, estimated_share: 1 },
    ]);
    const csv = await (await daily(request(`${base}/parcels/P-1/daily.csv`, { token }))).text();
    const [head, ...lines] = csv.trim().split('\r\n');
    const column = head.split(',').indexOf('day_kind');
    expect(lines.map((line) => line.split(',')[column])).toEqual([
      ...Array(7).fill('observed'),
      ...Array(3).fill('forecast'),
      ...Array(4).fill('normal'),
    ]);
  });

  it('tells what it rests on', async () => {
    const run = await read(base);
    expect(run.days_ahead).toMatchObject({
      ...{ last_observed: '2024-04-07', first_ahead: '2024-04-08', first_beyond_forecast: '2024-04-11', analogue_year: null },
      ...{ observed_days: 7, forecast_days: 3, normal_days: 4, analogue_days: 0 },
      forecast: { source: 'Forecast', first_day: '2024-04-08', last_day: '2024-04-10', issued: expect.stringMatching(/^\d{4}-/) },
      normals: { years: 3, of: '2021–2023', window_days: 15, rain_year: 2021 },
    });
    expect(run.warnings.join(' ')).toMatch(
      /Days from 2024-04-08 lie past the last observation: 3 days of the forecast Forecast, 4 days of normals of 3 years/,
    );
    expect(run.balance.fallback_shares).toMatchObject({ aheadFromForecast: 3 / 14, aheadFromNormal: 4 / 14 });
    const map = await json(await mapDescription(request(`${base}/map`, { token })));
    expect(map.ahead).toEqual({ from: '2024-04-08', forecast_to: '2024-04-10', beyond: 'normal' });
  });

  it('by an analogue year: its days as they were, after the forecast', async () => {
    const other = await runOf({ ahead: 'analogue', analogue_year: 2023 });
    const { days } = await json(await daily(request(`${other}/parcels/P-1/daily`, { token })));
    expect(days.slice(10).map((one: { day_kind: string }) => one.day_kind)).toEqual(Array(4).fill('analogue'));
    expect(days.slice(10).map((one: { precipitation_mm: number }) => one.precipitation_mm)).toEqual([5, 5, 5, 5]);
    const { weather: carried } = await frozen(other);
    expect([...carried.airTemperatureMax.slice(10)]).toEqual([24, 24, 24, 24]);
    expect((await read(other)).days_ahead).toMatchObject({ analogue_days: 4, normal_days: 0, normals: null, analogue_year: 2023 });
  });

  it('refuses an analogue year that is not on record, or not given', async () => {
    const failed = await read(await runOf({ ahead: 'analogue', analogue_year: 2015 }));
    expect(failed).toMatchObject({ state: 'failed', error: expect.stringMatching(/analogue_year 2015 is not on record/) });
    const response = await createRun(request('/api/v1/runs', { token, body: { season: '2024', settings: { ahead: 'analogue' } } }));
    expect((await response.json()).detail).toMatch(/needs an analogue_year/);
  });

  it('refused, a season that runs past the last observation fails in words', async () => {
    expect(await read(await runOf({ ahead: 'refuse' }))).toMatchObject({
      state: 'failed',
      error: expect.stringMatching(/weather on record to \d{4}-\d{2}-\d{2}.*"ahead" refuses days to come.*Import the days/s),
    });
  });

  it('normals of reference ET carried from the site are means of the reference ET of the years', async () => {
    const at = await frozen(await runOf({ reference_et: 'at-sites' }));
    const observed = await frozen(await runOf({ reference_et: 'at-sites', ahead: 'analogue', analogue_year: 2021 }));
    const low = await frozen(await runOf({ reference_et: 'at-sites', ahead: 'analogue', analogue_year: 2022 }));
    const high = await frozen(await runOf({ reference_et: 'at-sites', ahead: 'analogue', analogue_year: 2023 }));
    const on = (input: typeof at, day: number) => input.weather.referenceEt?.[day] ?? Number.NaN;
    // the days of one year differ by the sun alone, evenly over the window of 15 days but for its ends
    expect(on(at, 12)).toBeCloseTo((on(observed, 12) + on(low, 12) + on(high, 12)) / 3, 1);
  });
});

describe('a grid that gives reference ET and rain, and no temperature', () => {
  /** Reference ET by year [mm], and rain every day of it. */
  const GIVEN: readonly (readonly [number, number, number])[] = [
    [2022, 4, 0],
    [2023, 7, 2],
    [2024, 3, 0],
  ];

  it('takes its own normals, read in parts; a forecast without reference ET has it computed', async () => {
    const districtId = made.a.id;
    await fresh.db.inDistrict(districtId, async (tx) => {
      const grid = { rows: 2, columns: 2, kind: 'rectilinear', x: [-116.05, -115.95], y: [43.65, 43.55], crs: 'EPSG:4326' };
      await tx.insert(weatherSource).values({ districtId, sourceId: 9, name: 'cells', kind: 'grid', rank: 9, grid });
      const at = (ordinal: number) => ({ gridRow: ordinal >> 1, gridColumn: ordinal & 1, longitude: [-116.05, -115.95][ordinal & 1] });
      const cell = (ordinal: number) => ({ ...at(ordinal), ordinal, code: `c${ordinal}`, latitude: [43.65, 43.55][ordinal >> 1] });
      await tx.insert(site).values([0, 1, 2, 3].map((i) => ({ districtId, sourceId: 9, name: '', elevation: 700, ...cell(i) })));
      for (const [year, et, rain] of GIVEN) {
        const known = (i: number) => year < 2024 || i % 30 < 7;
        for (const [variable, value] of [
          ['reference_et_given_mm', et],
          ['precipitation_mm', rain],
        ] as const) {
          const values = Float32Array.from({ length: 4 * 30 }, (_, i) => (known(i) ? value : Number.NaN));
          const quality = Uint8Array.from(values, (one) => (Number.isNaN(one) ? 0 : 1));
          const block = { districtId, sourceId: 9, variable, month: `${year}-04-01`, siteCount: 4, dayCount: 30, quality };
          await tx.insert(weatherBlock).values({ ...block, values: new Uint8Array(values.buffer) });
        }
      }
    });
    const base = await runOf({ source: 'cells' });
    const run = await read(base);
    expect(run.error).toBeNull();
    expect(run.manifest).toMatchObject({ reference_et: 'given', weather_source: 'cells' });
    expect(run.days_ahead).toMatchObject({ observed_days: 7, forecast_days: 3, normal_days: 4, normals: { years: 2, rain_year: 2023 } });
    const { weather: carried } = await frozen(base);
    const given = [...(carried.referenceEt as Float64Array).slice(0, 14)];
    expect(given.slice(0, 7)).toEqual(Array(7).fill(3));
    // FAO-56 Table 2: a moderate day of a temperate, dry climate has 4 to 7 mm
    for (const value of given.slice(7, 10)) expect(value).toBeGreaterThan(3.5);
    expect(carried.flags[8] & FALLBACK.referenceEtFromDailyWeather).not.toBe(0);
    expect(given.slice(10)).toEqual(Array(4).fill(5.5));
    expect([...carried.precipitation.slice(10, 14)]).toEqual([2, 2, 2, 2]);
    const { days } = await json(await daily(request(`${base}/parcels/P-1/daily`, { token })));
    expect(days[13].reference_et_mm).toBeCloseTo(5.5, 2);
  });
});

describe('a season of which nothing has been observed', () => {
  it('rests on normals where at least two years are on record', async () => {
    await fresh.db.inDistrict(made.a.id, async (tx) => {
      const own = { districtId: made.a.id };
      await tx.insert(season).values({ ...own, code: 'plan', name: 'Plan', startDate: '2025-04-05', endDate: '2025-04-25' });
      await tx.insert(season).values({ ...own, code: 'lone', name: 'Lone', startDate: '2025-06-01', endDate: '2025-06-20' });
      await tx.insert(season).values({ ...own, code: 'far', name: 'Far', startDate: '2031-04-01', endDate: '2031-04-20' });
      const common = { ...own, parcelCode: 'P-1', sequence: 1, cropCode: 'maize-grain', calendarCode: 'maize-grain-idaho' };
      for (const [seasonCode, plantingDate] of [
        ['plan', '2025-04-06'],
        ['lone', '2025-06-02'],
        ['far', '2031-04-02'],
      ])
        await tx.insert(planting).values({ ...common, seasonCode, plantingDate });
    });
    const base = await runOf({}, 'plan');
    const run = await read(base);
    expect(run.error).toBeNull();
    expect(run.days_ahead).toMatchObject({ observed_days: 0, normal_days: 21, forecast_days: 0, last_observed: '2024-04-07' });
    // of 2024 a week is on record, which is less than half of the days
    expect(run.days_ahead.normals).toMatchObject({ years: 3, of: '2021–2023' });
    const { weather: carried } = await frozen(base);
    expect(carried.airTemperatureMax[20]).toBeCloseTo(22, 9);
    // what is fitted is fitted to a year that has been observed: nothing of this season is measured
    expect((await read(await runOf({ interpolation: 'automatic' }, 'plan'))).state).toBe('done');
  });

  it('is refused in words where no year tells, or it lies too far ahead', async () => {
    const none = await read(await runOf({}, 'lone'));
    expect(none).toMatchObject({ state: 'failed', error: expect.stringMatching(/0 years are on record .* at least 2 are needed/) });
    const far = await read(await runOf({}, 'far'));
    expect(far).toMatchObject({ state: 'failed', error: expect.stringMatching(/at most 1096 days after it/) });
  });
});

describe('when more is known', () => {
  it('a new issue of the forecast replaces the old day by day, and marks the run stale', async () => {
    const base = await runOf();
    expect((await read(base)).stale_since).toBeNull();
    const issue = await forecast((at) => (at >= 9 && at <= 11 ? day(28, 12, 23) : null));
    expect(issue.understood.applied.seasons).toContain('2024');
    expect((await read(base)).stale_reason).toBe('import of weather applied');
    const again = await runOf();
    const { weather: carried } = await frozen(again);
    expect([...carried.airTemperatureMax.slice(6, 11)]).toEqual([30, 26, 28, 28, 28]);
    expect((await read(again)).days_ahead).toMatchObject({ forecast_days: 4, normal_days: 3 });
  });

  it('an undone issue gives the older one back', async () => {
    const { importId, districtId } = await forecast((at) => (at === 12 ? day(40, 20, 25) : null));
    await inState({ importId, districtId }, 'applied', 'undoing');
    await performUndo({ importId, districtId });
    expect((await read(await runOf())).days_ahead).toMatchObject({ forecast_days: 4 });
  });

  it('weather of a past year marks a season with days ahead stale: its normals move', async () => {
    const base = await runOf();
    const past = await apply(
      'weather',
      weather(
        april(2020, () => day(30, 13, 28)),
        'Valley',
      ),
      { source: 'Valley' },
    );
    expect(past.understood.applied.seasons).toContain('2024');
    expect((await read(base)).stale_since).not.toBeNull();
    const { weather: carried } = await frozen(await runOf());
    // (20 + 22 + 24 + 30) / 4
    expect(carried.airTemperatureMax[13]).toBeCloseTo(24, 6);
  });

  it('observations take the place of days ahead, and nothing is told any more', async () => {
    const base = await runOf();
    await apply2024((at) => (at >= 8 && at <= 14 ? day(27, 10, 22, 1) : null));
    expect((await read(base)).stale_since).not.toBeNull();
    const now = await runOf();
    const { days } = await json(await daily(request(`${now}/parcels/P-1/daily`, { token })));
    expect(new Set(days.map((one: { day_kind: string }) => one.day_kind))).toEqual(new Set(['observed']));
    expect(days[13].precipitation_mm).toBe(1);
    const run = await read(now);
    expect(run.days_ahead).toMatchObject({ first_ahead: null, observed_days: 14, forecast: null, last_observed: '2024-04-14' });
    expect(run.warnings.filter((warning: string) => warning.includes('past the last observation'))).toEqual([]);
  });
});
