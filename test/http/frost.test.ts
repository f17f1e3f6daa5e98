/** Frost nights over HTTP: one invented station, apples on two parcels, evenings reckoned by hand. */
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as criticalTemperatures } from '../../app/api/v1/frost/critical-temperatures/route.ts';
import { GET as nights } from '../../app/api/v1/frost/nights/route.ts';
import { GET as frost } from '../../app/api/v1/frost/route.ts';
import { GET as working } from '../../app/api/v1/frost/working/route.ts';
import { planting } from '../../db/schema/land.ts';
import { site, weatherBlock, weatherSource } from '../../db/schema/weather.ts';
import type { FrostAnswer, FrostWorkingAnswer, FrozenNights } from '../../lib/http/contract/frost.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { near } from '../support/near.ts';
import { cookieOf, type Fixture, makeFixture, request } from './district-fixture.ts';

let fresh: TestDatabase;
let made: Fixture;
const APPLE = 'apple-cherry-pear-active-cover-killing-frost';
const MONTHS = [31, 29, 31, 30];

/** Every day of January to April 2024 alike, but for the minimum of 11 April: −3 °C. */
function block(districtId: string, variable: string, month: number, value: number) {
  const dayCount = MONTHS[month];
  const values = new Float32Array(dayCount).fill(value);
  if (variable === 'air_temperature_min_c' && month === 3) values[10] = -3;
  const quality = new Uint8Array(dayCount).fill(1);
  const start = `2024-0${month + 1}-01`;
  return { districtId, sourceId: 1, variable, month: start, siteCount: 1, dayCount, values: new Uint8Array(values.buffer), quality };
}

beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
  const districtId = made.a.id;
  await fresh.db.inDistrict(districtId, async (tx) => {
    await tx.insert(weatherSource).values({ districtId, sourceId: 1, name: 'stations' });
    const place = { longitude: -116, latitude: 43.6, elevation: 0, windHeight: 2 };
    await tx.insert(site).values({ districtId, sourceId: 1, ordinal: 0, code: 'ST', name: 'Station (invented)', ...place });
    const daily = {
      air_temperature_max_c: 14,
      air_temperature_min_c: 1,
      dew_point_c: -1,
      solar_radiation_mj_m2_d: 20,
      wind_speed_m_s: 1.5,
    };
    for (const [month] of MONTHS.entries()) {
      await tx.insert(weatherBlock).values(Object.entries(daily).map(([name, value]) => block(districtId, name, month, value)));
    }
    await tx.delete(planting).where(eq(planting.districtId, districtId));
    const common = { districtId, seasonCode: '2024', sequence: 1, plantingDate: '2024-04-01' };
    await tx.insert(planting).values([
      { ...common, parcelCode: 'P-1', cropCode: APPLE, calendarCode: `${APPLE}-high-latitudes-deciduous-orchard-row` },
      { ...common, parcelCode: 'P-2', cropCode: APPLE, calendarCode: `${APPLE}-high-latitudes-deciduous-orchard-row`, areaShare: 0.5 },
      { ...common, parcelCode: '=P-3', cropCode: 'maize-grain', calendarCode: 'maize-grain-idaho' },
    ]);
  });
});
afterAll(() => fresh.close());

const ask = (query: string, by: { token?: string; cookie?: string } = { token: made.tokens.read }) =>
  frost(request(`/api/v1/frost${query}`, by));
const answerOf = async (query: string, by?: { token?: string; cookie?: string }): Promise<FrostAnswer> => (await ask(query, by)).json();
/** 8 °C, dew point −3 °C, 1 m/s, three tenths covered. */
const GIVEN = '?date=2024-04-10&air_temperature_c=8&dew_point_c=-3&wind_speed_m_s=1&cloud_share=0.3&method=brunt';

