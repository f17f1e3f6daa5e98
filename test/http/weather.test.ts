/** Sites and their days against FAO-56 Example 18 (Uccle, 6 July): ETo 3.88 mm/d, and the numbers printed on the way. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as siteDays } from '../../app/api/v1/weather/sites/[code]/daily/route.ts';
import { GET as sites } from '../../app/api/v1/weather/sites/route.ts';
import { site, weatherBlock, weatherSource } from '../../db/schema/weather.ts';
import { loadObservations } from '../../lib/jobs/observations.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { type Fixture, makeFixture, request } from './district-fixture.ts';

let fresh: TestDatabase;
let made: Fixture;
let token: string;
/** FAO-56 Example 18: 6 July; wind 2.78 m/s measured at 10 m; 9.25 h of sunshine. */
const UCCLE = {
  air_temperature_max_c: 21.5,
  air_temperature_min_c: 12.3,
  relative_humidity_max_pct: 84,
  relative_humidity_min_pct: 63,
  wind_speed_m_s: 2.78,
  sunshine_duration_h: 9.25,
  precipitation_mm: 0,
};

/** 1.5 mm of rain on each of the 1096 days of 2018 to 2020. */
function wetMonths(districtId: string, sourceId: number) {
  return Array.from({ length: 36 }, (_, index) => {
    const [year, month] = [2018 + Math.floor(index / 12), (index % 12) + 1];
    const dayCount = new Date(Date.UTC(year, month, 0)).getUTCDate();
    const values = new Uint8Array(new Float32Array(dayCount).fill(1.5).buffer);
    const quality = new Uint8Array(dayCount).fill(1);
    const first = `${year}-${String(month).padStart(2, '0')}-01`;
    return { districtId, sourceId, variable: 'precipitation_mm', month: first, siteCount: 1, dayCount, values, quality };
  });
}

beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
  token = made.tokens.read;
  const districtId = made.a.id;
  await fresh.db.inDistrict(districtId, async (tx) => {
    await tx.insert(weatherSource).values({ districtId, sourceId: 1, name: 'stations' });
    const place = { districtId, sourceId: 1, longitude: 4.35, latitude: 50.8, elevation: 100, windHeight: 10 };
    await tx.insert(site).values([
      { ...place, ordinal: 0, code: 'UCC', name: 'Uccle' },
      { ...place, ordinal: 1, code: 'NEW', name: 'Added later' },
    ]);
    for (const [variable, value] of Object.entries(UCCLE)) {
      const values = new Float32Array(31).fill(Number.NaN);
      values[5] = value;
      const quality = Uint8Array.from(values, (v) => (Number.isNaN(v) ? 0 : 1));
      const month = { districtId, sourceId: 1, variable, month: '2015-07-01', siteCount: 1, dayCount: 31 };
      await tx.insert(weatherBlock).values({ ...month, values: new Uint8Array(values.buffer), quality });
    }
    await tx.insert(weatherSource).values({ districtId, sourceId: 2, name: 'long record' });
    await tx.insert(site).values({ ...place, sourceId: 2, ordinal: 0, code: 'LONG', name: 'Three years' });
    await tx.insert(weatherBlock).values(wetMonths(districtId, 2));
  });
});
afterAll(() => fresh.close());

