/**
 * The band of a run from the queue's steps to the API. A band without error is held against what the run itself stored, to the bit; one with errors against
 * relations that hold for any: order of the quantiles, depth × area, the same bytes after a kill.
 */
import { sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as bandRoute } from '../../app/api/v1/runs/[id]/band/route.ts';
import { POST as cancelRun } from '../../app/api/v1/runs/[id]/cancel/route.ts';
import { GET as readRun } from '../../app/api/v1/runs/[id]/route.ts';
import { POST as createRun } from '../../app/api/v1/runs/route.ts';
import { isJobWaiting } from '../../db/queries/queue-job.ts';
import { findBandValues, saveBandState } from '../../db/queries/run-band.ts';
import { findRunValues, listRunReaches } from '../../db/queries/run-read.ts';
import { findRun } from '../../db/queries/run-state.ts';
import { site, weatherBlock, weatherSource } from '../../db/schema/weather.ts';
import { referenceEtDay } from '../../lib/energy/reference-day.ts';
import { closeBandThreads } from '../../lib/jobs/band-threads.ts';
import { bandWeatherError } from '../../lib/jobs/band-weather-error.ts';
import { workOnBand } from '../../lib/jobs/band-work.ts';
import { loadFrozenSeason } from '../../lib/jobs/frozen-season.ts';
import { type JobData, stopQueue, workOn } from '../../lib/jobs/queue.ts';
import { afterRun, type BandJob, type BandState, failBand, settingsOf } from '../../lib/jobs/run-band.ts';
import { finishRun } from '../../lib/jobs/run-finish.ts';
import { computeSlice } from '../../lib/jobs/run-slice.ts';
import { startRun } from '../../lib/jobs/run-start.ts';
import { NO_FIELD_ERRORS } from '../../lib/season/band-factors.ts';
import { FALLBACK } from '../../lib/weather/variable.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { near } from '../support/near.ts';
import { cookieOf, type Fixture, makeFixture, request } from './district-fixture.ts';

let fresh: TestDatabase;
let made: Fixture;
let token: string;
let key: { districtId: string; runId: string };
let base: string;

beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
  token = made.tokens.write;
  await makeWeather();
  const settings = { initial_depletion: 0.9, band_members: 30, band_seed: 7 };
  const response = await createRun(request('/api/v1/runs', { token, body: { season: '2024', settings } }));
  const { id } = await response.json();
  key = { districtId: made.a.id, runId: id };
  base = `/api/v1/runs/${id}`;
  await startRun(key);
  await computeSlice({ ...key, slice: 0 });
  await finishRun(key);
});
afterAll(async () => {
  await stopQueue();
  await closeBandThreads();
  await fresh.close();
});

/** A dry, warm April at two stations, one a little warmer than the other. */
async function makeWeather() {
  const districtId = made.a.id;
  const weather = { air_temperature_min_c: 12, dew_point_c: 5, wind_speed_m_s: 3, solar_radiation_mj_m2_d: 24, precipitation_mm: 0 };
  await fresh.db.inDistrict(districtId, async (tx) => {
    await tx.insert(weatherSource).values({ districtId, sourceId: 1, name: 'stations' });
    for (const [ordinal, code] of ['S1', 'S2'].entries()) {
      const place = { longitude: -116 + 0.2 * ordinal, latitude: 43.6, elevation: 700, windHeight: 2 };
      await tx.insert(site).values({ districtId, sourceId: 1, ordinal, code, name: code, ...place });
    }
    for (const [variable, value] of Object.entries({ ...weather, air_temperature_max_c: Number.NaN })) {
      const days = Float32Array.from({ length: 60 }, (_, i) => (Number.isNaN(value) ? (i < 30 ? 30 : 33 - (i % 3)) : value));
      const block = {
        districtId,
        sourceId: 1,
        variable,
        month: '2024-04-01',
        siteCount: 2,
        dayCount: 30,
        values: new Uint8Array(days.buffer),
      };
      await tx.insert(weatherBlock).values({ ...block, quality: new Uint8Array(60).fill(1) });
    }
  });
}