describe('a night with an evening of one’s own', () => {
  it('has the numbers of a reckoning apart from the project', async () => {
    const { stations, items, evening } = await answerOf(`${GIVEN}&stages=apple:full-pink`);
    expect(evening).toBe('given');
    near(stations[0].night_length_h ?? 0, NIGHT.h, 0.006);
    near(stations[0].net_radiation_w_m2 ?? 0, NIGHT.net, 0.06);
    near(stations[0].minimum_c ?? 0, NIGHT.minimum, 0.006);
    expect(items.map(({ parcel }) => parcel)).toEqual(['P-1', 'P-2']);
    near(items[0].leaf_minimum_c ?? 0, NIGHT.leaf, 0.006);
    near(items[0].start_air_temperature_c ?? 0, NIGHT.start, 0.006);
    expect(items[0]).toMatchObject({
      stage: 'full-pink',
      stage_from: 'chosen',
      critical_10_c: -2.22,
      critical_90_c: -3.89,
      risk: NIGHT.risk,
    });
    near(items[0].sprinkling_rate_mm_h ?? 0, NIGHT.rate, 0.006);
    near(items[0].sprinkling_flow_l_s ?? 0, NIGHT.flow, 0.011);
    near(items[0].sprinkling_volume_m3 ?? 0, NIGHT.volume, 1);
    // half of twice the area
    near(items[1].sprinkling_flow_l_s ?? 0, NIGHT.flow, 0.011);
  });

  it('tells the stage by thermal time: 101 days of 7.5 − 6.11 °C are 140 °C d, tight cluster', async () => {
    const { items } = await answerOf(GIVEN);
    near(items[0].thermal_time_c_d ?? 0, 101 * (7.5 - (43 - 32) / 1.8), 0.06);
    expect(items[0]).toMatchObject({ stage: 'tight-cluster', stage_from: 'thermal-time' });
  });

  it('takes a critical temperature of one’s own for another crop', async () => {
    const { items, total } = await answerOf(`${GIVEN}&stages=maize-grain:-1&risk=any`);
    expect(total).toBeGreaterThan(0);
    expect(items.find(({ parcel }) => parcel === '=P-3')).toMatchObject({ stage: 'own', critical_10_c: -1, critical_90_c: null });
  });

  it('writes gallons, inches and Fahrenheit on request', async () => {
    const answer = (await answerOf(`${GIVEN}&stages=apple:full-pink&units=us`)) as unknown as { items: Record<string, number>[] };
    // 1 L/s is 15.850 gpm
    near(answer.items[0].sprinkling_flow_gpm, NIGHT.flow * 15.8503, 0.2);
    near(answer.items[0].critical_10_f, 28, 0.01);
    near(answer.items[0].sprinkling_rate_in_h, NIGHT.rate / 25.4, 0.001);
  });
});

describe('a night on record', () => {
  it('takes its evening from the day, says so, and shows the minimum that came', async () => {
    const { stations, evening } = await answerOf('?date=2024-04-10');
    expect(evening).toBe('record');
    expect(stations[0]).toMatchObject({ evening_from: 'daily', observed_minimum_c: -3 });
    expect(stations[0].estimated.join(' ')).toMatch(/sunset temperature from the extremes/);
    // (Parton & Logan) N = 13.026 h: 1 + 13 sin[π 13.196 / 16.746]
    near(stations[0].air_temperature_c ?? 0, 1 + 13 * Math.sin((Math.PI * (24 - NIGHT.h + 0.17)) / (24 - NIGHT.h + 3.72)), 0.006);
    near(stations[0].dew_point_c ?? 0, -1, 0.01);
    near(stations[0].wind_speed_2m_m_s ?? 0, 1, 0.01);
  });

  it('lists the nights that froze', async () => {
    const answer: FrozenNights = await (await nights(request('/api/v1/frost/nights', { token: made.tokens.read }))).json();
    expect(answer.items).toMatchObject([{ date: '2024-04-10', morning: '2024-04-11', minimum_c: -3, site: 'ST', in_bud: true }]);
  });
});

