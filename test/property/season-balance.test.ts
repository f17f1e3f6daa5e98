/**
 * What must hold for any season: the water balance closes, stores stay within their limits, and the kernel agrees with a plain scalar
 * season written independently from the published equations (test/support/scalar-season.ts).
 */
import { describe, expect, test } from 'vitest';
import { mulberry32 } from '../../lib/base/random.ts';
import { runSeason, walkParcel } from '../../lib/season/kernel.ts';
import { packSeason } from '../../lib/season/pack.ts';
import { DAILY_VARIABLE_COUNT, DAILY_VARIABLES, type ParcelInput, type SeasonInput } from '../../lib/season/types.ts';
import { randomSeason } from '../support/random-season.ts';
import { scalarSeason } from '../support/scalar-season.ts';

const SEEDS = [11, 23, 37, 41, 59, 67, 73, 89, 97, 101, 113, 127];

function row(exact: Float64Array, days: number, parcel: number, variable: string): Float64Array {
  const v = DAILY_VARIABLES.findIndex(({ id }) => id === variable);
  return exact.subarray((parcel * DAILY_VARIABLE_COUNT + v) * days, (parcel * DAILY_VARIABLE_COUNT + v + 1) * days);
}

function exactOf(input: SeasonInput): Float64Array {
  return runSeason(input, { keep: 'double' }).dailyExact as Float64Array;
}

function largestDifference(a: ArrayLike<number>, b: ArrayLike<number>): number {
  expect(a.length).toBe(b.length);
  let worst = 0;
  for (let i = 0; i < a.length; i++) {
    const difference = Math.abs(a[i] - b[i]);
    worst = Math.max(worst, difference);
  }
  return worst;
}

describe('water balance', () => {
  test.each(SEEDS)('closes within 1e-6 mm on every strip and day, seed %i', (seed) => {
    const output = runSeason(randomSeason({ seed, parcels: 60, days: 400 }));
    expect(output.maxBalanceResidual).toBeLessThan(1e-6);
    expect(output.maxBalanceResidual).toBeGreaterThan(0);
  });

  test('the season of a single-strip parcel closes from its own rows: P + I − RO − ET − DP = change in storage', () => {
    // An orchard on a soil without depth to spare: the root zone is the whole store, so its depletion alone must account for every flux.
    const base = randomSeason({ seed: 5, parcels: 200, days: 366 });
    const orchards = base.parcels.filter(
      (parcel) => parcel.plantings.length === 1 && parcel.plantings[0].areaShare === 1 && parcel.plantings[0].crop.type === 'orchard',
    );
    expect(orchards.length).toBeGreaterThan(3);
    const exact = exactOf({ ...base, parcels: orchards });
    for (const [k, parcel] of orchards.entries()) {
      const get = (variable: string) => row(exact, 366, k, variable);
      const total = (variable: string) => get(variable).reduce((a, b) => a + b, 0);
      const opening = base.settings.initialDepletion * get('total_available_water')[0];
      const closing = get('root_zone_depletion')[365];
      const inflow = total('precipitation') + total('net_requirement') - total('surface_runoff');
      expect(Math.abs(inflow - total('adjusted_crop_et') - total('deep_percolation') - (opening - closing)), parcel.code).toBeLessThan(
        1e-6,
      );
    }
  });

  test.each(SEEDS)('every day of every parcel closes from the rows that are stored, seed %i', (seed) => {
    const input = randomSeason({ seed, parcels: 60, days: 300 });
    const exact = exactOf(input);
    let worst = 0;
    for (let p = 0; p < input.parcels.length; p++) {
      const get = (variable: string) => row(exact, 300, p, variable);
      for (let d = 1; d < 300; d++) {
        const drawn = get('adjusted_crop_et')[d] - get('effective_precipitation')[d] - get('net_requirement')[d];
        worst = Math.max(worst, Math.abs(get('soil_water_depletion')[d] - get('soil_water_depletion')[d - 1] - drawn));
      }
    }
    expect(worst).toBeLessThan(1e-6);
  });

  test.each(SEEDS)('stores and coefficients stay within their limits, seed %i', (seed) => {
    const input = randomSeason({ seed, parcels: 60, days: 400 });
    const exact = exactOf(input);
    for (const [p, parcel] of input.parcels.entries()) {
      const get = (variable: string) => row(exact, 400, p, variable);
      for (let d = 0; d < 400; d++) {
        const depletion = get('root_zone_depletion')[d];
        if (!(depletion >= 0 && depletion <= get('total_available_water')[d] + 1e-9))
          expect.fail(`Dr ${depletion} of ${parcel.code} on day ${d}`);
        const stress = get('stress_coefficient')[d];
        if (!(stress >= 0 && stress <= 1 + 1e-12)) expect.fail(`Ks ${stress} of ${parcel.code} on day ${d}`);
        if (get('adjusted_crop_et')[d] > get('crop_et')[d] + 1e-9) expect.fail(`stressed ET above unstressed, ${parcel.code} day ${d}`);
        if (get('effective_precipitation')[d] > get('precipitation')[d] + 1e-9)
          expect.fail(`effective rain above rain, ${parcel.code} day ${d}`);
      }
    }
  });
});

