/** The whole service killed without warning in the middle of its work: nothing is lost, nothing is doubled, nothing hangs. */
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { expect, test } from '@playwright/test';
import { freePort } from '../db/embedded.ts';
import { type Service, startService } from '../lib/start/service.ts';
import { type Api, csv, featureCollection, newDistrict, square } from './api.ts';

const PARCELS = 4000;
const SEASON = { code: '2024', start_date: '2024-01-01', end_date: '2024-12-31' };

let folder: string;
let port: string;
let service: Service;
let api: Api;

test.describe.configure({ mode: 'serial' });
test.setTimeout(300_000);

test.beforeAll(async () => {
  test.setTimeout(300_000);
  folder = mkdtempSync(join(tmpdir(), 'tillwater-survival-'));
  port = String(await freePort());
  service = await start();
  const setup = /tw_[A-Za-z0-9_-]{43}/.exec(service.output())?.[0] as string;
  const made = await newDistrict(
    `http://127.0.0.1:${port}`,
    { setup },
    { code: 'survival', name: 'Survival (invented)', time_zone: 'UTC' },
  );
  api = made.api;
  await api.ok('POST', '/api/v1/seasons', SEASON);
  await api.bring('stations', {
    'stations.csv': csv(
      ['site', 'latitude', 'longitude', 'elevation'],
      [
        ['007', 40.2, -3.1, 600],
        ['008', 40.4, -3.3, 650],
      ],
    ),
  });
  await api.bring('weather', { 'weather.csv': weatherCsv(['007', '008']) });
});

test.afterAll(async () => {
  await service?.stop();
  rmSync(folder, { recursive: true, force: true });
});

function start(): Promise<Service> {
  return startService(folder, { PORT: port, HOST: '127.0.0.1', TILLWATER_EMPTY: '1', LOG_LEVEL: 'warn' });
}

test('killed while an import is applied: afterwards all of it is there, once', async () => {
  const read = await api.upload('parcels', { 'parcels.geojson': parcels() }, { season: SEASON.code });
  expect(read.state).toBe('ready');
  await api.ok('POST', `/api/v1/imports/${read.id}/apply`);
  const before = await api.ok('GET', `/api/v1/imports/${read.id}?preview=0`);
  expect(before.state).toBe('applying');
  await service.kill();
  service = await start();
  const applied = await api.settled(`/api/v1/imports/${read.id}`, ['applied', 'failed'], 180_000);
  expect(applied.state, applied.error ?? '').toBe('applied');
  const stored = await api.all('/api/v1/parcels');
  expect(stored).toHaveLength(PARCELS);
  expect(new Set(stored.map((parcel) => parcel.code)).size).toBe(PARCELS);
  expect(await api.all(`/api/v1/plantings?season=${SEASON.code}`)).toHaveLength(PARCELS);
  // applying it again changes nothing
  await api.ok('POST', `/api/v1/imports/${read.id}/apply`);
  expect((await api.ok('GET', '/api/v1/district')).counts.parcels).toBe(PARCELS);
});

test('killed in the middle of a run: the run goes on to its end with the same numbers as an undisturbed one', async () => {
  const { id } = await api.ok('POST', '/api/v1/runs', { season: SEASON.code });
  await expect.poll(async () => (await api.ok('GET', `/api/v1/runs/${id}`)).state, { timeout: 60_000, intervals: [50] }).toBe('running');
  await service.kill();
  service = await start();
  const resumed = await api.settled(`/api/v1/runs/${id}`, ['done', 'failed'], 240_000);
  expect(resumed.state, resumed.error ?? '').toBe('done');
  const undisturbed = await api.run(SEASON.code);
  expect(undisturbed.state).toBe('done');
  const [a, b] = [await api.ok('GET', `/api/v1/runs/${id}/summary`), await api.ok('GET', `/api/v1/runs/${undisturbed.id}/summary`)];
  expect(a.district).toEqual(b.district);
  expect(a.district.parcel_count).toBe(PARCELS);
  expect(a.weeks).toEqual(b.weeks);
  const standing = (await api.ok('GET', '/api/v1/runs')).items.filter((run: { standing: boolean }) => run.standing);
  expect(standing.map((run: { id: string }) => run.id)).toEqual([undisturbed.id]);
});

test('stops in order when asked to, and starts again with everything in place', async () => {
  await service.stop();
  const began = Date.now();
  service = await start();
  test.info().annotations.push({ type: 'figure', description: `a later start took ${((Date.now() - began) / 1000).toFixed(1)} s` });
  expect((await api.ok('GET', '/api/v1/district')).counts.parcels).toBe(PARCELS);
});

function parcels(): string {
  const columns = 64;
  return featureCollection(
    Array.from({ length: PARCELS }, (_, i) => ({
      geometry: { type: 'Polygon', coordinates: square(-3.4 + 0.004 * (i % columns), 40.1 + 0.003 * Math.floor(i / columns), 250) },
      properties: { code: `S${String(i).padStart(5, '0')}`, crop: i % 3 === 0 ? 'maize-grain' : 'potato' },
    })),
  );
}

/** A made-up year: a warm half and a cool half with a shower every ninth day. */
function weatherCsv(sites: readonly string[]): string {
  const rows = sites.flatMap((site, s) =>
    Array.from({ length: 366 }, (_, day) => {
      const warmth = -Math.cos((2 * Math.PI * (day - 20)) / 366);
      const date = new Date(Date.UTC(2024, 0, 1 + day)).toISOString().slice(0, 10);
      return [
        site,
        date,
        (18 + 12 * warmth + s).toFixed(1),
        (6 + 8 * warmth + s).toFixed(1),
        55,
        (15 + 9 * warmth).toFixed(1),
        2.2,
        day % 9 === 0 ? 6 : 0,
      ];
    }),
  );
  return csv(['site', 'date', 'tmax_c', 'tmin_c', 'rh_mean_pct', 'solar_mj', 'wind_m_s', 'rain_mm'], rows);
}