describe('working', () => {
  it('ends at the numbers of the answer', async () => {
    const { items } = await answerOf(`${GIVEN}&stages=apple:full-pink`);
    const response = await working(request(`/api/v1/frost/working${GIVEN}&stages=apple:full-pink&parcel=P-1`, { token: made.tokens.read }));
    const answer: FrostWorkingAnswer = await response.json();
    const last = (symbol: string) => answer.steps.filter((step) => step.symbol === symbol).at(-1)?.result ?? Number.NaN;
    expect(answer.row).toEqual(items[0]);
    near(last('Tmin'), items[0].minimum_c ?? 0, 0.006);
    near(last('Tl'), items[0].leaf_minimum_c ?? 0, 0.006);
    near(last('T10'), -2.22, 0.006);
    near(last('Q'), items[0].sprinkling_flow_l_s ?? 0, 0.006);
    near(last('V'), items[0].sprinkling_volume_m3 ?? 0, 0.06);
    expect(answer.cautions.join(' ')).toMatch(/no warning service/);
  });
});

describe('refusals and walls', () => {
  it.each([
    ['?date=2024-02-31', 400, /calendar/],
    ['?date=2024-04-10&air_temperature_c=5', 400, /dew_point_c, wind_speed_m_s, cloud_share/],
    ['?date=2024-04-10&air_temperature_c=5&dew_point_c=6&wind_speed_m_s=1&cloud_share=0', 400, /above air_temperature_c/],
    ['?date=2024-04-10&stages=apple:bud', 400, /no stage of apple/],
    ['?date=2024-04-10&stages=apple', 400, /crop:stage/],
    ['?date=2024-04-10&source=moon', 404, /no weather source "moon"/],
  ] as const)('%s', async (query, status, detail) => {
    const response = await ask(query);
    expect(response.status).toBe(status);
    expect((await response.json()).detail).toMatch(detail);
  });

  it('has nothing where no season holds the night', async () => {
    expect((await answerOf('?date=2024-03-10')).items).toEqual([]);
  });

  it('shows a grower the own parcels alone, and no other district’s', async () => {
    const cookie = await cookieOf('gus');
    const { items, counts } = await answerOf(GIVEN, { cookie });
    expect(items.map(({ parcel }) => parcel)).toEqual(['P-2']);
    expect(Object.values(counts).reduce((a, b) => a + b)).toBe(1);
    const hidden = await working(request(`/api/v1/frost/working${GIVEN}&parcel=P-1`, { cookie }));
    expect(hidden.status).toBe(404);
    const other = await frost(request(`/api/v1/frost${GIVEN}`, { token: made.tokens.other }));
    expect(other.status).toBe(422);
  });

  it('pages', async () => {
    const first = await answerOf(`${GIVEN}&limit=1`);
    expect(first.items.map(({ parcel }) => parcel)).toEqual(['P-1']);
    const second = await answerOf(`${GIVEN}&limit=1&cursor=${first.next_cursor}`);
    expect(second.items.map(({ parcel }) => parcel)).toEqual(['P-2']);
    expect(second.next_cursor).toBeNull();
  });
});

it('has the table of critical temperatures as CSV', async () => {
  const response = await criticalTemperatures(request('/api/v1/frost/critical-temperatures.csv', { token: made.tokens.read }));
  const [head, first] = (await response.text()).split('\r\n');
  expect(head).toMatch(/^table,table_name,stage,stage_name,critical_10_c,critical_90_c,printed_10_fahrenheit/);
  expect(first).toMatch(/^apple,Apple,silver-tip,Silver tip,-9.44,-16.67,15,2,/);
});

/** Reckoned apart: FAO-56 Eq. 39 for the sky, Brunt's law on moist ground, 10 April at 43.6° N, sea level; 1 ha. */
const NIGHT = {
  h: 10.974,
  net: -62.599,
  minimum: -1.4547,
  leaf: -2.2639,
  start: 1.8124,
  risk: 'damaging',
  rate: 2.5,
  flow: 6.9444,
  volume: 206.84,
};
