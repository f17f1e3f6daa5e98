/** Days before a season: how far the weather reaches back without a break, and which plantings of earlier seasons stand in them. Days are counted by hand. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { planting, season } from '../../db/schema/land.ts';
import { site, weatherBlock, weatherSource } from '../../db/schema/weather.ts';
import { database } from '../../lib/access/database.ts';
import { earlierPlantings, leadWithWeather } from '../../lib/jobs/run-spin-up.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { makeDistrict } from '../support/import-district.ts';

let test: TestDatabase;
let districtId: string;

beforeAll(async () => {
  test = await testDatabase();
  districtId = await makeDistrict('lead');
  await database().inDistrict(districtId, async (tx) => {
    await tx.insert(weatherSource).values({ districtId, sourceId: 1, name: 'stations' });
    for (const ordinal of [0, 1])
      await tx.insert(site).values({ districtId, sourceId: 1, ordinal, code: `S${ordinal}`, name: 'S', longitude: -116, latitude: 43.6 });
    // February: the first site stops on the 10th, the second begins on the 13th: 11 and 12 have nothing
    const february = Float32Array.from({ length: 56 }, (_, i) => ((i < 28 ? i < 10 : i - 28 >= 12) ? 15 : Number.NaN));
    for (const [month, days, values] of [
      ['2023-01-01', 31, new Float32Array(62).fill(15)],
      ['2023-02-01', 28, february],
    ] as const) {
      const bytes = new Uint8Array(values.buffer);
      const block = { districtId, sourceId: 1, variable: 'air_temperature_max_c', month, siteCount: 2, dayCount: days, values: bytes };
      await tx.insert(weatherBlock).values({ ...block, quality: new Uint8Array(values.length).fill(1) });
    }
    for (const [code, startDate, endDate] of [
      ['autumn', '2022-09-01', '2022-11-30'],
      ['winter', '2022-12-01', '2023-02-10'],
      // overlaps winter and is passed over
      ['cold', '2022-11-15', '2023-01-31'],
    ])
      await tx.insert(season).values({ districtId, code, name: code, startDate, endDate });
    const grown = { districtId, cropCode: 'maize', calendarCode: 'maize-1' };
    await tx.insert(planting).values([
      { ...grown, parcelCode: 'A', seasonCode: 'winter', sequence: 1, plantingDate: '2022-12-05' },
      { ...grown, parcelCode: 'B', seasonCode: 'winter', sequence: 1, plantingDate: '2022-12-05', harvestDate: '2023-01-20' },
      // planted in autumn, told with the winter
      { ...grown, parcelCode: 'C', seasonCode: 'winter', sequence: 1, plantingDate: '2022-11-10' },
      { ...grown, parcelCode: 'C', seasonCode: 'autumn', sequence: 1, plantingDate: '2022-09-15' },
      { ...grown, parcelCode: 'A', seasonCode: 'autumn', sequence: 1, plantingDate: '2022-09-15' },
      { ...grown, parcelCode: 'A', seasonCode: 'cold', sequence: 1, plantingDate: '2022-11-20' },
    ]);
  });
});
afterAll(() => test.close());

const settings = { source: null };
const lead = (startDate: string, asked: number) =>
  database().inDistrict(districtId, (tx) => leadWithWeather(tx, districtId, { startDate, asked, settings }));

describe('the days before a season', () => {
  it('reach back while any site has weather', async () => {
    // 13 … 28 February
    expect(await lead('2023-03-01', 365)).toEqual({ days: 16, startDate: '2023-02-13', asked: 365 });
    expect(await lead('2023-03-01', 5)).toEqual({ days: 5, startDate: '2023-02-24', asked: 5 });
    // 1 January … 10 February, over the turn of a month
    expect(await lead('2023-02-11', 365)).toEqual({ days: 41, startDate: '2023-01-01', asked: 365 });
    expect(await lead('2023-02-12', 365)).toEqual({ days: 0, startDate: '2023-02-12', asked: 365 });
  });

  it('carry the plantings of the seasons before, each to the next one’s beginning or first planting', async () => {
    const found = await database().inDistrict(districtId, (tx) =>
      earlierPlantings(tx, districtId, {
        season: '2023',
        startDate: '2023-03-01',
        lead: { days: 181, startDate: '2022-09-01', asked: 181 },
        codes: ['A', 'B', 'C', 'D'],
        own: [{ parcelCode: 'A', plantingDate: '2023-02-20' }],
      }),
    );
    const ends = (code: string) => (found.get(code) ?? []).map(({ seasonCode, harvestDate }) => [seasonCode, harvestDate]);
    expect(ends('A')).toEqual([
      ['winter', '2023-02-20'],
      ['autumn', '2022-12-01'],
    ]);
    expect(ends('B')).toEqual([['winter', '2023-01-20']]);
    expect(ends('C')).toEqual([
      ['winter', '2023-03-01'],
      ['autumn', '2022-11-10'],
    ]);
    expect(found.has('D')).toBe(false);
  });

  it('have no plantings that were harvested before them, and none without days', async () => {
    const with_ = (days: number, startDate: string) =>
      database().inDistrict(districtId, (tx) =>
        earlierPlantings(tx, districtId, {
          ...{ season: '2023', startDate: '2023-03-01', lead: { days, startDate, asked: days }, codes: ['A', 'B'], own: [] },
        }),
      );
    // winter ended on 10 February; what it did not harvest still stands
    expect([...(await with_(16, '2023-02-13')).keys()]).toEqual(['A']);
    expect([...(await with_(30, '2023-01-30')).keys()]).toEqual(['A']);
    expect([...(await with_(0, '2023-03-01')).keys()]).toEqual([]);
  });
});
