/** The quality desk through its API: checks, decisions, roles and the walls between districts. */
import { and, eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as checks, POST as runCheck } from '../../app/api/v1/weather/check/route.ts';
import { POST as undo } from '../../app/api/v1/weather/corrections/[id]/undo/route.ts';
import { POST as preview } from '../../app/api/v1/weather/corrections/preview/route.ts';
import { POST as correct, GET as corrections } from '../../app/api/v1/weather/corrections/route.ts';
import { GET as flags } from '../../app/api/v1/weather/flags/route.ts';
import { run } from '../../db/schema/run.ts';
import { weatherBlock } from '../../db/schema/weather.ts';
import { loadObservations } from '../../lib/jobs/observations.ts';
import { performWeatherCheck } from '../../lib/jobs/weather-check.ts';
import { QUALITY, type SiteObservations } from '../../lib/weather/variable.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { soundRecord, withFault } from '../support/quality-record.ts';
import { storeRecord } from '../support/quality-store.ts';
import { cookieOf, type Fixture, makeFixture, request } from './district-fixture.ts';

let fresh: TestDatabase;
let made: Fixture;
const SOURCE = { sourceId: 1, name: 'stations' };
/** Day 800 of a record from 1 January 2022: 11 March 2024. Days 821 to 823: 1 to 3 April 2024, in the season of the fixture. */
const SPIKE_DAY = '2024-03-11';

beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
  const sound = soundRecord(1096);
  const spiked = withFault(sound, 'air_temperature_max_c', 0, (value, day) => (day === 800 ? value + 30 : value));
  const still = withFault(spiked, 'wind_speed_m_s', 1, (value, day) => (day >= 821 && day <= 823 ? 0.1 : value));
  await fresh.db.inDistrict(made.a.id, (tx) => storeRecord(tx, made.a.id, SOURCE, still));
  await fresh.db.inDistrict(made.b.id, (tx) => storeRecord(tx, made.b.id, SOURCE, sound));
  await check();
});
afterAll(() => fresh.close());

const check = () => performWeatherCheck({ districtId: made.a.id, sourceId: 1 }, '2026-12-01');
const get = async (route: (request: Request) => Promise<Response>, path: string, token = made.tokens.read) =>
  route(request(path, { token }));
const post = (body: unknown, token = made.tokens.write) => correct(request('/api/v1/weather/corrections', { token, body }));
const load = (): Promise<SiteObservations> => fresh.db.inDistrict(made.a.id, (tx) => loadObservations(tx, made.a.id));
const storedBlocks = () =>
  fresh.db.inDistrict(made.a.id, (tx) =>
    tx.select({ values: weatherBlock.values }).from(weatherBlock).orderBy(weatherBlock.variable, weatherBlock.month),
  );
const SPIKE = { site: 'S1', variable: 'air_temperature_max_c', from: SPIKE_DAY, to: SPIKE_DAY, reason: 'a digit too many' };
const STILL = {
  site: 'S2',
  variable: 'wind_speed_m_s',
  from: '2024-04-01',
  to: '2024-04-03',
  rule: 'wind-still',
  reason: 'the cups stood',
};

describe('flags', () => {
  it('name the planted faults with rule, value, limit and advice', async () => {
    const answer = await (await get(flags, '/api/v1/weather/flags?rule=spike')).json();
    expect(answer).toMatchObject({ total: 1, next_cursor: null });
    expect(answer.items[0]).toMatchObject({
      site: 'S1',
      first_day: SPIKE_DAY,
      last_day: SPIKE_DAY,
      severity: 'suspect',
      state: 'open',
      unit: '°C',
    });
    expect(answer.items[0].detail).toMatch(/Look for a digit/);
    const wind = (await (await get(flags, '/api/v1/weather/flags?rule=wind-still')).json()).items;
    expect(wind).toHaveLength(1);
    expect(wind[0]).toMatchObject({ site: 'S2', first_day: '2024-04-01', last_day: '2024-04-03', value: 0.1, limit: 0.5, unit: 'm/s' });
  });

  it('can be paged, filtered by days and taken as a table', async () => {
    const all = await (await get(flags, '/api/v1/weather/flags')).json();
    const first = await (await get(flags, '/api/v1/weather/flags?limit=1')).json();
    const second = await (await get(flags, `/api/v1/weather/flags?limit=1&cursor=${first.next_cursor}`)).json();
    expect([first.items[0], second.items[0]]).toEqual(all.items.slice(0, 2));
    const april = await (await get(flags, '/api/v1/weather/flags?from=2024-04-03&to=2024-04-03&site=S2')).json();
    expect(april.items.map((flag: { rule: string }) => flag.rule)).toContain('wind-still');
    const csv = (await (await get(flags, '/api/v1/weather/flags.csv?rule=spike')).text()).trimEnd().split('\r\n');
    expect(csv).toHaveLength(2);
    expect(csv[0]).toMatch(/^source,site,site_name,variable,rule/);
  });

  it('stay within their district', async () => {
    expect((await (await get(flags, '/api/v1/weather/flags', made.tokens.other)).json()).total).toBe(0);
    const items = (await (await get(checks, '/api/v1/weather/check', made.tokens.other)).json()).items;
    expect(items).toMatchObject([{ source: 'stations', checked_at: null }]);
  });

  it('mark open ones as suspect values and change none', async () => {
    const found = await load();
    const day = 800;
    expect(found.quality?.air_temperature_max_c?.[day]).toBe(QUALITY.suspect);
    expect(found.quality?.air_temperature_max_c?.[day - 1]).toBe(QUALITY.measured);
    expect(found.values.air_temperature_max_c?.[day]).toBeGreaterThan(30);
  });
});

