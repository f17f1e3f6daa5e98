/** Leave-one-out over HTTP: seven invented stations on one parallel, temperature rising by 1 °C from one to the next. */

import { and, eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as daily } from '../../app/api/v1/runs/[id]/parcels/[code]/daily/route.ts';
import { GET as readRun } from '../../app/api/v1/runs/[id]/route.ts';
import { POST as createRun } from '../../app/api/v1/runs/route.ts';
import { GET as interpolation } from '../../app/api/v1/weather/interpolation/route.ts';
import { interpolationCheck, site, weatherBlock, weatherSource } from '../../db/schema/weather.ts';
import { stopQueue } from '../../lib/jobs/queue.ts';
import { finishRun } from '../../lib/jobs/run-finish.ts';
import { computeSlice } from '../../lib/jobs/run-slice.ts';
import { startRun } from '../../lib/jobs/run-start.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { type Fixture, makeFixture, request } from './district-fixture.ts';

let fresh: TestDatabase;
let made: Fixture;
let token: string;
const COUNT = 7;
const DAYS = 30;

/** A month of April 2024 at every station: `value` of the station, the same each day. */
function month(districtId: string, sourceId: number, variable: string, value: (station: number) => number) {
  const values = Float32Array.from({ length: COUNT * DAYS }, (_, i) => value(Math.floor(i / DAYS)));
  const quality = new Uint8Array(values.length).fill(1);
  const bytes = new Uint8Array(values.buffer);
  return { districtId, sourceId, variable, month: '2024-04-01', siteCount: COUNT, dayCount: DAYS, values: bytes, quality };
}

beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
  token = made.tokens.read;
  const districtId = made.a.id;
  await fresh.db.inDistrict(districtId, async (tx) => {
    await tx.insert(weatherSource).values([
      { districtId, sourceId: 1, name: 'stations' },
      { districtId, sourceId: 2, name: 'cells', kind: 'grid' },
    ]);
    const places = Array.from({ length: COUNT }, (_, ordinal) => ({
      ...{ districtId, sourceId: 1, ordinal, code: `ST${ordinal}`, name: `Station ${ordinal} (invented)` },
      ...{ longitude: -116 + ordinal / 10, latitude: 43.6, elevation: 800, windHeight: 2 },
    }));
    await tx.insert(site).values([...places, { ...places[0], sourceId: 2, code: 'r000c000', name: 'A cell' }]);
    await tx
      .insert(weatherBlock)
      .values([
        month(districtId, 1, 'air_temperature_max_c', (station) => 20 + station),
        month(districtId, 1, 'air_temperature_min_c', () => 5),
        month(districtId, 1, 'dew_point_c', () => 4),
        month(districtId, 1, 'solar_radiation_mj_m2_d', () => 18),
        month(districtId, 1, 'precipitation_mm', (station) => (station === 3 ? 7 : 0)),
        { ...month(districtId, 2, 'air_temperature_max_c', () => 20), siteCount: 1 },
      ]);
  });
});
afterAll(async () => {
  await stopQueue();
  await fresh.close();
});

const ask = (query: string, by = token) => interpolation(request(`/api/v1/weather/interpolation${query}`, { token: by }));
const APRIL = '?from=2024-04-01&to=2024-04-30';

interface Answer {
  computed_at: string;
  sites: { code: string }[];
  items: {
    variable: string;
    unit: string;
    methods: { method: string; chosen: boolean; n: number; bias: number; rmse: number; msdr: number | null }[];
    variograms: { classes: { pair_count: number; distance_km: number; semivariance: number }[] }[];
    shown_method: string;
    site_errors: { site: string; n: number; bias: number | null }[];
  }[];
}

async function variable(query: string, name: string) {
  const answer: Answer = await (await ask(query)).json();
  const found = answer.items.find((item) => item.variable === name);
  if (!found) throw new Error(`no ${name} in the answer`);
  return found;
}

