/** What a season does and refuses, on small seasons made by hand. */
import { describe, expect, test } from 'vitest';
import { Refused, ShapeError } from '../../lib/base/errors.ts';
import { runSeason } from '../../lib/season/kernel.ts';
import {
  DAILY_VARIABLE_COUNT,
  DAILY_VARIABLES,
  type DailyVariable,
  type ParcelInput,
  type Planting,
  type SeasonInput,
} from '../../lib/season/types.ts';

const DAYS = 120;

function planting(change: Partial<Planting> = {}, crop: Partial<Planting['crop']> = {}): Planting {
  return {
    crop: {
      code: 'bean',
      name: 'Made-up bean',
      group: 'made-up',
      type: 'annual',
      surface: 'short',
      basalInitial: 0.15,
      basalMid: 1.1,
      basalEnd: 0.25,
      heightMax: 0.4,
      rootDepthMin: 0.2,
      rootDepthMax: 0.8,
      depletionFraction: 0.45,
      yieldResponse: 1.15,
      lastIrrigation: 0.5,
      ...crop,
    },
    calendar: { code: 'c', name: 'c', initial: 20, development: 20, mid: 30, late: 20, laterCycle: null },
    plantingDate: '2024-05-01',
    harvestDate: null,
    cutDates: [],
    areaShare: 1,
    ...change,
  };
}

function parcel(change: Partial<ParcelInput> = {}): ParcelInput {
  return {
    code: 'P1',
    area: 1e4,
    latitude: 40,
    longitude: -1,
    elevation: 200,
    soil: {
      code: 'loam',
      name: 'Made-up loam',
      fieldCapacity: 0.3,
      wiltingPoint: 0.14,
      evaporationDepth: 0.1,
      readilyEvaporableWater: 9,
      totalEvaporableWater: 23,
      curveNumber: Number.NaN,
      rootLimit: Number.NaN,
    },
    method: {
      code: 'basin',
      name: 'Made-up basin',
      efficiency: 0.5,
      wettedFraction: 1,
      underCanopy: false,
      maximumDailyDepth: 200,
      triggerFraction: 1,
    },
    plantings: [planting()],
    weights: [{ site: 0, weight: 1 }],
    ...change,
  };
}

/** Dry, hot and steady: 120 days from 1 May 2024. */
function season(parcels: ParcelInput[], change: Partial<SeasonInput> = {}): SeasonInput {
  const row = (value: number) => new Float64Array(DAYS).fill(value);
  return {
    startDate: '2024-05-01',
    dayCount: DAYS,
    settings: { method: 'fao56', initialDepletion: 0, lapseRate: 0.0065, irrigate: true, runoff: true },
    sites: [{ code: 'S1', name: 'Made-up station', longitude: -1, latitude: 40, elevation: 200, windHeight: 2 }],
    weather: {
      siteCount: 1,
      dayCount: DAYS,
      airTemperatureMax: row(32),
      airTemperatureMin: row(15),
      actualVapourPressure: row(1.2),
      solarRadiation: row(26),
      windSpeed2m: row(2),
      precipitation: row(0),
      flags: new Uint32Array(DAYS),
    },
    parcels,
    ...change,
  };
}

function rows(input: SeasonInput, p = 0): (variable: DailyVariable) => Float64Array {
  const exact = runSeason(input, { keep: 'double' }).dailyExact as Float64Array;
  return (variable) => {
    const v = DAILY_VARIABLES.findIndex(({ id }) => id === variable);
    return exact.subarray((p * DAILY_VARIABLE_COUNT + v) * DAYS, (p * DAILY_VARIABLE_COUNT + v + 1) * DAYS);
  };
}

