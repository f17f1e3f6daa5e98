/** Seasons with calendars that follow the weather and plantings of every practice: the balance closes, stages stay in order, and parcels do not reach one another. */
import { describe, expect, test } from 'vitest';
import { mulberry32, type Random } from '../../lib/base/random.ts';
import { plantingStages } from '../../lib/season/calendar.ts';
import { runSeason } from '../../lib/season/kernel.ts';
import type { Crop, CropCalendar, ParcelInput, Planting, SeasonInput } from '../../lib/season/types.ts';
import { explainDay } from '../../lib/season/working.ts';
import { randomSeason } from '../support/random-season.ts';

const DAYS = 220;
const SEEDS = [3, 19, 31, 47, 61, 83];

function pick<T>(random: Random, of: readonly T[]): T {
  return of[Math.floor(random() * of.length)];
}

function calendarByWeather(random: Random, calendar: CropCalendar): CropCalendar {
  const sums = () => ({ base: 4, ceiling: 32, initial: 150, development: 300 * random(), mid: 400 * random(), late: 300 * random() });
  return {
    ...calendar,
    ...(random() < 0.6 ? { thermal: sums() } : {}),
    ...(random() < 0.4 ? { laterThermal: sums() } : {}),
    ...(random() < 0.5
      ? {
          start: pick(random, [
            { kind: 'air-temperature', threshold: 12, days: 10, latest: 60 },
            { kind: 'soil-temperature', threshold: 12, days: 3, latest: 60, offset: 3 },
            { kind: 'rain', depth: 15, days: 5, latest: 40 },
            { kind: 'frost-free', threshold: 0, latest: 90, offset: -7 },
            { kind: 'growing-degree-days', base: 5, sum: 120, latest: 50 },
          ] as const),
        }
      : {}),
    ...(random() < 0.4 ? { killingFrost: { threshold: -2, notBefore: 40, after: pick(random, [0, 7]) } } : {}),
    ...(random() < 0.4 ? { cycles: [{ basalInitial: 0.3, basalMid: 1, basalEnd: 0.6 }] } : {}),
  };
}

function cropWithParts(random: Random, crop: Crop): Crop {
  return {
    ...crop,
    surface: random() < 0.2 ? 'tall' : 'short',
    ...(random() < 0.3 ? { dormantBasal: 0.2 } : {}),
    ...(crop.type === 'orchard' ? { canopy: { cover: 0.5, height: 3 } } : {}),
    ...(random() < 0.5 ? { salinity: { threshold: 1.5, slope: 10 } } : {}),
  };
}

function practised(random: Random, planting: Planting): Planting {
  const share = () => ({ trigger: 0.5 + random(), refill: 0.4 + 0.6 * random() });
  return {
    ...planting,
    crop: cropWithParts(random, planting.crop),
    calendar: calendarByWeather(random, planting.calendar),
    irrigation: pick(random, [
      undefined,
      { kind: 'depletion', trigger: 0.7, refill: 0.8 },
      { kind: 'interval', days: 6 },
      { kind: 'fixed-depth', depth: 20 },
      { kind: 'daily' },
      { kind: 'deficit', stages: { initial: share(), development: share(), mid: share(), late: share() } },
      { kind: 'none' },
    ] as const),
    mulch: pick(random, [undefined, { kind: 'plastic', cover: 0.6 }, { kind: 'organic', cover: 0.8 }] as const),
    preIrrigation: pick(random, [undefined, { daysBefore: 5 }, { daysBefore: 9, depth: 40 }]),
    germination: pick(random, [undefined, [{ daysAfter: 1, depth: 12 }]]),
  };
}

function season(seed: number): SeasonInput {
  const plain = randomSeason({ seed, parcels: 24, days: DAYS });
  const random = mulberry32(seed + 1000);
  const parcels: ParcelInput[] = plain.parcels.map((parcel) => ({
    ...parcel,
    soil: { ...parcel.soil, texture: pick(random, ['coarse', 'medium', 'fine', undefined] as const) },
    // one planting each: the weather moves starts and ends, so that two that fit by their dates may not fit by the weather
    plantings: parcel.plantings.slice(0, 1).map((planting) => practised(random, planting)),
    ...(random() < 0.3 ? { observedBasal: { days: [40, 90, 130], values: [0.3, 0.9, 0.7] } } : {}),
    ...(random() < 0.5 ? { salinity: { soil: 4 * random(), water: 1 } } : {}),
  }));
  const settings = {
    ...plain.settings,
    coefficient: pick(random, ['dual', 'dual', 'single'] as const),
    fallow: pick(random, ['bare', 'weeds'] as const),
    salinity: pick(random, ['off', 'stress'] as const),
  };
  return { ...plain, settings, parcels };
}

describe.each(SEEDS)('seed %i', (seed) => {
  const input = season(seed);
  const whole = runSeason(input, { keep: 'double' });

  test('the balance closes and nothing is missing', () => {
    expect(whole.maxBalanceResidual).toBeLessThan(1e-6);
    expect(whole.dailyExact?.every(Number.isFinite)).toBe(true);
  });

  test('stages follow one another and end where the calendar says', () => {
    for (const [p, parcel] of input.parcels.entries()) {
      for (const spans of plantingStages(input, p)) {
        for (let k = 1; k < spans.length; k++) expect(spans[k].start > spans[k - 1].end, `${parcel.code}, ${spans[k].stage}`).toBe(true);
        for (const { start, end } of spans) expect(start <= end).toBe(true);
      }
    }
    for (let at = 0; at < whole.stageDays.length; at += 5) {
      for (let k = 1; k < 5; k++) expect(whole.stageDays[at + k]).toBeGreaterThanOrEqual(whole.stageDays[at + k - 1]);
    }
  });

  test('a parcel alone is the parcel among others, to the last bit', () => {
    for (const p of [0, 7, 15, 23]) {
      const alone = runSeason({ ...input, parcels: [input.parcels[p]] });
      const size = alone.daily.length;
      expect([...alone.daily]).toEqual([...whole.daily.subarray(p * size, (p + 1) * size)]);
    }
  });

  test('the working of a day is the run’s own', () => {
    const random = mulberry32(seed);
    for (let k = 0; k < 6; k++) {
      const [p, day] = [Math.floor(random() * input.parcels.length), Math.floor(random() * DAYS)];
      const working = explainDay(input, p, day);
      const rows = whole.dailyExact ?? new Float64Array(0);
      for (const [v, value] of Object.values(working.results).entries()) {
        expect(value).toBe(rows[p * 20 * DAYS + v * DAYS + day]);
      }
      for (const step of working.steps) {
        expect(Number.isFinite(step.result), `${step.symbol} of ${input.parcels[p].code}, day ${day}`).toBe(true);
        for (const given of step.inputs) expect(Number.isFinite(given.value), `${given.symbol} in ${step.symbol}`).toBe(true);
      }
    }
  });
});
