/** What a strip's rows hold: calendars by weather, practice, cover, salt and water tables. Expected values are counted or worked by hand. */
import { describe, expect, test } from 'vitest';
import { isoDate } from '../../lib/base/civil-date.ts';
import { tallToShortRatio } from '../../lib/crop/climate-adjustment.ts';
import { MARK } from '../../lib/season/pack.ts';
import { planParcel } from '../../lib/season/strip-curve.ts';
import type { Crop, CropCalendar, Planting } from '../../lib/season/types.ts';
import { BEAN, BEAN_DAYS, drawnStrip, LOAM, oneParcel, planting } from '../support/drawn-strip.ts';

/** 22 May 2023 is day 141 of a run from 1 January. */
const SOWN = 141;
const END = SOWN + 100;

const ALFALFA: Crop = {
  ...BEAN,
  code: 'alfalfa',
  name: 'Alfalfa',
  type: 'forage-cut',
  basalInitial: 0.3,
  basalMid: 1.15,
  basalEnd: 1.1,
  heightMax: 0.7,
  rootDepthMin: 1.5,
  rootDepthMax: 1.5,
  lastIrrigation: 1,
  dormantBasal: 0.15,
};
const ALFALFA_CYCLES: CropCalendar = {
  code: 'a',
  name: 'a',
  initial: 10,
  development: 30,
  mid: 25,
  late: 10,
  laterCycle: { initial: 5, development: 20, mid: 10, late: 10 },
};

const TREE: Crop = {
  ...BEAN,
  type: 'orchard',
  basalInitial: 0.35,
  basalMid: 0.9,
  basalEnd: 0.65,
  heightMax: 4,
  rootDepthMin: 1.5,
  rootDepthMax: 1.5,
};

function days(curveMark: Uint8Array, bit: number): number[] {
  return [...curveMark.keys()].filter((d) => (curveMark[d] & bit) !== 0);
}