/** Puts the band in hand, with other errors where asked for. */
async function plan(change: (band: BandState) => Partial<BandState> = () => ({})): Promise<BandState> {
  return fresh.db.inDistrict(key.districtId, async (tx) => {
    const run = await findRun(tx, key.districtId, key.runId);
    if (!run) throw new Error('no run');
    await afterRun(tx, key, run);
    const band = (await findRun(tx, key.districtId, key.runId))?.band as BandState;
    const changed = { ...band, ...change(band) };
    await saveBandState(tx, key, changed);
    return changed;
  });
}

async function finish(parts: number): Promise<void> {
  await workOnBand({ ...key, step: 'plan' });
  for (let part = 0; part < parts; part++) await workOnBand({ ...key, step: 'part', part });
  await workOnBand({ ...key, step: 'finish' });
}

async function json(response: Response) {
  expect(response.status).toBe(200);
  return response.json();
}

async function bandOf(query: string, as: { token?: string; cookie?: string } = { token }) {
  return json(await bandRoute(request(`${base}/band?${query}`, as)));
}

type Level = Parameters<typeof findBandValues>[2];

function kept(level: Level['level'], variable: string, period: Level['period']): Promise<Float32Array> {
  return fresh.db.inDistrict(key.districtId, async (tx) => {
    const found = await findBandValues(tx, key, { level, variable, period }, null);
    return new Float32Array(Uint8Array.from(found?.values ?? []).buffer);
  });
}

