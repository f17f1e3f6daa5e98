/** Sites and their days against FAO-56 Example 18 (Uccle, 6 July): ETo 3.88 mm/d, and the numbers printed on the way. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as siteDays } from '../../app/api/v1/weather/sites/[code]/daily/route.ts';
import { GET as siteHours } from '../../app/api/v1/weather/sites/[code]/hours/route.ts';
import { GET as sites } from '../../app/api/v1/weather/sites/route.ts';
import { GET as sources } from '../../app/api/v1/weather/sources/route.ts';
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

/**
 * FAO-56 Example 19, N’Diaye, 1 October: the hours 2 to 3 and 14 to 15 as printed, spread over the night and the day around them; daily values
 * beside. The site is the second of its block, so that its own part must be found.
 */
function senegalBlocks(districtId: string, sourceId: number) {
  const night = { hour_air_temperature_c: 28, hour_relative_humidity_pct: 90, hour_wind_speed_m_s: 1.9, hour_solar_radiation_mj_m2: 0 };
  const noon = { hour_air_temperature_c: 38, hour_relative_humidity_pct: 52, hour_wind_speed_m_s: 3.3, hour_solar_radiation_mj_m2: 2.45 };
  const key = { districtId, sourceId, month: '2015-10-01', siteCount: 2, dayCount: 31 };
  const hourly = Object.keys(night).map((variable) => {
    const values = new Float32Array(2 * 31 * 24).fill(Number.NaN);
    for (let hour = 0; hour < 24; hour++) values[31 * 24 + hour] = (hour >= 9 && hour < 17 ? noon : night)[variable as keyof typeof night];
    return { ...key, variable, steps: 24, values: new Uint8Array(values.buffer), quality: new Uint8Array(values.length).fill(1) };
  });
  const daily = Object.entries({ air_temperature_max_c: 38, air_temperature_min_c: 28, reference_et_given_mm: 6.5 }).map(
    ([variable, value]) => {
      const values = new Float32Array(2 * 31).fill(Number.NaN);
      values[31] = value;
      const quality = new Uint8Array(2 * 31);
      quality[31] = variable === 'air_temperature_max_c' ? 2 : 1;
      return { ...key, variable, values: new Uint8Array(values.buffer), quality };
    },
  );
  return [...hourly, ...daily];
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
    await tx.insert(weatherSource).values({ districtId, sourceId: 3, name: 'hours' });
    const senegal = { longitude: -16.25, latitude: 16 + 13 / 60, elevation: 8, windHeight: 2, zone: 'UTC-01:00' };
    await tx.insert(site).values([
      { ...senegal, districtId, sourceId: 3, ordinal: 0, code: 'FIRST', name: 'Without hours' },
      { ...senegal, districtId, sourceId: 3, ordinal: 1, code: 'NDI', name: 'N’Diaye' },
    ]);
    await tx.insert(weatherBlock).values(senegalBlocks(districtId, 3));
    await tx.insert(weatherSource).values({ districtId, sourceId: 4, name: 'grid', kind: 'grid' });
    const cells = Array.from({ length: 5 }, (_, ordinal) => ({ ordinal, code: `r0c${ordinal}`, name: `cell ${ordinal}` }));
    await tx.insert(site).values(cells.map((cell) => ({ ...place, sourceId: 4, ...cell })));
    const cell = { districtId, sourceId: 4, variable: 'precipitation_mm', month: '2021-02-01', siteCount: 5, dayCount: 28 };
    await tx.insert(weatherBlock).values({ ...cell, values: new Uint8Array(5 * 28 * 4), quality: new Uint8Array(5 * 28) });
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

describe('hours', () => {
  const ask = (path: string, as = token) => siteHours(request(`/api/v1/weather/sites/${path}`, { token: as }));

  it('are solved one by one: FAO-56 Example 19 gives 0.63 mm/h by day and 0.0 by night', async () => {
    const answer = await (await ask('NDI/hours?date=2015-10-01')).json();
    expect(answer).toMatchObject({ site: 'NDI', source: 'hours', zone: 'UTC-01:00', utc_offset_h: -1, estimated: [] });
    expect(answer.items).toHaveLength(24);
    const [night, afternoon] = [answer.items[2], answer.items[14]];
    // printed: Ra 3.543 MJ m⁻² h⁻¹, Rn 1.749, G 0.175; night Rn −0.100, G −0.050
    expect(afternoon.extraterrestrial_radiation_mj_m2_h).toBeCloseTo(3.543, 2);
    expect((afternoon.net_radiation_w_m2 * 3600) / 1e6).toBeCloseTo(1.749, 2);
    expect((afternoon.soil_heat_w_m2 * 3600) / 1e6).toBeCloseTo(0.175, 2);
    expect(Math.abs(afternoon.reference_et_fao56_short_mm - 0.63)).toBeLessThan(0.005);
    expect(Math.abs(night.reference_et_fao56_short_mm)).toBeLessThan(0.05);
    const { net_radiation_w_m2, soil_heat_w_m2, latent_heat_w_m2, sensible_heat_w_m2 } = afternoon;
    expect(soil_heat_w_m2 + latent_heat_w_m2 + sensible_heat_w_m2).toBeCloseTo(net_radiation_w_m2, 1);
  });

  it('sum up to the day, beside the given ET; quality that is not as measured is told', async () => {
    const { items } = await (await siteDays(request('/api/v1/weather/sites/NDI/daily', { token }))).json();
    expect(items).toHaveLength(1);
    const hours = (await (await ask('NDI/hours?date=2015-10-01')).json()).items;
    const sum = hours.reduce(
      (total: number, hour: { reference_et_asce2005_tall_mm: number }) => total + hour.reference_et_asce2005_tall_mm,
      0,
    );
    expect(items[0].reference_et_hourly_asce2005_tall_mm).toBeCloseTo(sum, 2);
    expect(items[0]).toMatchObject({
      reference_et_given_mm: 6.5,
      soil_heat_flux_mj_m2_d: 0,
      quality: { air_temperature_max_c: 'corrected' },
    });
    const [uccle] = (await (await siteDays(request('/api/v1/weather/sites/UCC/daily', { token }))).json()).items;
    expect(uccle).toMatchObject({ reference_et_hourly_fao56_short_mm: null, reference_et_given_mm: null, quality: {} });
  });

  it('are none where there are none, and nobody else’s', async () => {
    expect((await (await ask('NDI/hours?date=2015-10-02')).json()).items).toEqual([]);
    expect((await (await ask('UCC/hours?date=2015-07-06')).json()).items).toEqual([]);
    expect((await ask('NDI/hours?date=2015-02-30')).status).toBe(400);
    expect((await ask('NDI/hours')).status).toBe(400);
    expect((await ask('NDI/hours?date=2015-10-01', made.tokens.other)).status).toBe(404);
    const csv = (await (await ask('NDI/hours.csv?date=2015-10-01')).text()).trimEnd().split('\r\n');
    expect(csv).toHaveLength(25);
  });
});

describe('sources', () => {
  it('are summed up without their values', async () => {
    const { items } = await (await sources(request('/api/v1/weather/sources', { token }))).json();
    expect(items.map((item: { name: string }) => item.name)).toEqual(['stations', 'long record', 'hours', 'grid']);
    expect(items[1]).toEqual({
      name: 'long record',
      kind: 'stations',
      role: 'observed',
      issued: null,
      sites: 1,
      first_month: '2018-01-01',
      last_month: '2020-12-01',
      variables: ['precipitation_mm'],
    });
    expect(items[2].variables).toContain('hour_air_temperature_c');
    expect(items[3]).toMatchObject({ kind: 'grid', sites: 5, first_month: '2021-02-01' });
    expect((await (await sources(request('/api/v1/weather/sources', { token: made.tokens.other }))).json()).items).toEqual([]);
  });

  it('give their sites in pages; cells of a grid only when asked for', async () => {
    const list = async (query: string) => (await sites(request(`/api/v1/weather/sites${query}`, { token }))).json();
    const all = await list('');
    expect(all.items.map((item: { code: string }) => item.code)).toEqual(['UCC', 'NEW', 'LONG', 'FIRST', 'NDI']);
    const first = await list('?source=grid&limit=3');
    expect(first).toMatchObject({ total: 5 });
    expect(first.items[0]).toMatchObject({
      code: 'r0c0',
      first_day: '2021-02-01',
      last_day: '2021-02-28',
      day_count: 28,
      coverage_days: {},
    });
    const second = await list(`?source=grid&limit=3&cursor=${first.next_cursor}`);
    expect(second.items.map((item: { code: string }) => item.code)).toEqual(['r0c3', 'r0c4']);
    expect(second.next_cursor).toBeNull();
    const stations = await list('?limit=2');
    expect((await list(`?limit=9&cursor=${stations.next_cursor}`)).items).toHaveLength(3);
    expect((await sites(request('/api/v1/weather/sites?source=none', { token }))).status).toBe(404);
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