describe('agreement with the scalar season', () => {
  test.each(SEEDS)('every daily variable within 1e-9, seed %i', (seed) => {
    const input = randomSeason({ seed, parcels: 25, days: 250 });
    const exact = exactOf(input);
    for (const [p, parcel] of input.parcels.entries()) {
      const days = scalarSeason(input, parcel);
      for (const { id } of DAILY_VARIABLES) {
        const expected = days.map((day) => day[id]);
        expect(largestDifference(row(exact, 250, p, id), expected), `${id} of ${parcel.code}`).toBeLessThan(1e-9);
      }
    }
  });

  test('holds with gaps at the sites too', () => {
    const input = withGaps(randomSeason({ seed: 7, parcels: 25, days: 250 }), 0.1);
    const exact = exactOf(input);
    for (const [p, parcel] of input.parcels.entries()) {
      const expected = scalarSeason(input, parcel).map((day) => day.net_requirement);
      expect(largestDifference(row(exact, 250, p, 'net_requirement'), expected), parcel.code).toBeLessThan(1e-9);
    }
  });
});

/** Takes out temperatures at random, never all sites of a day. */
function withGaps(input: SeasonInput, share: number): SeasonInput {
  const random = mulberry32(99);
  const { weather, dayCount } = input;
  for (let site = 1; site < weather.siteCount; site++) {
    for (let d = 0; d < dayCount; d++) {
      if (random() >= share) continue;
      weather.airTemperatureMax[site * dayCount + d] = Number.NaN;
      weather.actualVapourPressure[site * dayCount + d] = Number.NaN;
    }
  }
  const parcels = input.parcels.map((parcel) => ({ ...parcel, weights: [{ site: 0, weight: 0.1 }, ...parcel.weights.slice(1)] }));
  return { ...input, parcels };
}

describe('invariance', () => {
  test('permuting the parcels permutes the output, to the last bit', () => {
    const input = randomSeason({ seed: 17, parcels: 40, days: 200 });
    const turned = { ...input, parcels: [...input.parcels].reverse() };
    const [a, b] = [runSeason(input), runSeason(turned)];
    const size = DAILY_VARIABLE_COUNT * 200;
    for (let p = 0; p < 40; p++) {
      const q = 39 - p;
      expect(a.daily.subarray(p * size, (p + 1) * size)).toEqual(b.daily.subarray(q * size, (q + 1) * size));
      expect(a.flags.subarray(p * 200, (p + 1) * 200)).toEqual(b.flags.subarray(q * 200, (q + 1) * 200));
    }
  });

  test('a run of some parcels gives what the run of all gave', () => {
    const input = randomSeason({ seed: 19, parcels: 30, days: 200 });
    const all = runSeason(input).daily;
    const size = DAILY_VARIABLE_COUNT * 200;
    expect(runSeason({ ...input, parcels: input.parcels.slice(10, 15) }).daily).toEqual(all.subarray(10 * size, 15 * size));
  });

  test('planting two halves with the same crop is planting the whole', () => {
    const input = randomSeason({ seed: 29, parcels: 60, days: 250 });
    const halved: ParcelInput[] = input.parcels.map((parcel) => ({
      ...parcel,
      plantings: parcel.plantings.flatMap((planting) => {
        const half = { ...planting, areaShare: planting.areaShare / 2 };
        return [half, { ...half }];
      }),
    }));
    const difference = largestDifference(exactOf(input), exactOf({ ...input, parcels: halved }));
    expect(difference).toBeLessThan(1e-9);
  });

  test('a day that a site misses is as if the parcel had never known the site', () => {
    const input = randomSeason({ seed: 31, parcels: 20, days: 120, sites: 3 });
    const even = input.parcels.map((parcel) => ({ ...parcel, weights: [0, 1, 2].map((site) => ({ site, weight: 1 / 3 })) }));
    const without = input.parcels.map((parcel) => ({ ...parcel, weights: [0, 1].map((site) => ({ site, weight: 1 / 2 })) }));
    input.weather.airTemperatureMin.fill(Number.NaN, 2 * 120);
    const [a, b] = [exactOf({ ...input, parcels: even }), exactOf({ ...input, parcels: without })];
    expect(a.every(Number.isFinite)).toBe(true);
    expect(largestDifference(a, b)).toBeLessThan(1e-9);
  });

  test('rain-fed: no irrigation anywhere; irrigated at a low trigger: no stress where the system keeps up', () => {
    const base = randomSeason({ seed: 43, parcels: 40, days: 250 });
    const rainFed = exactOf({ ...base, settings: { ...base.settings, irrigate: false } });
    for (let p = 0; p < 40; p++) expect(Math.max(...row(rainFed, 250, p, 'gross_requirement'))).toBe(0);
    const willing = { ...base.parcels[0].method, triggerFraction: 0.2, maximumDailyDepth: 500 };
    const parcels = base.parcels
      .filter(({ plantings }) => plantings.length === 1)
      .map((parcel) => ({
        ...parcel,
        soil: { ...parcel.soil, rootLimit: Number.NaN },
        method: willing,
        plantings: parcel.plantings.map((planting) => ({ ...planting, crop: { ...planting.crop, lastIrrigation: 1, rootDepthMin: 0.4 } })),
      }));
    const settings = { ...base.settings, irrigate: true, initialDepletion: 0 };
    const wet = exactOf({ ...base, settings, parcels });
    for (let p = 0; p < parcels.length; p++) expect(Math.min(...row(wet, 250, p, 'stress_coefficient')), parcels[p].code).toBe(1);
  });

  test('the state of one parcel does not reach the next', () => {
    const input = randomSeason({ seed: 47, parcels: 2, days: 150 });
    const season = packSeason(input);
    walkParcel(season, input.parcels[1], null);
    const fresh = season.daily.slice();
    walkParcel(season, input.parcels[0], null);
    walkParcel(season, input.parcels[1], null);
    expect(season.daily).toEqual(fresh);
  });
});