describe('calendars', () => {
  test('stage, planting and stage days of a bean', () => {
    const { curve, plan } = drawnStrip({ plantings: [planting()] });
    expect(plan.plantings[0].stageDays).toEqual([SOWN, SOWN + 25, SOWN + 50, SOWN + 80, END]);
    expect([SOWN - 1, SOWN, END - 1, END].map((d) => curve.planting[d])).toEqual([-1, 0, 0, -1]);
    expect([SOWN + 24, SOWN + 25, SOWN + 49, SOWN + 50, SOWN + 79, SOWN + 80].map((d) => curve.stage[d])).toEqual([0, 1, 1, 2, 2, 3]);
    expect(days(curve.mark, MARK.firstDay)).toEqual([SOWN]);
  });

  test('thermal stages on days of equal warmth are the calendar of days, to the last bit', () => {
    const thermal = { base: 6, ceiling: 40, initial: 375, development: 375, mid: 450, late: 300 }; // 15 °C d a day at 28/14
    const fixed = drawnStrip({ plantings: [planting()] });
    const byWeather = drawnStrip({ plantings: [planting({ calendar: { ...BEAN_DAYS, thermal } })] });
    for (const row of ['basal', 'height', 'rootDepth', 'stage', 'mark', 'available'] as const) {
      expect([...byWeather.curve[row]], row).toEqual([...fixed.curve[row]]);
    }
    expect(byWeather.plan.shared).toBe(false);
    expect(fixed.plan.shared).toBe(true);
  });

  test('a start rule moves the whole crop; ground before it is bare', () => {
    const calendar: CropCalendar = { ...BEAN_DAYS, start: { kind: 'air-temperature', threshold: 18, days: 1, latest: 60, offset: 2 } };
    const weather = (d: number) => (d < 160 ? { max: 20, min: 8 } : { max: 26, min: 12 });
    const { curve, plan } = drawnStrip({ plantings: [planting({ calendar })], weather });
    expect(plan.plantings[0].stageDays[0]).toBe(162);
    expect(plan.plantings[0].start).toEqual({ day: 160, met: true });
    expect([161, 162].map((d) => curve.basal[d])).toEqual([0, 0.15]);
  });

  // FAO-56 Fig. 35, southern Idaho: green-up about J 90, cuts J 165, 210, 255, frost J 280–290; day of year = offset + 1.
  test('Fig. 35: from the last to the first −4 °C, with its cuts, and dormant outside', () => {
    const calendar: CropCalendar = {
      ...ALFALFA_CYCLES,
      start: { kind: 'frost-free', threshold: -4, latest: 150 },
      killingFrost: { threshold: -4, notBefore: 120 },
    };
    const frosts = new Set([20, 60, 88, 284, 300]);
    const weather = (d: number) => ({ max: 22, min: frosts.has(d) ? -5 : 6 });
    const { curve, plan } = drawnStrip({ plantings: [planting({ crop: ALFALFA, calendar, plantingDate: '2023-01-01' })], weather });
    const [planted] = plan.plantings;
    expect(planted.cycles.map(({ start }) => start + 1)).toEqual([90, 165, 210, 255]);
    expect(planted.stageDays[4] + 1).toBe(285);
    expect(planted.frost + 1).toBe(285);
    expect([0, 88, 89, 283, 284, 364].map((d) => curve.basal[d])).toEqual([0.15, 0.15, 0.3, curve.basal[283], 0.15, 0.15]);
    expect(curve.basal[283]).toBeGreaterThan(0.9);
    expect(days(curve.mark, MARK.mayIrrigate)).toEqual(Array.from({ length: 284 - 89 }, (_, k) => 89 + k));
  });

  test('cuts by thermal time, later cycles by their own sums', () => {
    const calendar: CropCalendar = {
      ...ALFALFA_CYCLES,
      thermal: { base: 5, ceiling: 40, initial: 160, development: 160, mid: 160, late: 160 },
      laterThermal: { base: 5, ceiling: 40, initial: 80, development: 160, mid: 80, late: 80 },
    }; // 16 °C d a day at 28/14
    const { plan } = drawnStrip({
      plantings: [planting({ crop: ALFALFA, calendar, plantingDate: '2023-04-11', harvestDate: '2023-08-01' })],
    });
    expect(plan.plantings[0].cycles.map(({ start, end }) => [start, end])).toEqual([
      [100, 140],
      [140, 165],
      [165, 190],
      [190, 212],
    ]);
  });

  test('each cycle has its own coefficients, the last listed ones stand for the rest; without climate to adjust to they are the table’s', () => {
    const cycles = [
      { basalInitial: 0.3, basalMid: 1, basalEnd: 0.4 },
      { basalInitial: 0.4, basalMid: 0.9, basalEnd: 0.4 },
    ];
    // wind 2 m/s and RHmin 45 %: ea = 0.45 e0(28)
    const vapour = 0.45 * 0.6108 * Math.exp((17.27 * 28) / (28 + 237.3));
    const weather = () => ({ max: 28, min: 14, vapour });
    const { curve } = drawnStrip({
      plantings: [planting({ crop: ALFALFA, calendar: { ...ALFALFA_CYCLES, cycles }, plantingDate: '2023-04-11' })],
      weather,
    });
    const at = (d: number) => Number(curve.basal[d].toFixed(9));
    expect([100, 150, 175, 200, 220, 245].map(at)).toEqual([0.3, 1, 0.4, 0.9, 0.4, 0.9]);
  });

  test('a harvest before the start rule is met leaves the ground bare', () => {
    const calendar: CropCalendar = { ...BEAN_DAYS, start: { kind: 'rain', depth: 20, days: 2, latest: 90 } };
    const { plan, curve } = drawnStrip({ plantings: [planting({ calendar, harvestDate: '2023-06-20' })] });
    expect(plan.plantings[0].cycles).toEqual([]);
    expect(plan.plantings[0].stageDays).toEqual([-1, -1, -1, -1, -1]);
    expect(curve.basal.every((value) => value === 0)).toBe(true);
  });

  test('a crop whose end the weather decides makes way for the next; one that ends by its dates does not', () => {
    const thermal = { base: 6, ceiling: 40, initial: 375, development: 375, mid: 900, late: 600 };
    const second = planting({ plantingDate: '2023-08-20' }); // day 231
    const late = planting({ calendar: { ...BEAN_DAYS, thermal } });
    const { plan, curve } = drawnStrip({ plantings: [late, second] });
    expect(plan.plantings.map(({ stageDays }) => [stageDays[0], stageDays[4]])).toEqual([
      [SOWN, 231],
      [231, 331],
    ]);
    expect([230, 231].map((d) => curve.planting[d])).toEqual([0, 1]);
    expect(() => drawnStrip({ plantings: [planting(), second] })).toThrow(/cover 2 of its area on 2023-08-20/);
    expect(() => drawnStrip({ plantings: [{ ...late, harvestDate: '2023-09-30' }, second] })).toThrow(/more than 1/);
  });

  test('parcels with equal plantings share one plan', () => {
    const season = oneParcel({ plantings: [planting()] });
    const { season: packed, plan } = drawnStrip({ plantings: [planting()] });
    const twin = { ...packed.input.parcels[0], code: 'Q', plantings: [{ ...packed.input.parcels[0].plantings[0] }] };
    expect(planParcel(packed, twin)).toBe(plan);
    expect(planParcel(packed, { ...twin, plantings: [{ ...twin.plantings[0], irrigation: { kind: 'none' } }] })).not.toBe(plan);
    expect(season.parcels).toHaveLength(1);
  });
});