describe('decisions', () => {
  it('are previewed without being made', async () => {
    const before = await load();
    const path = '/api/v1/weather/corrections/preview';
    const answer = await (await preview(request(path, { token: made.tokens.read, body: { ...SPIKE, act: 'offset', amount: -30 } }))).json();
    expect(answer).toMatchObject({ day_count: 1, changed_days: 1, unit: '°C' });
    expect(answer.days[0].corrected).toBeCloseTo(answer.days[0].raw - 30, 4);
    expect(answer.reference_et_after_mm).toBeLessThan(answer.reference_et_before_mm);
    expect(await load()).toEqual(before);
  });

  it('reject, mark stale, settle the flag, and undo to the last bit', async () => {
    const [raw, before] = [await storedBlocks(), await load()];
    const response = await post({ ...STILL, act: 'reject' });
    expect(response.status).toBe(201);
    const correction = await response.json();
    expect(correction).toMatchObject({ act: 'reject', standing: true, created_by: 'token “write of tests”', reason: 'the cups stood' });
    const rejected = await load();
    const wind = rejected.values.wind_speed_m_s?.subarray(1096 + 820, 1096 + 825);
    expect([...(wind ?? [])].map(Number.isNaN)).toEqual([false, true, true, true, false]);
    expect(rejected.quality?.wind_speed_m_s?.[1096 + 821]).toBe(QUALITY.rejected);
    const [standing] = await fresh.db.inDistrict(made.a.id, (tx) =>
      tx
        .select()
        .from(run)
        .where(and(eq(run.seasonCode, '2024'), eq(run.standing, true))),
    );
    expect(standing.staleReason).toBe('weather corrected at S2');
    await check();
    const settled = (await (await get(flags, '/api/v1/weather/flags?rule=wind-still')).json()).items;
    expect(settled).toMatchObject([{ state: 'rejected', correction_id: correction.id }]);

    const undone = await undo(request(`/api/v1/weather/corrections/${correction.id}/undo`, { token: made.tokens.write, method: 'POST' }));
    expect(undone.status).toBe(200);
    expect(await undone.json()).toMatchObject({ standing: false, undone_by: 'token “write of tests”' });
    await check();
    expect(await load()).toEqual(before);
    expect(await storedBlocks()).toEqual(raw);
    expect((await (await get(flags, '/api/v1/weather/flags?rule=wind-still')).json()).items).toMatchObject([{ state: 'open' }]);
    const again = await undo(request(`/api/v1/weather/corrections/${correction.id}/undo`, { token: made.tokens.write, method: 'POST' }));
    expect(again.status).toBe(409);
  });

  it('keep an acceptance over later checks', async () => {
    const correction = await (await post({ ...SPIKE, act: 'accept', rule: 'spike' })).json();
    await check();
    await check();
    const [flag] = (await (await get(flags, '/api/v1/weather/flags?rule=spike')).json()).items;
    expect(flag).toMatchObject({ state: 'accepted', correction_id: correction.id });
    await undo(request(`/api/v1/weather/corrections/${correction.id}/undo`, { token: made.tokens.write, method: 'POST' }));
  });

  it('let the later of two win, on the raw value', async () => {
    const raw = (await load()).values.air_temperature_max_c?.[800] ?? Number.NaN;
    const first = await (await post({ ...SPIKE, act: 'offset', amount: -10 })).json();
    const second = await (await post({ ...SPIKE, act: 'offset', amount: -30 })).json();
    expect((await load()).values.air_temperature_max_c?.[800]).toBeCloseTo(raw - 30, 6);
    await undo(request(`/api/v1/weather/corrections/${second.id}/undo`, { token: made.tokens.write, method: 'POST' }));
    expect((await load()).values.air_temperature_max_c?.[800]).toBeCloseTo(raw - 10, 6);
    await undo(request(`/api/v1/weather/corrections/${first.id}/undo`, { token: made.tokens.write, method: 'POST' }));
    const listed = (await (await get(corrections, '/api/v1/weather/corrections?standing=true')).json()).items;
    expect(listed).toEqual([]);
  });

  it.each([
    ['a factor out of bounds', { act: 'factor', amount: 9 }, /outside 0.2 to 5/],
    ['a value beyond the physical limit', { act: 'offset', amount: 25 }, /would be outside −60 to 60 °C/],
    ['a maximum below its minimum', { act: 'offset', amount: -50 }, /below the minimum of/],
    ['an amount that is not called for', { act: 'accept', amount: 1 }, /takes no amount/],
    ['no amount', { act: 'factor' }, /needs an amount/],
    ['an unknown rule', { act: 'accept', rule: 'nothing' }, /is not a rule/],
    ['days out of order', { act: 'reject', from: '2024-03-12' }, /is after to/],
    ['days without a record', { act: 'reject', from: '1990-01-01', to: '1990-01-02' }, /nothing is stored/],
    ['days ahead', { act: 'replace', amount: 20, from: '2999-01-01', to: '2999-01-02' }, /lies ahead/],
    ['values outside the period', { act: 'replace', values: { '2024-03-12': 20 } }, /is outside 2024-03-11 to 2024-03-11/],
  ])('refuse %s in words', async (_, wanted, words) => {
    const response = await post({ ...SPIKE, ...wanted });
    expect(response.status).toBe(422);
    expect((await response.json()).detail).toMatch(words);
  });

  it('need a reason and a site of the district', async () => {
    expect((await post({ ...SPIKE, act: 'reject', reason: ' ' })).status).toBe(400);
    expect((await post({ ...SPIKE, act: 'reject', site: 'S9' })).status).toBe(404);
    expect((await post({ ...SPIKE, act: 'reject', from: '2024-02-30', to: '2024-02-30' })).status).toBe(400);
  });

  it('are for operators and managers; others read', async () => {
    expect((await post({ ...SPIKE, act: 'reject' }, made.tokens.read)).status).toBe(403);
    for (const name of ['reg', 'gus']) {
      const cookie = await cookieOf(name);
      expect((await correct(request('/api/v1/weather/corrections', { cookie, body: { ...SPIKE, act: 'reject' } }))).status).toBe(403);
      expect((await corrections(request('/api/v1/weather/corrections', { cookie }))).status).toBe(200);
      expect((await runCheck(request('/api/v1/weather/check', { cookie, body: {} }))).status).toBe(403);
    }
    const cookie = await cookieOf('olga');
    const response = await correct(request('/api/v1/weather/corrections', { cookie, body: { ...SPIKE, act: 'reject' } }));
    expect(response.status).toBe(201);
    const { id, created_by } = await response.json();
    expect(created_by).toBe('olga');
    const other = await undo(request(`/api/v1/weather/corrections/${id}/undo`, { token: made.tokens.other, method: 'POST' }));
    expect(other.status).toBe(404);
    await undo(request(`/api/v1/weather/corrections/${id}/undo`, { cookie, method: 'POST' }));
  });
});