describe('the band of a run', () => {
  it('is in hand once the run is finished, and says where it stands', async () => {
    expect(await fresh.db.inDistrict(key.districtId, (tx) => isJobWaiting(tx, 'run-band', `${key.runId}/plan`))).toBe(true);
    const run = await json(await readRun(request(base, { token })));
    expect(run.band).toMatchObject({ state: 'waiting', members: 30, seed: 7, progress: 0 });
    const answer = await bandOf('level=district');
    expect(answer).toMatchObject({ items: [], next_cursor: null, variable: 'head_inflow', band: { state: 'waiting' } });
  });

  it('without error is what the run itself stored, to the bit', async () => {
    await plan(() => ({ field_errors: NO_FIELD_ERRORS }));
    await workOnBand({ ...key, step: 'plan' });
    await fresh.db.inDistrict(key.districtId, async (tx) => {
      const band = (await findRun(tx, key.districtId, key.runId))?.band as BandState;
      const none = new Array(14).fill(0);
      await saveBandState(tx, key, { ...band, weather: { deviation: none, persistence: none } });
    });
    await workOnBand({ ...key, step: 'part', part: 0 });
    await workOnBand({ ...key, step: 'finish' });
    for (const variable of ['gross_requirement', 'net_requirement', 'adjusted_crop_et']) {
      for (const period of ['week', 'month', 'season'] as const) {
        const stored = await fresh.db.inDistrict(key.districtId, (tx) => findRunValues(tx, key, { variable, period, index: null }));
        const plain = [...new Float32Array(Uint8Array.from(stored?.values ?? []).buffer)];
        expect([...(await kept('parcel', variable, period))]).toEqual([...plain, ...plain, ...plain]);
        expect(Math.max(...plain)).toBeGreaterThan(0);
      }
    }
    const reaches = await fresh.db.inDistrict(key.districtId, (tx) => listRunReaches(tx, key));
    const seasons = reaches.map(({ daily }) => {
      const days = new Float64Array(Uint8Array.from(daily).buffer).subarray(28, 42); // head inflow of the fourteen days
      return Math.fround(days.reduce((sum, value) => sum + value, 0));
    });
    expect(Math.max(...seasons)).toBeGreaterThan(0);
    expect([...(await kept('reach', 'head_inflow', 'season'))]).toEqual([...seasons, ...seasons, ...seasons]);
  });

  it('is computed, told by level, and in units of the reader', async () => {
    const { parts } = await plan();
    await finish(parts);
    const run = await json(await readRun(request(base, { token })));
    expect(run.band).toMatchObject({
      state: 'done',
      progress: 1,
      weather_error: { observed: { from: 'leave-one-out over 2 sites' }, ahead: null },
    });
    expect(run.band.weather_error.observed.deviation).toBeGreaterThan(0.005);
    expect(run.band.weather_error.observed.deviation).toBeLessThan(0.1); // 30 °C against 31 to 33 °C

    const parcels = await bandOf('level=parcel&period=week');
    expect(parcels.items).toHaveLength(3 * 2);
    for (const row of parcels.items) {
      expect(row.p10_mm).toBeLessThanOrEqual(row.p50_mm);
      expect(row.p50_mm).toBeLessThanOrEqual(row.p90_mm);
    }
    const [season] = (await bandOf('level=parcel&place=P-1')).items;
    expect(season).toMatchObject({ place: 'P-1', start: '2024-04-01', end: '2024-04-14' });
    expect(season.p90_mm).toBeGreaterThan(season.p10_mm);
    near(season.p90_m3, season.p90_mm * 10, 0.06); // 1 ha

    const reaches = await bandOf('level=reach');
    expect(reaches.items.map(({ place }: { place: string }) => place)).toEqual(['L', 'M']);
    const [district] = (await bandOf('level=district')).items;
    const main = reaches.items[1];
    expect([district.p10_m3, district.p90_m3]).toEqual([main.p10_m3, main.p90_m3]);
    expect(district.p10_mm).toBeNull();
    const us = (await bandOf('level=parcel&place=P-1&units=us')).items[0];
    near(us.p90_in, season.p90_mm / 25.4, 1e-6);
    const lines = (await (await bandRoute(request(`${base}/band.csv?level=parcel&period=week`, { token }))).text()).trim().split('\r\n');
    expect(lines[0]).toBe('place,start,end,p10_mm,p50_mm,p90_mm,p10_m3,p50_m3,p90_m3');
    expect(lines).toHaveLength(7);
  });

  it('pages through the parcels', async () => {
    const first = await bandOf('level=parcel&period=week&limit=4');
    expect(first.items).toHaveLength(4);
    const rest = await bandOf(`level=parcel&period=week&limit=4&cursor=${first.next_cursor}`);
    expect(rest.next_cursor).toBeNull();
    const whole = await bandOf('level=parcel&period=week');
    expect([...first.items, ...rest.items]).toEqual(whole.items);
  });

  it('shows growers their own parcels and nothing of canals', async () => {
    const cookie = await cookieOf('gus');
    expect((await bandOf('level=parcel', { cookie })).items.map(({ place }: { place: string }) => place)).toEqual(['P-2']);
    expect((await bandOf('level=reach', { cookie })).items).toEqual([]);
    expect((await bandOf('level=district', { cookie })).items).toEqual([]);
    expect((await bandRoute(request(`${base}/band?level=parcel&place=P-1`, { cookie }))).status).toBe(404);
  });

  it('refuses what is not there, in words', async () => {
    const refusal = await bandRoute(request(`${base}/band?level=reach&variable=net_requirement`, { token }));
    expect(refusal.status).toBe(400);
    expect((await refusal.json()).detail).toMatch(/level "reach", which has: head_inflow/);
    expect((await bandRoute(request(`${base}/band?level=reach&place=X`, { token }))).status).toBe(404);
    expect((await bandRoute(request(`${base}/band?level=parcel&place=X`, { token }))).status).toBe(404);
    expect((await bandRoute(request(`/api/v1/runs/${made.otherRunId}/band`, { token }))).status).toBe(404);
    expect((await bandOf('level=parcel', { token: made.tokens.read })).items).toHaveLength(3);
  });

  it('cut into parts and done again after a kill comes to the same bytes', async () => {
    const whole = await kept('reach', 'head_inflow', 'week');
    const parcels = await kept('parcel', 'gross_requirement', 'week');
    const { parts } = await plan(() => ({ parts: 3, parcels_per_part: 1 }));
    await workOnBand({ ...key, step: 'plan' });
    await workOnBand({ ...key, step: 'part', part: 0 });
    await workOnBand({ ...key, step: 'part', part: 0 }); // tried again after its lease ran out
    await workOnBand({ ...key, step: 'finish' }); // too early: parts are missing
    expect((await bandOf('level=reach')).items).toEqual([]);
    expect((await json(await readRun(request(base, { token })))).band).toMatchObject({ state: 'running' });
    await finish(parts);
    expect(await kept('parcel', 'gross_requirement', 'week')).toEqual(parcels);
    const again = await kept('reach', 'head_inflow', 'week');
    again.forEach((value, i) => {
      near(value, whole[i], 1e-6 * Math.abs(whole[i]));
    });
  });

  it('goes through the queue by itself', async () => {
    const parcels = await kept('parcel', 'gross_requirement', 'week');
    // what the tests before asked for by hand still waits, in pieces of another size
    await fresh.db.outside.execute(sql`delete from pgboss.job where name = 'run-band'`);
    await plan(() => ({ parts: 2, parcels_per_part: 2 }));
    await workOn<BandJob & JobData>('run-band', workOnBand, { concurrency: 2 });
    await expect
      .poll(async () => (await json(await readRun(request(base, { token })))).band, { timeout: 40_000 })
      .toMatchObject({ state: 'done' });
    expect(await kept('parcel', 'gross_requirement', 'week')).toEqual(parcels);
    await stopQueue();
  });

  it('can be called off, and a failure leaves the run standing', async () => {
    await plan();
    const cancel = () => cancelRun(request(`${base}/cancel`, { token, method: 'POST' }));
    expect((await cancel()).status).toBe(200);
    expect((await cancel()).status).toBe(409);
    await finish(1);
    const cancelled = await json(await readRun(request(base, { token })));
    expect(cancelled).toMatchObject({ state: 'done', standing: true, band: { state: 'cancelled' } });
    await plan();
    await failBand(key, 'no luck');
    expect((await json(await readRun(request(base, { token })))).band).toMatchObject({ state: 'failed', error: 'no luck' });
  });
});