describe('irrigation', () => {
  test('refills the root zone when depletion has reached the trigger, and gross is net over efficiency', () => {
    const standing = planting({}, { type: 'perennial' });
    const get = rows(season([parcel({ plantings: [standing] })]));
    const net = get('net_requirement');
    const days = net.findIndex((depth) => depth > 0);
    const before = get('root_zone_depletion')[days - 1];
    const raw = get('readily_available_water');
    expect(before).toBeGreaterThanOrEqual(raw[days - 1]);
    // the dryness of the bare surface, at most TEW, does not count
    expect(get('root_zone_depletion')[days - 2]).toBeLessThan(raw[days - 2] + parcel().soil.totalEvaporableWater);
    expect(net[days]).toBeCloseTo(before, 9);
    expect(get('gross_requirement')[days]).toBeCloseTo(2 * net[days], 9);
    expect(net[days + 1]).toBe(0);
  });

  test('the drying of a bare surface does not by itself call for water', () => {
    const get = rows(season([parcel({ plantings: [planting({}, { rootDepthMin: 0.4 })] })]));
    const first = get('net_requirement').findIndex((depth) => depth > 0);
    // bare soil loses REW of 9 mm in two days and most of TEW in a week, more than a tenth of what the soil holds; no water is called for yet
    expect(first).toBeGreaterThan(7);
    expect(get('stress_coefficient')[first - 1]).toBe(1);
  });

  test('a young crop that would run short is watered for the soil it is about to root in', () => {
    const get = rows(season([parcel()]));
    const first = get('net_requirement').findIndex((depth) => depth > 0);
    expect(get('root_zone_depletion')[first - 1]).toBeGreaterThan(0.45 * get('total_available_water')[first - 1] * 0.9);
    // the refill reaches half the mature depth, so it is more than the shallow root zone had lost, and none of it is lost
    expect(get('net_requirement')[first]).toBeGreaterThanOrEqual(get('root_zone_depletion')[first - 1]);
    expect(get('deep_percolation').every((depth) => depth === 0)).toBe(true);
  });

  test('a system that cannot refill in a day goes on until it has', () => {
    const slow = parcel({ method: { ...parcel().method, maximumDailyDepth: 12 } });
    const net = rows(season([slow]))('net_requirement');
    const first = net.findIndex((depth) => depth > 0);
    expect(net[first]).toBe(12);
    expect(net[first + 1]).toBeGreaterThan(0);
  });

  test('stops half way through the late stage (day 80 of 90), and at harvest', () => {
    const net = rows(season([parcel({ method: { ...parcel().method, triggerFraction: 0 } })]))('net_requirement');
    expect(net[79]).toBeGreaterThan(0);
    expect(Math.max(...net.subarray(80))).toBe(0);
  });

  test('never drains: without rain there is no deep percolation', () => {
    expect(Math.max(...rows(season([parcel()]))('deep_percolation'))).toBe(0);
  });
});

describe('rain', () => {
  test('a storm refills the root zone and the soil below it before anything percolates', () => {
    const input = season([parcel()], { settings: { ...season([]).settings, initialDepletion: 0.5, irrigate: false } });
    input.weather.precipitation[0] = 100;
    const get = rows(input);
    // TAW of 0.8 m is 128 mm, half of it empty: 64 mm stay in the ground, 36 mm percolate.
    expect(get('deep_percolation')[0]).toBeCloseTo(36, 9);
    // what stays within reach of the season's roots is effective: rain less runoff less percolation
    expect(get('effective_precipitation')[0]).toBeCloseTo(64, 9);
  });

  test('runs off by the curve number only where the settings and the soil say so', () => {
    const soil = { ...parcel().soil, curveNumber: 78 };
    const input = season([parcel({ soil })]);
    input.weather.precipitation[3] = 75;
    expect(rows(input)('surface_runoff')[3]).toBeCloseTo(27.82, 2); // NEH 630 chapter 10: CN 78, 75 mm
    expect(rows({ ...input, settings: { ...input.settings, runoff: false } })('surface_runoff')[3]).toBe(0);
  });
});

describe('plantings', () => {
  test('before and after the crop the ground only evaporates', () => {
    const get = rows(season([parcel({ plantings: [planting({ plantingDate: '2024-05-11', harvestDate: '2024-06-20' })] })]));
    const basal = get('basal_crop_coefficient');
    expect([basal[9], basal[10], basal[49], basal[50]].map((kcb) => kcb > 0)).toEqual([false, true, true, false]);
    expect(get('adjusted_crop_et')[100]).toBeCloseTo(get('evaporation')[100], 12);
    expect(
      get('net_requirement')
        .subarray(50)
        .every((depth) => depth === 0),
    ).toBe(true);
  });

  test('a planting that began before the run is taken up in the middle of its stages', () => {
    const early = rows(season([parcel({ plantings: [planting({ plantingDate: '2024-04-01' })] })]));
    expect(early('total_available_water')[0]).toBeCloseTo(160 * (0.2 + 0.6 * (11 / 20)), 9); // day 31: 11 of 20 days of development
    expect(early('basal_crop_coefficient')[60]).toBe(0); // 90 days from 1 April end on 30 June
  });

  test('a stage outside the run leaves the table coefficient', () => {
    const short = rows(season([parcel({ plantings: [planting({ plantingDate: '2024-08-10' })] })]));
    expect(short('basal_crop_coefficient')[DAYS - 1]).toBe(0.15);
  });

  test('half a parcel: depths are over the whole, the soil’s state over the planted half', () => {
    const whole = rows(season([parcel()]));
    const half = rows(season([parcel({ plantings: [planting({ areaShare: 0.5 })] })]));
    for (let d = 0; d < DAYS; d++) {
      expect(half('net_requirement')[d]).toBeCloseTo(whole('net_requirement')[d] / 2, 9);
      expect(half('root_zone_depletion')[d]).toBeCloseTo(whole('root_zone_depletion')[d], 9);
    }
  });
});