describe('checks', () => {
  it('tell what they looked at and can be asked for again', async () => {
    const [item] = (await (await get(checks, '/api/v1/weather/check')).json()).items;
    expect(item).toMatchObject({
      source: 'stations',
      kind: 'stations',
      checked: true,
      sites: 3,
      first_day: '2022-01-01',
      last_day: '2024-12-31',
    });
    expect(item.pyranometers.map((each: { site: string }) => each.site)).toEqual(['S1', 'S2', 'S3']);
    const asked = await runCheck(request('/api/v1/weather/check', { token: made.tokens.write, body: { source: 'stations' } }));
    expect(asked.status).toBe(202);
    expect(await asked.json()).toEqual({ sources: ['stations'] });
    expect((await runCheck(request('/api/v1/weather/check', { token: made.tokens.write, body: { source: 'none' } }))).status).toBe(404);
  });

  it('see a station that was moved in the table', async () => {
    const { site } = await import('../../db/schema/weather.ts');
    await fresh.db.inDistrict(made.a.id, (tx) => tx.update(site).set({ latitude: 43.61 }).where(eq(site.code, 'S3')));
    await check();
    await check();
    const moved = (await (await get(flags, '/api/v1/weather/flags?rule=station-moved')).json()).items;
    expect(moved).toMatchObject([{ site: 'S3', severity: 'note', unit: 'm' }]);
    // one hundredth of a degree of latitude at 43.6° N is 1111 m (WGS 84 meridian, 111.1 km a degree)
    expect(Math.abs(moved[0].value - 1111)).toBeLessThan(1);
  });
});