describe('weeds and dormancy', () => {
  test('weeds stand on cropped strips between crops: Kcb 0.15 + Kd (1.02 − 0.15) of 30 % cover, 0.2 m', () => {
    const { curve } = drawnStrip({ plantings: [planting()], settings: { fallow: 'weeds' } });
    const expected = 0.15 + 0.3 ** (1 / 1.2) * (1.02 - 0.15);
    expect(curve.basal[10]).toBeCloseTo(expected, 12);
    expect(curve.height[10]).toBe(0.2);
    expect([curve.planting[10], curve.mark[10]]).toEqual([-1, 0]);
    expect(curve.basal[SOWN]).toBe(0.15);
    expect(drawnStrip({ plantings: [], settings: { fallow: 'weeds' } }).curve.basal[10]).toBe(0);
  });
});

describe('canopy', () => {
  const noClimate = () => ({ max: 28, min: 14, vapour: 0.45 * 0.6108 * Math.exp((17.27 * 28) / 265.3) });

  test('Kcb mid by Eq. 98, height constant, cover in proportion to Kcb', () => {
    const canopy = { cover: 0.4, height: 3, stomatalFactor: 1 };
    const { curve } = drawnStrip({ plantings: [planting({ crop: TREE, canopy })], weather: noClimate });
    const mid = 0.15 + Math.min(1, 0.8, 0.4 ** 0.25) * (1.2 - 0.15);
    expect(curve.basal[SOWN + 60]).toBeCloseTo(mid, 9);
    expect(new Set(curve.height.subarray(SOWN, END))).toEqual(new Set([3]));
    expect(curve.covered[SOWN + 60]).toBeCloseTo(0.4, 9);
    expect(curve.covered[SOWN]).toBeCloseTo((0.4 * (0.35 - 0.15)) / (mid - 0.15), 9);
    expect(curve.covered[SOWN - 1]).toBeNaN();
    expect(curve.basal[END - 1]).toBeCloseTo((mid * 0.65) / 0.9, 9);
  });

  test('without a factor given a mature orchard has the table’s Kcb, a sparse one less, in the same proportion everywhere', () => {
    const at = (cover: number) =>
      drawnStrip({ plantings: [planting({ crop: TREE, canopy: { cover, height: 4 } })], weather: noClimate }).curve.basal;
    expect(at(0.7)[SOWN + 60]).toBeCloseTo(0.9, 9);
    const sparse = at(0.25);
    // Kd 0.5 against 0.7^(1/5): 0.15 + 0.5 / 0.931149 × 0.75
    expect(sparse[SOWN + 60]).toBeCloseTo(0.15 + (0.5 / 0.7 ** 0.2) * 0.75, 9);
    expect(sparse[SOWN]).toBeCloseTo((0.35 * sparse[SOWN + 60]) / 0.9, 9);
  });

  test('active ground cover holds the floor', () => {
    const canopy = { cover: 0.25, height: 4, groundBasal: 0.8, stomatalFactor: 1 };
    const { curve } = drawnStrip({ plantings: [planting({ crop: TREE, canopy })], weather: noClimate });
    expect(curve.basal[SOWN]).toBe(0.8);
    expect(curve.basal[SOWN + 60]).toBeCloseTo(0.8 + 0.5 * 0.4, 9);
  });
});