describe('the weather error of days to come', () => {
  /** Three Aprils of one maximum temperature each, at both stations. */
  const YEARS = { 2021: 25, 2022: 30, 2023: 35 };

  it('is the spread of the years on record, on top of that of carrying weather', async () => {
    const { districtId } = key;
    await fresh.db.inDistrict(districtId, async (tx) => {
      const same = { air_temperature_min_c: 12, dew_point_c: 5, wind_speed_m_s: 3, solar_radiation_mj_m2_d: 24, precipitation_mm: 0 };
      for (const [year, maximum] of Object.entries(YEARS)) {
        for (const [variable, value] of Object.entries({ ...same, air_temperature_max_c: maximum })) {
          const values = new Uint8Array(new Float32Array(60).fill(value).buffer);
          const block = { districtId, sourceId: 1, variable, month: `${year}-04-01`, siteCount: 2, dayCount: 30, values };
          await tx.insert(weatherBlock).values({ ...block, quality: new Uint8Array(60).fill(1) });
        }
      }
    });
    const told = await fresh.db.inDistrict(districtId, async (tx) => {
      const run = await findRun(tx, districtId, key.runId);
      const season = await loadFrozenSeason(tx, districtId, key.runId, [0]);
      const flags = season.weather.flags.map((bits, i) => (i % 14 >= 10 ? bits | FALLBACK.aheadFromNormal : bits));
      const wanted = { startDate: '2024-04-01', dayCount: 14, settings: settingsOf(run as NonNullable<typeof run>), manifest: {} };
      return bandWeatherError(tx, districtId, wanted, { ...season, weather: { ...season.weather, flags } });
    });
    expect(told.record.ahead).toMatchObject({ from: 'spread of 3 years', days: 4, persistence: 0.98 });
    const et = Object.values(YEARS).map((maximum) => {
      let sum = 0;
      for (let day = 102; day <= 105; day++) sum += referenceEtDay({ ...PLACE, dayOfYear: day, airTemperatureMax: maximum }, null) / 4;
      return sum;
    });
    const mean = (et[0] + et[1] + et[2]) / 3;
    const spread = Math.sqrt(et.reduce((sum, value) => sum + (value - mean) ** 2, 0) / 2) / mean;
    near((told.record.ahead?.deviation ?? 0) / spread, 1, 0.01);
    const { deviation, persistence } = told.error;
    expect([deviation[0], persistence[0]]).toEqual([deviation[9], persistence[9]]);
    near(deviation[13] ** 2, deviation[9] ** 2 + spread ** 2, 0.01 * spread ** 2);
  });

  /** ea at a dew point of 5 °C: 0.8726 kPa (FAO-56 Annex 2, Table 2.3: 0.872); day 102 is 11 April in a leap year. */
  const PLACE = {
    method: 'fao56',
    surface: 'short',
    latitude: 43.6,
    elevation: 700,
    airTemperatureMin: 12,
    actualVapourPressure: 0.8726,
    solarRadiation: 24,
    windSpeed2m: 3,
  } as const;
});