describe('GET /api/v1/weather/interpolation', () => {
  it('holds every station against the nearest other: one degree warmer or colder', async () => {
    const found = await variable(APRIL, 'air_temperature_max_c');
    const nearest = found.methods.find(({ method }) => method === 'nearest');
    expect(found.unit).toBe('°C');
    // the first and the last have one neighbour, those between two at equal distance, of which the lower code speaks: errors +1 −1 −1 −1 −1 −1 −1
    expect(nearest).toMatchObject({ n: COUNT * DAYS });
    expect(nearest?.rmse).toBeCloseTo(1, 3);
    expect(found.methods.map(({ method }) => method)).toContain('kriging-lapse-rate');
  });

  it('chooses the lowest RMSE, and shows its errors by station', async () => {
    const found = await variable(APRIL, 'air_temperature_max_c');
    const least = Math.min(...found.methods.map(({ rmse }) => rmse));
    const chosen = found.methods.filter((method) => method.chosen);
    expect(chosen).toHaveLength(1);
    expect(chosen[0].rmse).toBe(least);
    expect(found.shown_method).toBe(chosen[0].method);
    const asked = await variable(`${APRIL}&method=nearest&variable=air_temperature_max_c`, 'air_temperature_max_c');
    expect(asked.shown_method).toBe('nearest');
    expect(asked.site_errors.map(({ n }) => n)).toEqual(new Array(COUNT).fill(DAYS));
    expect(asked.site_errors[0].bias).toBeCloseTo(1, 3);
    expect(asked.site_errors[6].bias).toBeCloseTo(-1, 3);
  });

  it('gives the semivariogram: half the squared difference of stations so many steps apart', async () => {
    const [{ classes }] = (await variable(APRIL, 'air_temperature_max_c')).variograms;
    const step = classes[0].distance_km;
    // neighbours are a tenth of a degree of longitude apart at 43.6° N: 6371.0088 km · 0.1° · cos 43.6°, on the great circle
    expect(step).toBeCloseTo(8.0524, 2);
    expect(classes[0]).toMatchObject({ pair_count: 6 });
    expect(classes[0].semivariance).toBeCloseTo(0.5, 3);
    expect(classes.reduce((sum, each) => sum + each.pair_count, 0)).toBe(21);
  });

  it('does not hold against wind that was assumed', async () => {
    const wind = await variable(APRIL, 'wind_speed_2m_m_s');
    expect(wind.methods.every(({ n, rmse }) => n === 0 && rmse === null)).toBe(true);
    expect(wind.shown_method).toBeNull();
  });

  it('leaves as a table', async () => {
    const lines = (await (await ask(`.csv${APRIL}`)).text()).trimEnd().split('\r\n');
    expect(lines[0]).toBe('variable,unit,method,name,chosen,n,bias,rmse,mae,msdr,variogram_model,nugget,partial_sill,range_km');
    expect(lines.filter((line) => line.startsWith('precipitation_mm,mm,'))).toHaveLength(5);
  });

  it('keeps the figures until the weather changes', async () => {
    const first: Answer = await (await ask(APRIL)).json();
    const second: Answer = await (await ask(APRIL)).json();
    expect(second.computed_at).toBe(first.computed_at);
    await fresh.db.inDistrict(made.a.id, (tx) =>
      tx
        .update(weatherBlock)
        .set(month(made.a.id, 1, 'air_temperature_max_c', (station) => 20 + 2 * station))
        .where(
          and(eq(weatherBlock.districtId, made.a.id), eq(weatherBlock.sourceId, 1), eq(weatherBlock.variable, 'air_temperature_max_c')),
        ),
    );
    const found = await variable(APRIL, 'air_temperature_max_c');
    expect(found.methods.find(({ method }) => method === 'nearest')?.rmse).toBeCloseTo(2, 3);
    const rows = await fresh.db.inDistrict(made.a.id, (tx) => tx.select().from(interpolationCheck));
    expect(rows.map(({ fromDay, toDay }) => [fromDay, toDay])).toEqual([['2024-04-01', '2024-04-30']]);
  });

  it('takes the days of a season, and of the newest one with weather when nothing is said', async () => {
    const season = await (await ask('?season=2024')).json();
    expect(season).toMatchObject({ source: 'stations', from: '2024-04-01', to: '2024-04-14' });
    expect(await (await ask('')).json()).toMatchObject({ from: '2024-04-01', to: '2024-04-14' });
  });

  it('refuses in words', async () => {
    const refusal = async (query: string, by = token) => {
      const response = await ask(query, by);
      return [response.status, (await response.json()).detail];
    };
    expect(await refusal('?source=cells')).toEqual([422, expect.stringContaining('is a grid')]);
    expect(await refusal('?source=nowhere')).toEqual([404, expect.stringContaining('nowhere')]);
    expect(await refusal('?season=1999')).toEqual([404, expect.stringContaining('1999')]);
    expect(await refusal('?season=2024&from=2024-04-01')).toEqual([400, expect.stringContaining('not both')]);
    expect(await refusal('?from=2024-05-01&to=2024-04-01')).toEqual([400, expect.stringContaining('after')]);
    expect(await refusal('?from=2020-01-01&to=2024-04-01')).toEqual([413, expect.stringContaining('at most 400')]);
    expect(await refusal('?from=2010-01-01&to=2010-02-01')).toEqual([422, expect.stringContaining('leaving one out needs two')]);
    expect(await refusal(APRIL, made.tokens.other)).toEqual([422, expect.stringContaining('no weather yet')]);
  });
});