describe('practice', () => {
  const drawn = (over: Partial<Planting>, settings = {}) => drawnStrip({ plantings: [planting(over)], settings }).curve;

  test('interval: every seven days from the planting to the last irrigation', () => {
    const curve = drawn({ irrigation: { kind: 'interval', days: 7 } });
    const last = SOWN + 80 + 10; // half of the late stage of 20 days
    expect(days(curve.mark, MARK.due)).toEqual(Array.from({ length: 13 }, (_, k) => SOWN + 7 * k).filter((d) => d < last));
    expect(days(curve.mark, MARK.mayIrrigate)).toEqual([]);
  });

  test('interval of a planting before the run keeps its rhythm', () => {
    const curve = drawnStrip({
      plantings: [planting({ irrigation: { kind: 'interval', days: 10 } })],
      startDate: '2023-05-25',
      days: 40,
    }).curve;
    expect(days(curve.mark, MARK.due)).toEqual([7, 17, 27, 37]);
  });

  test('daily, fixed depth, none', () => {
    expect(days(drawn({ irrigation: { kind: 'daily' } }).mark, MARK.due)).toHaveLength(90);
    const fixed = drawn({ irrigation: { kind: 'fixed-depth', depth: 25 } });
    expect([fixed.fixedDepth[SOWN - 1], fixed.fixedDepth[SOWN], fixed.triggerShare[SOWN]]).toEqual([0, 25, 1]);
    expect(drawn({ irrigation: { kind: 'none' } }).mark.every((mark) => (mark & (MARK.due | MARK.mayIrrigate)) === 0)).toBe(true);
    expect(drawn({}, { irrigate: false }).mark.every((mark) => (mark & (MARK.due | MARK.mayIrrigate)) === 0)).toBe(true);
  });

  test('depletion with a trigger and a refill of its own; deficit by stage', () => {
    const depletion = drawn({ irrigation: { kind: 'depletion', trigger: 0.5, refill: 0.8 } });
    expect([depletion.triggerShare[SOWN], depletion.refillShare[SOWN], depletion.triggerShare[0]]).toEqual([0.5, 0.8, 1]);
    const each = (trigger: number, refill: number) => ({ trigger, refill });
    const stages = { initial: each(1, 1), development: each(1.5, 0.5), mid: each(1, 0.9), late: each(2, 0.4) };
    const deficit = drawn({ irrigation: { kind: 'deficit', stages } });
    expect([0, 30, 60, 90].map((d) => deficit.triggerShare[SOWN + d])).toEqual([1, 1.5, 1, 2]);
    expect([0, 30, 60, 90].map((d) => deficit.refillShare[SOWN + d])).toEqual([1, 0.5, 0.9, 0.4]);
  });

  test('pre-irrigation and germination', () => {
    const refill = drawn({ preIrrigation: { daysBefore: 7 }, germination: [{ daysAfter: 2, depth: 15 }] });
    expect(days(refill.mark, MARK.refill)).toEqual([SOWN - 7]);
    expect(refill.scheduleDepth[SOWN - 7]).toBe(0.4);
    expect(refill.scheduleAvailable[SOWN - 7]).toBeCloseTo(130 * 0.4, 9);
    expect(refill.prescribed[SOWN + 2]).toBe(15);
    const depth = drawn({ preIrrigation: { daysBefore: 3, depth: 60 } });
    expect(depth.prescribed[SOWN - 3]).toBe(60);
    expect(days(depth.mark, MARK.refill)).toEqual([]);
  });

  test('mulch on the days of the planting', () => {
    const plastic = drawn({ mulch: { kind: 'plastic', cover: 0.6 } });
    expect([plastic.evaporationShare[SOWN - 1], plastic.evaporationShare[SOWN], plastic.evaporationShare[END]]).toEqual([1, 0.4, 1]);
    expect(drawn({ mulch: { kind: 'organic', cover: 0.5 } }).evaporationShare[SOWN]).toBe(0.75);
    expect([plastic.openShare[SOWN - 1], plastic.openShare[SOWN]]).toEqual([1, 0.4]);
    expect(drawn({ mulch: { kind: 'organic', cover: 0.5 } }).openShare[SOWN]).toBe(1);
  });

  test('rows that a strip touched are put back for the next', () => {
    const touched = drawnStrip({
      plantings: [planting({ mulch: { kind: 'plastic', cover: 1 }, irrigation: { kind: 'fixed-depth', depth: 20 } })],
    });
    expect(touched.curve.fixedDepth[SOWN]).toBe(20);
    const clean = drawnStrip({ plantings: [planting()] }).curve;
    for (const row of ['fixedDepth', 'prescribed', 'evaporationShare', 'refillShare', 'saltStress', 'capillaryMost'] as const) {
      expect(new Set(clean[row]).size, row).toBe(1);
    }
  });

  test('paddy: bunds from puddling to drainage, drained on the day after', () => {
    const paddy = { floodFrom: -10, drainBefore: 14, pondTarget: 50, pondMinimum: 10, bund: 150, puddledDepth: 0.2 };
    const { curve } = drawnStrip({ plantings: [planting({ crop: { ...BEAN, paddy } })] });
    const ponded = days(curve.mark, MARK.ponded);
    expect([ponded[0], ponded[ponded.length - 1], ponded.length]).toEqual([SOWN - 10, END - 15, 96]);
    expect(days(curve.mark, MARK.drained)).toEqual([END - 14]);
    expect([curve.planting[SOWN - 10], curve.mark[SOWN - 10] & MARK.planted]).toEqual([0, 0]);
  });
});