describe('weather sites', () => {
  it('tells what each site covers; a site added after the block has nothing', async () => {
    const { items } = await (await sites(request('/api/v1/weather/sites', { token }))).json();
    expect(items[0]).toMatchObject({
      code: 'UCC',
      source: 'stations',
      first_day: '2015-07-06',
      last_day: '2015-07-06',
      day_count: 1,
      elevation_m: 100,
    });
    expect(items[0].coverage_days).toEqual(Object.fromEntries(Object.keys(UCCLE).map((variable) => [variable, 1])));
    expect(items[1]).toMatchObject({ code: 'NEW', first_day: null, day_count: 0 });
    const us = (await (await sites(request('/api/v1/weather/sites?units=us', { token }))).json()).items;
    expect(us[0].coverage_days).toEqual(items[0].coverage_days);
    expect(us[0].elevation_ft).toBeCloseTo(328.084, 3);
  });

  it('computes the published day from what is stored', async () => {
    const { items } = await (await siteDays(request('/api/v1/weather/sites/UCC/daily', { token }))).json();
    expect(items).toHaveLength(1);
    const [day] = items;
    expect(day.date).toBe('2015-07-06');
    expect(day.observed.air_temperature_max_c).toBe(21.5);
    expect(day.completed.vapour_pressure_kpa).toBeCloseTo(1.409, 3);
    expect(day.completed.wind_speed_2m_m_s).toBeCloseTo(2.078, 2);
    expect(day.extraterrestrial_radiation_mj_m2_d).toBeCloseTo(41.09, 1);
    expect(Math.abs(day.completed.solar_radiation_mj_m2_d - 22.07)).toBeLessThan(0.03);
    expect(Math.abs(day.net_radiation_mj_m2_d - 13.28)).toBeLessThan(0.03);
    expect(Math.abs(day.reference_et_fao56_short_mm - 3.88)).toBeLessThan(0.01);
    expect(day.fallbacks).toEqual(['radiationFromSunshine']);
    // energy in = energy out: H = Rn − λET, with no heat into the soil over a day (FAO-56 Eq. 42)
    expect(day.latent_heat_mj_m2_d + day.sensible_heat_mj_m2_d).toBeCloseTo(day.net_radiation_mj_m2_d, 3);
  });

  it('leaves as a flat table', async () => {
    const [header, row] = (await (await siteDays(request('/api/v1/weather/sites/UCC/daily.csv?units=us', { token }))).text()).split('\r\n');
    const cell = (name: string) => row.split(',')[header.split(',').indexOf(name)];
    expect(Number(cell('observed_air_temperature_max_f'))).toBeCloseTo(70.7, 6);
    expect(Number(cell('reference_et_fao56_short_in'))).toBeCloseTo(3.88 / 25.4, 3);
    expect(cell('observed_dew_point_f')).toBe('');
  });

  it('has nothing on other days, refuses too many, and knows no other site', async () => {
    const { items } = await (await siteDays(request('/api/v1/weather/sites/UCC/daily?from=2016-01-01&to=2016-01-31', { token }))).json();
    expect(items).toEqual([]);
    expect((await siteDays(request('/api/v1/weather/sites/UCC/daily?from=2010-01-01&to=2015-07-31', { token }))).status).toBe(413);
    expect((await siteDays(request('/api/v1/weather/sites/XYZ/daily', { token }))).status).toBe(404);
    expect((await siteDays(request('/api/v1/weather/sites/UCC/daily', { token: made.tokens.other }))).status).toBe(404);
    expect((await siteDays(request('/api/v1/weather/sites/UCC/daily?from=2015-07-09&to=2015-07-01', { token }))).status).toBe(400);
    expect(await (await siteDays(request('/api/v1/weather/sites/NEW/daily', { token }))).json()).toEqual({
      items: [],
      first_day: null,
      last_day: null,
      truncated: false,
    });
  });
});

describe('a record longer than one answer', () => {
  const ask = (query: string) => siteDays(request(`/api/v1/weather/sites/LONG/daily${query}`, { token }));

  it.each([
    ['', '2019-11-28', '2020-12-31', 400, true],
    ['?from=2018-06-01', '2018-06-01', '2019-07-05', 400, true],
    ['?to=2019-12-31', '2018-11-27', '2019-12-31', 400, true],
    ['?from=2020-12-01', '2020-12-01', '2020-12-31', 31, false],
    ['?to=2018-01-31', '2018-01-01', '2018-01-31', 31, false],
    ['?from=2019-02-01&to=2019-02-28', '2019-02-01', '2019-02-28', 28, false],
  ])('%s gives %s to %s and says whether that is all', async (query, first, last, count, truncated) => {
    const answer = await (await ask(query)).json();
    expect(answer).toMatchObject({ first_day: '2018-01-01', last_day: '2020-12-31', truncated });
    expect(answer.items).toHaveLength(count);
    expect([answer.items[0].date, answer.items.at(-1).date]).toEqual([first, last]);
  });

  it('leaves whole as a table', async () => {
    const response = await ask('.csv');
    expect(response.headers.get('content-type')).toMatch(/^text\/csv/);
    const lines = (await response.text()).trimEnd().split('\r\n');
    expect(lines).toHaveLength(1 + 1096);
    expect(lines[1]).toMatch(/^2018-01-01,/);
    expect(lines[1096]).toMatch(/^2020-12-31,/);
    expect(new Set(lines.slice(1).map((line) => line.slice(0, 10))).size).toBe(1096);
    expect((await (await ask('.csv?from=2020-01-01')).text()).trimEnd().split('\r\n')).toHaveLength(1 + 366);
    expect((await ask('.csv?from=2020-02-01&to=2020-01-01')).status).toBe(400);
  });
});

describe('loadObservations', () => {
  it('puts blocks into [site × day] with NaN where nothing is stored', async () => {
    const found = await fresh.db.inDistrict(made.a.id, (tx) =>
      loadObservations(tx, made.a.id, { source: 'stations', from: '2015-07-05', to: '2015-07-07' }),
    );
    expect(found).toMatchObject({ startDate: '2015-07-05', dayCount: 3 });
    expect([...(found.values.air_temperature_max_c ?? [])]).toEqual([Number.NaN, 21.5, Number.NaN, Number.NaN, Number.NaN, Number.NaN]);
    const nothing = await fresh.db.inDistrict(made.a.id, (tx) => loadObservations(tx, made.a.id, { source: 'no such source' }));
    expect(nothing.sites).toEqual([]);
  });
});
