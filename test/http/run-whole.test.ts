/**
 * A whole run through the API: asked for, computed, read back. Checks are of consistency between what is stored, what is derived again and
 * what a period sums, and of FAO-56 relations that hold for any input: gross = net / Ea, ETc,adj ≤ ETc, 0 ≤ Dr ≤ TAW (Eq. 85–86).
 */
import { and, eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as daily } from '../../app/api/v1/runs/[id]/parcels/[code]/daily/route.ts';
import { GET as working } from '../../app/api/v1/runs/[id]/parcels/[code]/working/route.ts';
import { GET as runParcels } from '../../app/api/v1/runs/[id]/parcels/route.ts';
import { GET as readRun } from '../../app/api/v1/runs/[id]/route.ts';
import { GET as summary } from '../../app/api/v1/runs/[id]/summary/route.ts';
import { POST as createRun } from '../../app/api/v1/runs/route.ts';
import { saveRunValue } from '../../db/queries/run-results.ts';
import { runParcel, runValue } from '../../db/schema/run.ts';
import { site, weatherBlock, weatherSource } from '../../db/schema/weather.ts';
import { stopQueue } from '../../lib/jobs/queue.ts';
import { finishRun } from '../../lib/jobs/run-finish.ts';
import { computeSlice } from '../../lib/jobs/run-slice.ts';
import { startRun } from '../../lib/jobs/run-start.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { cookieOf, type Fixture, makeFixture, request } from './district-fixture.ts';

let fresh: TestDatabase;
let made: Fixture;
let base: string;
let token: string;
let runId: string;
beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
  token = made.tokens.write;
  await makeWeather();
  const response = await createRun(request('/api/v1/runs', { token, body: { season: '2024', settings: { initial_depletion: 0.9 } } }));
  expect(response.status).toBe(202);
  const { id, state } = await response.json();
  expect(state).toBe('queued');
  const job = { districtId: made.a.id, runId: id };
  await startRun(job);
  await startRun(job); // every piece may come twice: its process may have died before it could say that it was done
  await computeSlice({ ...job, slice: 0 });
  await computeSlice({ ...job, slice: 0 });
  await finishRun(job);
  await finishRun(job);
  runId = id;
  base = `/api/v1/runs/${id}`;
});
afterAll(async () => {
  await stopQueue();
  await fresh.close();
});

/** A dry, warm April at one site. */
async function makeWeather() {
  const districtId = made.a.id;
  const weather = {
    air_temperature_max_c: 30,
    air_temperature_min_c: 12,
    dew_point_c: 5,
    wind_speed_m_s: 3,
    solar_radiation_mj_m2_d: 24,
    precipitation_mm: 0,
  };
  await fresh.db.inDistrict(districtId, async (tx) => {
    await tx.insert(weatherSource).values({ districtId, sourceId: 1, name: 'stations' });
    const place = { longitude: -116, latitude: 43.6, elevation: 700, windHeight: 2 };
    await tx.insert(site).values({ districtId, sourceId: 1, ordinal: 0, code: 'S1', name: 'One', ...place });
    for (const [variable, value] of Object.entries(weather)) {
      const values = new Uint8Array(new Float32Array(30).fill(value).buffer);
      const block = { districtId, sourceId: 1, variable, month: '2024-04-01', siteCount: 1, dayCount: 30, values };
      await tx.insert(weatherBlock).values({ ...block, quality: new Uint8Array(30).fill(1) });
    }
  });
}

async function json(response: Response) {
  expect(response.status).toBe(200);
  return response.json();
}