describe('recorded deliveries', () => {
  const parcel = { deliveries: { days: [150, 160, 300], values: [40, 30, 20] } };

  test('replace the rule on every day, or up to the day that is no longer recorded', () => {
    const all = drawnStrip({ plantings: [planting()], parcel, settings: { water: 'recorded' } }).curve;
    expect(days(all.mark, MARK.recorded)).toHaveLength(365);
    expect(days(all.mark, MARK.mayIrrigate)).toEqual([]);
    expect([150, 151, 300].map((d) => all.prescribed[d])).toEqual([40, 0, 20]);
    const until = drawnStrip({ plantings: [planting()], parcel, settings: { water: 'recorded-then-rule', recordedUntil: 155 } }).curve;
    expect(days(until.mark, MARK.recorded)).toHaveLength(155);
    expect([150, 160].map((d) => until.prescribed[d])).toEqual([40, 0]);
    expect(days(until.mark, MARK.mayIrrigate)[0]).toBe(155);
  });

  test('the cropped strips take the depth of the whole parcel', () => {
    const { curve } = drawnStrip({ plantings: [planting({ areaShare: 0.5 })], parcel, settings: { water: 'recorded' } });
    expect([curve.prescribed[150], curve.prescribed[300]]).toEqual([80, 20]);
  });
});

describe('what the parcel has', () => {
  test('texture shifts p by a tenth', () => {
    const p = (texture: 'coarse' | 'medium' | 'fine' | undefined) =>
      drawnStrip({ plantings: [planting()], parcel: { soil: { ...LOAM, texture } } }).curve.tableFraction[SOWN];
    expect([p('coarse'), p('medium'), p('fine'), p(undefined)].map((value) => Number(value.toFixed(9)))).toEqual([
      0.495, 0.45, 0.405, 0.45,
    ]);
  });

  // FAO-56 Eq. 91: Ks = 1 − 19 (2 − 1) / (100 × 1.15)
  test('salt stress of a bean on 2 dS/m', () => {
    const crop = { ...BEAN, salinity: { threshold: 1, slope: 19 } };
    const options = { plantings: [planting({ crop })], parcel: { salinity: { soil: 2, water: 1 } } };
    expect(drawnStrip({ ...options, settings: { salinity: 'stress' } }).curve.saltStress[SOWN]).toBeCloseTo(1 - 19 / 115, 12);
    expect(drawnStrip(options).curve.saltStress[SOWN]).toBe(1);
  });

  test('TAW through the layers of the soil, to the roots and to the scheduling depth', () => {
    const layers = [
      { top: 0, bottom: 0.3, fieldCapacity: 0.3, wiltingPoint: 0.1 },
      { top: 0.3, bottom: 1, fieldCapacity: 0.2, wiltingPoint: 0.1 },
    ];
    const { curve, deepestRoot } = drawnStrip({ plantings: [planting()], parcel: { soil: { ...LOAM, layers } } });
    expect(deepestRoot).toBe(0.8);
    expect(curve.available[SOWN]).toBeCloseTo(200 * 0.2, 9);
    expect(curve.scheduleAvailable[SOWN]).toBeCloseTo(200 * 0.3 + 100 * 0.1, 9);
    expect(curve.available[SOWN + 60]).toBeCloseTo(60 + 100 * 0.5, 9);
    expect(curve.deepestAvailable).toBeCloseTo(110, 9);
  });

  test('observed Kcb: linear between images, bridged to the planting and the harvest', () => {
    const observedBasal = { days: [100, SOWN + 30, SOWN + 50, 320], values: [9, 0.6, 0.8, 9] };
    const plain = drawnStrip({ plantings: [planting()] }).curve.basal.slice();
    const { curve } = drawnStrip({ plantings: [planting()], parcel: { observedBasal } });
    expect(curve.basal[SOWN + 30]).toBeCloseTo(0.6, 12);
    expect(curve.basal[SOWN + 40]).toBeCloseTo(0.7, 12);
    expect(curve.basal[SOWN + 50]).toBeCloseTo(0.8, 12);
    expect(curve.basal[SOWN]).toBe(plain[SOWN]);
    expect(curve.basal[SOWN + 15]).toBeCloseTo(plain[SOWN + 15] + 0.5 * (0.6 - plain[SOWN + 30]), 12);
    expect(curve.basal[SOWN + 75]).toBeCloseTo(plain[SOWN + 75] + 0.5 * (0.8 - plain[SOWN + 50]), 12);
    expect(curve.basal[SOWN - 1]).toBe(0);
  });

  test('tall tables: the ratio of each day brings them to short reference ET, without the adjustment of Eq. 70', () => {
    const crop: Crop = { ...BEAN, surface: 'tall', basalMid: 0.95, basalEnd: 0.3 };
    const weather = (d: number) => ({ max: 28 + (d % 5), min: 14, wind: 1 + (d % 4), vapour: 1 + 0.02 * (d % 7) });
    const { curve, season } = drawnStrip({ plantings: [planting({ crop })], weather });
    for (const d of [SOWN, SOWN + 60, SOWN + 61, SOWN + 62]) {
      const ratio = tallToShortRatio(season.weather.windSpeed2m[d], season.weather.humidityMinimum[d]);
      expect(curve.basal[d]).toBeCloseTo((d === SOWN ? 0.15 : 0.95) * ratio, 12);
    }
  });
});

