/** Which stored weather is computed with: sources, cells of a grid, hourly blocks, quality. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { district } from '../../db/schema/district.ts';
import { site, weatherBlock, weatherSource } from '../../db/schema/weather.ts';
import { loadObservations } from '../../lib/jobs/observations.ts';
import { QUALITY } from '../../lib/weather/variable.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { soundRecord } from '../support/quality-record.ts';
import { storeRecord } from '../support/quality-store.ts';

let fresh: TestDatabase;
const MIXED = '00000000-0000-4000-8000-00000000000a';
const GRIDS = '00000000-0000-4000-8000-00000000000b';
const EMPTY_STATIONS = '00000000-0000-4000-8000-00000000000c';
const CELLS = 6;

/** A grid whose cell c has 100 c + d millimetres on day d of January 2024. */
async function storeGrid(districtId: string, sourceId: number, name: string, rank: number): Promise<void> {
  await fresh.db.inDistrict(districtId, async (tx) => {
    await tx.insert(weatherSource).values({ districtId, sourceId, name, kind: 'grid', rank });
    const cells = Array.from({ length: CELLS }, (_, ordinal) => ({
      ...{ districtId, sourceId, ordinal, code: `${name} ${ordinal}`, name: '', longitude: ordinal, latitude: 40 },
    }));
    await tx.insert(site).values(cells);
    const values = Float32Array.from({ length: CELLS * 31 }, (_, i) => 100 * Math.floor(i / 31) + (i % 31));
    const quality = Uint8Array.from(values, (_, i) => (i === 2 * 31 + 4 ? QUALITY.filledInTime : QUALITY.measured));
    const block = { districtId, sourceId, variable: 'precipitation_mm', month: '2024-01-01', siteCount: CELLS, dayCount: 31 };
    await tx.insert(weatherBlock).values({ ...block, values: new Uint8Array(values.buffer), quality });
  });
}

beforeAll(async () => {
  fresh = await testDatabase();
  for (const [districtId, code] of [
    [MIXED, 'mixed'],
    [GRIDS, 'grids'],
    [EMPTY_STATIONS, 'empty'],
  ] as const) {
    await fresh.db.inDistrict(districtId, (tx) => tx.insert(district).values({ districtId, code, name: code, timeZone: 'UTC' }));
  }
  await storeGrid(MIXED, 1, 'grid', 1);
  const record = soundRecord(60, '2024-01-01', 2);
  await fresh.db.inDistrict(MIXED, (tx) => storeRecord(tx, MIXED, { sourceId: 2, name: 'stations', rank: 2 }, record));
  await fresh.db.inDistrict(MIXED, (tx) =>
    storeRecord(tx, MIXED, { sourceId: 3, name: 'more stations', rank: 3 }, soundRecord(29, '2024-02-01', 1)),
  );
  const hours = new Float32Array(2 * 31 * 24).fill(20);
  await fresh.db.inDistrict(MIXED, (tx) =>
    tx.insert(weatherBlock).values({
      ...{ districtId: MIXED, sourceId: 2, variable: 'hour_air_temperature_c', month: '2023-12-01', siteCount: 2, dayCount: 31, steps: 24 },
      ...{ values: new Uint8Array(hours.buffer), quality: new Uint8Array(hours.length).fill(1) },
    }),
  );
  await storeGrid(GRIDS, 1, 'second', 2);
  await storeGrid(GRIDS, 2, 'first', 1);
  await storeGrid(EMPTY_STATIONS, 2, 'grid', 2);
  await fresh.db.inDistrict(EMPTY_STATIONS, (tx) =>
    tx.insert(weatherSource).values({ districtId: EMPTY_STATIONS, sourceId: 1, name: 'stations', rank: 1 }),
  );
});
afterAll(() => fresh.close());

const load = (districtId: string, wanted: Parameters<typeof loadObservations>[2] = {}) =>
  fresh.db.inDistrict(districtId, (tx) => loadObservations(tx, districtId, wanted));

describe('without a source named', () => {
  it('all stations are loaded where any has weather, and no grid', async () => {
    const found = await load(MIXED);
    expect(found.sites.map(({ code }) => code)).toEqual(['S1', 'S2', 'S1']);
    expect(found.startDate).toBe('2024-01-01');
    // January and February of a leap year
    expect(found.dayCount).toBe(60);
  });

  it('the first grid by rank is loaded where there are no stations, or none with weather', async () => {
    expect((await load(GRIDS)).sites.map(({ code }) => code)).toContain('first 0');
    expect((await load(GRIDS)).sites).toHaveLength(CELLS);
    expect((await load(EMPTY_STATIONS)).sites.map(({ code }) => code)).toContain('grid 0');
  });

  it('hourly blocks neither count as days nor as variables', async () => {
    const found = await load(MIXED);
    expect(Object.keys(found.values)).not.toContain('hour_air_temperature_c');
    expect(found.quality).toBeUndefined();
  });
});

describe('cells that are asked for', () => {
  it('come in that order, and no others', async () => {
    const sites = [4, 1].map((ordinal) => ({ sourceId: 1, ordinal }));
    const found = await load(MIXED, { sites, from: '2024-01-10', to: '2024-01-12' });
    expect(found.sites.map(({ code }) => code)).toEqual(['grid 4', 'grid 1']);
    expect([...(found.values.precipitation_mm ?? [])]).toEqual([409, 410, 411, 109, 110, 111]);
  });

  it('bring the quality that was stored, and measured beside it', async () => {
    const found = await load(MIXED, { sites: [{ sourceId: 1, ordinal: 2 }], from: '2024-01-04', to: '2024-01-06' });
    expect([...(found.quality?.precipitation_mm ?? [])]).toEqual([QUALITY.measured, QUALITY.filledInTime, QUALITY.measured]);
    const others = await load(MIXED, { sites: [{ sourceId: 1, ordinal: 3 }], from: '2024-01-04', to: '2024-01-06' });
    expect(others.quality).toBeUndefined();
  });

  it('may be of a source named, and days outside the record are missing', async () => {
    const found = await load(MIXED, { source: 'grid', from: '2023-12-31', to: '2024-01-01' });
    expect(found.sites).toHaveLength(CELLS);
    expect([...(found.values.precipitation_mm ?? []).slice(0, 4)]).toEqual([Number.NaN, 0, Number.NaN, 100]);
  });
});