describe('a whole run', () => {
  it('is done, standing, and closes its balance', async () => {
    const run = await json(await readRun(request(base, { token })));
    expect(run).toMatchObject({ state: 'done', standing: true, progress: 1, parcel_count: 3 });
    expect(run.settings).toMatchObject({ initial_depletion: 0.9, method: 'fao56' });
    expect(run.balance.max_residual_mm).toBeLessThan(1e-6);
  });

  it('stores every parcel once, with stages and what is left in the soil, and keeps nothing of its slices', async () => {
    const ofRun = <T extends typeof runParcel | typeof runValue>(table: T) => and(eq(table.districtId, made.a.id), eq(table.runId, runId));
    const [parcels, values] = await fresh.db.inDistrict(made.a.id, async (tx) => [
      await tx.select().from(runParcel).where(ofRun(runParcel)).orderBy(runParcel.position),
      await tx.select({ period: runValue.period }).from(runValue).where(ofRun(runValue)),
    ]);
    expect(parcels.map(({ parcelCode, position, reachCode, cropCodes }) => [parcelCode, position, reachCode, cropCodes])).toEqual([
      ['P-1', 0, 'M', ['maize-grain']],
      ['P-2', 1, 'L', []],
      ['=P-3', 2, 'L', []],
    ]);
    expect(parcels.map(({ stageEt, stageDays }) => [stageEt?.byteLength, stageDays?.byteLength])).toEqual([
      [64, 20],
      [0, 0],
      [0, 0],
    ]);
    for (const { closing } of parcels) expect(closing).toMatchObject({ profile: [{ bottom: expect.any(Number) }] });
    expect(new Set(values.map(({ period }) => period))).toEqual(new Set(['week', 'month', 'season']));
  });

  it('gives a parcel’s season with what it was computed from', async () => {
    const season = await json(await daily(request(`${base}/parcels/P-1/daily`, { token })));
    expect(season.days).toHaveLength(14);
    expect(season.weights).toMatchObject([{ site: 'S1', weight: 1, elevation_m: 700 }]);
    expect(season.weights[0].distance_km).toBeLessThan(0.5);
    expect(season.plantings).toMatchObject([{ crop: 'maize-grain', planting_date: '2024-04-05', area_share: 1 }]);
    for (const day of season.days) {
      expect(day.adjusted_crop_et_mm).toBeLessThanOrEqual(day.crop_et_mm);
      expect(day.root_zone_depletion_mm).toBeGreaterThanOrEqual(0);
      expect(day.root_zone_depletion_mm).toBeLessThanOrEqual(day.total_available_water_mm + 0.01);
      expect(Math.abs(day.gross_requirement_mm - day.net_requirement_mm / season.method.efficiency)).toBeLessThan(0.02);
    }
    const lines = (await (await daily(request(`${base}/parcels/P-1/daily.csv?units=us`, { token }))).text()).trim().split('\r\n');
    expect(lines).toHaveLength(15);
    expect(lines[0]).toContain('root_zone_depletion_in');
  });

  it('derives a day again to what the run stored', async () => {
    const answer = await json(await working(request(`${base}/parcels/P-1/working?date=2024-04-10`, { token })));
    expect(answer.steps.length).toBeGreaterThan(20);
    expect(answer.steps.every((step: { source: string }) => step.source.length > 0)).toBe(true);
    expect(answer.inputs[0]).toMatchObject({ site: 'S1', weight: 1 });
    for (const [name, stored] of Object.entries(answer.stored as Record<string, number>)) {
      expect(Math.abs(answer.results[name] - stored), name).toBeLessThanOrEqual(name.endsWith('_mm') ? 0.00501 : 0.0000501);
    }
    expect((await working(request(`${base}/parcels/P-1/working?date=2024-05-10`, { token }))).status).toBe(400);
    expect((await working(request(`${base}/parcels/P-9/working?date=2024-04-10`, { token }))).status).toBe(404);
    expect((await working(request(`${base}/parcels/P-1/working?date=2024-04-10`, { cookie: await cookieOf('gus') }))).status).toBe(404);
  });

  it('sums days to the season, and parcels to the district', async () => {
    const days = (await json(await runParcels(request(`${base}/parcels?period=day`, { token })))).items;
    const seasons = (await json(await runParcels(request(`${base}/parcels?period=season`, { token })))).items;
    for (const season of seasons) {
      const own = days.filter((day: { parcel: string }) => day.parcel === season.parcel);
      const sum = own.reduce((total: number, day: { crop_et_mm: number }) => total + day.crop_et_mm, 0);
      expect(season.crop_et_mm).toBeCloseTo(sum, 6);
    }
    const { district, by_canal } = await json(await summary(request(`${base}/summary`, { token })));
    const volume = seasons.reduce((total: number, row: { gross_volume_m3: number }) => total + row.gross_volume_m3, 0);
    expect(Math.abs(district.gross_volume_m3 - volume)).toBeLessThan(0.1 + 1e-5 * volume);
    expect(by_canal.reduce((total: number, row: { area_ha: number }) => total + row.area_ha, 0)).toBeCloseTo(7, 6);
  });

  it('keeps an array too large for one statement whole, and again over itself', async () => {
    const values = Uint8Array.from({ length: 40 * 1024 * 1024 }, (_, i) => (i * 2654435761) >>> 24);
    const row = {
      districtId: made.a.id,
      runId,
      variable: 'probe',
      period: 'week',
      periodCount: 1,
      parcelCount: values.length / 4,
      values,
    } as const;
    const probe = and(eq(runValue.runId, runId), eq(runValue.variable, 'probe'));
    const stored = await fresh.db.inDistrict(made.a.id, async (tx) => {
      await saveRunValue(tx, { ...row, values: values.slice().reverse() });
      await saveRunValue(tx, row);
      const rows = await tx.select().from(runValue).where(probe);
      await tx.delete(runValue).where(probe);
      return rows;
    });
    expect(stored.map(({ period }) => period)).toEqual(['week']);
    expect(Buffer.compare(stored[0].values, values)).toBe(0);
  });
});