describe('runs', () => {
  const post = (settings: Record<string, unknown>) =>
    createRun(request('/api/v1/runs', { token: made.tokens.write, body: { season: '2024', settings } }));
  const settingsOf = async (response: Response) => {
    const { id } = await response.json();
    return (await (await readRun(request(`/api/v1/runs/${id}`, { token }))).json()).settings;
  };

  it('refuse a method that does not suit the source, and take the one that does when none is named', async () => {
    const refused = await post({ interpolation: 'bilinear' });
    expect([refused.status, (await refused.json()).detail]).toEqual([422, expect.stringContaining('"bilinear" is for grids')]);
    const cells = await post({ interpolation: 'kriging', source: 'cells' });
    expect([cells.status, (await cells.json()).detail]).toEqual([422, expect.stringContaining('"kriging" is for stations')]);
    expect((await settingsOf(await post({ source: 'cells' }))).interpolation).toBe('bilinear');
    expect((await settingsOf(await post({}))).interpolation).toBe('inverse-distance');
  });

  it.each([['kriging'], ['automatic']])('carry weather by %s from the stations to the parcels', async (method) => {
    const { id } = await (await post({ interpolation: method })).json();
    const job = { districtId: made.a.id, runId: id };
    await startRun(job);
    await computeSlice({ ...job, slice: 0 });
    await finishRun(job);
    const run = await (await readRun(request(`/api/v1/runs/${id}`, { token }))).json();
    expect(run).toMatchObject({ state: 'done', error: null, settings: { interpolation: method } });
    const { series } = run.manifest.interpolation;
    expect(Object.keys(series)).toContain('airTemperatureMax');
    if (method === 'kriging') expect(series.airTemperatureMax).toMatchObject({ method: 'kriging-lapse-rate', gradient_per_m: -0.0065 });
    else expect(series.airTemperatureMax.leave_one_out.n).toBe(COUNT * 14);
    const season = await (await daily(request(`/api/v1/runs/${id}/parcels/P-1/daily`, { token }))).json();
    expect(season.days).toHaveLength(14);
    expect(season.days.every((day: { reference_et_mm: number }) => day.reference_et_mm > 2 && day.reference_et_mm < 8)).toBe(true);
  });
});