describe('refusals', () => {
  test.each<[string, Partial<ParcelInput>, RegExp]>([
    [
      'a crop on an unknown surface',
      { plantings: [planting({}, { surface: 'pan' as 'tall' })] },
      /crop bean has coefficients for the pan surface/,
    ],
    [
      'more than the parcel planted at once',
      { plantings: [planting({ areaShare: 0.7 }), planting({ areaShare: 0.5, plantingDate: '2024-06-01' })] },
      /parcel P1 cover 1.2 of its area on 2024-06-01/,
    ],
    [
      'wilting point above field capacity',
      { soil: { ...parcel().soil, wiltingPoint: 0.35 } },
      /field capacity 0.3 must be above wilting point 0.35/,
    ],
    [
      'harvest before planting',
      { plantings: [planting({ harvestDate: '2024-04-30' })] },
      /harvest 2024-04-30 is not after planting 2024-05-01/,
    ],
    ['a date that is none', { plantings: [planting({ plantingDate: '2024-02-30' })] }, /"2024-02-30" is not a date/],
    ['a site that is none', { weights: [{ site: 4, weight: 1 }] }, /site index 4 is not within 0 … 0/],
    ['efficiency 0', { method: { ...parcel().method, efficiency: 0 } }, /efficiency 0 is not within 0.01 … 1/],
    [
      'layers with a gap',
      {
        soil: {
          ...parcel().soil,
          layers: [
            { top: 0, bottom: 0.3, fieldCapacity: 0.3, wiltingPoint: 0.1 },
            { top: 0.4, bottom: 1, fieldCapacity: 0.3, wiltingPoint: 0.1 },
          ],
        },
      },
      /top 0.4 m must be where the layer above ends, 0.3 m \(layer 2 of soil loam/,
    ],
    [
      'an efficiency curve that goes back',
      {
        method: {
          ...parcel().method,
          efficiencyByDepth: [
            { depth: 40, efficiency: 0.6 },
            { depth: 20, efficiency: 0.7 },
          ],
        },
      },
      /depth 20 mm of the efficiency curve must be above the one before it/,
    ],
    [
      'a least depth above the greatest',
      { method: { ...parcel().method, minimumDepth: 300 } },
      /least depth \[mm\] 300 is not within 0 … 200/,
    ],
    [
      'soil water of the first morning out of order',
      {
        initialWater: {
          profile: [
            { bottom: 0.5, depletion: 10 },
            { bottom: 0.3, depletion: 5 },
          ],
        },
      },
      /depth 0.3 m must be below 0.5 m/,
    ],
    ['days without values', { deliveries: { days: [1, 2], values: [10] } }, /delivery \[mm\]: 2 days but 1 values/],
    ['no elevation', { elevation: Number.NaN }, /elevation NaN is not within -500 … 9000 \(parcel P1\)/],
  ])('%s', (_, change, message) => {
    expect(() => runSeason(season([parcel(change)]))).toThrow(message);
    expect(() => runSeason(season([parcel(change)]))).toThrow(Refused);
  });

  test('a day without weather names parcel, date and sites', () => {
    const input = season([parcel()]);
    input.weather.airTemperatureMin[7] = Number.NaN;
    expect(() => runSeason(input)).toThrow(/no weather for parcel P1 on 2024-05-08: none of its sites \(S1\)/);
  });

  test('lead days that leave no season', () => {
    expect(() => runSeason(season([parcel()], { leadDays: DAYS }))).toThrow(
      /lead days 120 must be a whole number from 0 to below the 120 days/,
    );
  });

  test('weather of another length is a shape error', () => {
    expect(() => runSeason(season([parcel()], { dayCount: 100 }))).toThrow(ShapeError);
  });
});