describe('single coefficient', () => {
  test('Kc of Table 12 adjusted by Eq. 62, Kc ini by Annex 7 from the rain of the stage', () => {
    const crop = { ...BEAN, single: { initial: 0.4, mid: 1.15, end: 0.35 } };
    const wet = (d: number) => ({
      max: 28,
      min: 14,
      wind: 2.2,
      vapour: 0.3 * 0.6108 * Math.exp((17.27 * 28) / 265.3),
      rain: d % 4 === 0 ? 8 : 0,
    });
    const settings = { coefficient: 'single', irrigate: false } as const;
    const { curve, season } = drawnStrip({ plantings: [planting({ crop })], weather: wet, settings });
    expect(curve.basal[SOWN + 60]).toBeCloseTo(1.187, 3); // FAO-56 Box 15
    expect(curve.basal[END - 1]).toBe(0.35);
    // 25 days, rain on 144, 148 … 164: 6 events of 8 mm; tw = 25 / 6.5; light form of Annex 7
    let eto = 0;
    for (let d = SOWN; d < SOWN + 25; d++) eto += season.weather.referenceEt[d] / 25;
    const [tw, rew] = [25 / 6.5, Math.min(7, Math.max(2.5, 6 / Math.sqrt(eto)))];
    const potential = 1.15 * eto;
    const t1 = rew / potential;
    const kc = (10 - (10 - rew) * Math.exp((-(tw - t1) * potential * (1 + rew / (10 - rew))) / 10)) / (tw * eto);
    expect(curve.basal[SOWN]).toBeCloseTo(kc, 9);
  });

  test('without a printed Kc: Table 18 turned round; plastic mulch takes 30 % at full cover', () => {
    const settings = { coefficient: 'single' } as const;
    const open = drawnStrip({ plantings: [planting()], settings, startDate: isoDate(19600), days: 200 });
    expect(open.plan.strips).toHaveLength(1);
    const bare = drawnStrip({ plantings: [planting()], settings }).curve.basal[SOWN + 60];
    const mulched = drawnStrip({ plantings: [planting({ mulch: { kind: 'plastic', cover: 1 } })], settings }).curve.basal[SOWN + 60];
    expect(mulched / bare).toBeCloseTo(0.7, 12);
  });

  test('rice has Kc ini of Table 14 by the climate of its initial stage', () => {
    const paddy = { floodFrom: -10, drainBefore: 14, pondTarget: 50, pondMinimum: 10, bund: 150, puddledDepth: 0.2 };
    const weather = () => ({ max: 34, min: 20, wind: 3, vapour: 1.2 }); // RHmin 22.6 %: arid; moderate wind
    const settings = { coefficient: 'single' } as const;
    expect(drawnStrip({ plantings: [planting({ crop: { ...BEAN, paddy } })], weather, settings }).curve.basal[SOWN]).toBe(1.15);
  });
});
