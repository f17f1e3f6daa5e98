/**
 * What must hold for any band: without error it is the run itself to the last bit, its quantiles stand in order, wider errors do not make it narrower, the
 * seed alone decides, and what parcels share does not level out while what is their own does.
 */
import { describe, expect, test } from 'vitest';
import type { Period } from '../../lib/base/civil-date.ts';
import { closeBandThreads, computeBandPart } from '../../lib/jobs/band-threads.ts';
import { DEFAULT_FIELD_ERRORS, type FieldErrors, NO_FIELD_ERRORS } from '../../lib/season/band-factors.ts';
import { BAND_VARIABLES, type EnsembleOutput, type EnsembleWanted, runEnsemble } from '../../lib/season/ensemble.ts';
import { runSeason } from '../../lib/season/kernel.ts';
import { DAILY_VARIABLE_COUNT, DAILY_VARIABLES, type SeasonInput } from '../../lib/season/types.ts';
import { randomSeason } from '../support/random-season.ts';

const DAYS = 210;
const SEEDS = [11, 23, 37, 41, 59, 67];

/** Weeks of a season, then the season. */
const PERIODS: Period[] = [
  ...Array.from({ length: 30 }, (_, week) => ({ start: '', end: '', from: 7 * week, to: 7 * week + 6 })),
  { start: '', end: '', from: 0, to: DAYS - 1 },
];
const SEASON = PERIODS.length - 1;

function constant(value: number): Float64Array {
  return new Float64Array(DAYS).fill(value);
}

function wantedOf(input: SeasonInput, weather: number, errors: FieldErrors, members = 40, seed = 1): EnsembleWanted {
  return {
    ...{ members, seed, errors, periods: PERIODS },
    weather: { deviation: constant(weather), persistence: constant(weather === 0 ? 0 : 0.5) },
    reachOf: input.parcels.map((_, index) => (index % 3) - 1),
    reachCount: 2,
  };
}

/** [quantile] of one variable, period and parcel. */
function quantilesOf({ parcels }: EnsembleOutput, count: number, variable: number, period: number, parcel: number): number[] {
  return [0, 1, 2].map((q) => parcels[((variable * 3 + q) * PERIODS.length + period) * count + parcel]);
}

/** Sums of stored hundredths by period, as a run's own tables have them, in single precision. */
function storedSums(daily: Uint16Array, parcel: number, variable: string): number[] {
  const index = DAILY_VARIABLES.findIndex(({ id }) => id === variable);
  const from = (parcel * DAILY_VARIABLE_COUNT + index) * DAYS;
  return PERIODS.map((period) => {
    let sum = 0;
    for (let day = period.from; day <= period.to; day++) sum += daily[from + day] / 100;
    return Math.fround(sum);
  });
}

describe('a band of zero error', () => {
  test.each(SEEDS)('is the plain run bit for bit, seed %i', (seed) => {
    const input = randomSeason({ seed, parcels: 12, days: DAYS });
    const output = runEnsemble(input, wantedOf(input, 0, NO_FIELD_ERRORS, 5));
    expect(output.demand.every((value) => value === 0)).toBe(true);
    expect(output.volumes.every((value) => value === 0)).toBe(true);
    const { daily } = runSeason(input);
    let water = 0;
    input.parcels.forEach((parcel, k) => {
      for (const [v, variable] of BAND_VARIABLES.entries()) {
        const plain = storedSums(daily, k, variable);
        PERIODS.forEach((_, period) => {
          expect(quantilesOf(output, 12, v, period, k), `${parcel.code} ${variable} ${period}`).toEqual([
            plain[period],
            plain[period],
            plain[period],
          ]);
        });
        water += plain[SEASON];
      }
    });
    expect(water).toBeGreaterThan(0);
  });
});

test('days before the season are walked and not kept, in a band as in a run', () => {
  const lead = 30;
  const input = { ...randomSeason({ seed: 23, parcels: 8, days: DAYS }), leadDays: lead };
  const kept = DAYS - lead;
  const periods = [{ start: '', end: '', from: 0, to: kept - 1 }];
  const { parcels } = runEnsemble(input, { ...wantedOf(input, 0, NO_FIELD_ERRORS, 3), periods });
  const { daily } = runSeason(input);
  const gross = DAILY_VARIABLES.findIndex(({ id }) => id === 'gross_requirement');
  input.parcels.forEach((_, k) => {
    let sum = 0;
    for (let day = 0; day < kept; day++) sum += daily[(k * DAILY_VARIABLE_COUNT + gross) * kept + day] / 100;
    expect([0, 1, 2].map((q) => parcels[q * 8 + k])).toEqual(new Array(3).fill(Math.fround(sum)));
  });
});

describe('a band', () => {
  test.each(SEEDS)('has P10 ≤ P50 ≤ P90 everywhere, and somewhere apart, seed %i', (seed) => {
    const input = randomSeason({ seed, parcels: 20, days: DAYS });
    const output = runEnsemble(input, wantedOf(input, 0.1, DEFAULT_FIELD_ERRORS));
    let apart = 0;
    for (let v = 0; v < BAND_VARIABLES.length; v++) {
      for (let period = 0; period < PERIODS.length; period++) {
        for (let k = 0; k < 20; k++) {
          const [low, middle, high] = quantilesOf(output, 20, v, period, k);
          expect(low).toBeLessThanOrEqual(middle);
          expect(middle).toBeLessThanOrEqual(high);
          if (low < high) apart++;
        }
      }
    }
    expect(apart).toBeGreaterThan(100);
  });

  test('is not made narrower by wider errors, on the mean over seeds', () => {
    const widths = [0.5, 1, 2].map((scale) => {
      const parts = ({ shared, own }: FieldErrors['coefficient']) => ({ shared: scale * shared, own: scale * own });
      const { coefficient, efficiency, available } = DEFAULT_FIELD_ERRORS;
      const errors = { coefficient: parts(coefficient), efficiency: parts(efficiency), available: parts(available) };
      let width = 0;
      for (const seed of SEEDS) {
        const input = randomSeason({ seed, parcels: 15, days: DAYS });
        const output = runEnsemble(input, wantedOf(input, 0.08 * scale, errors, 40, seed));
        for (let k = 0; k < 15; k++) {
          for (const period of [10, 15, SEASON]) {
            const [low, , high] = quantilesOf(output, 15, 0, period, k);
            width += high - low;
          }
        }
      }
      return width;
    });
    expect(widths[1]).toBeGreaterThan(1.2 * widths[0]);
    expect(widths[2]).toBeGreaterThan(1.2 * widths[1]);
  });

  test('stands on its seed: the same bytes on threads, in parts, again; other ones with another seed', async () => {
    const input = randomSeason({ seed: 5, parcels: 9, days: DAYS });
    const wanted = wantedOf(input, 0.1, DEFAULT_FIELD_ERRORS);
    const here = runEnsemble(input, wanted);
    const [one, two] = await Promise.all([computeBandPart({ input, wanted }), computeBandPart({ input, wanted })]);
    await closeBandThreads();
    for (const there of [one, two, runEnsemble(input, wanted)]) {
      for (const name of ['parcels', 'demand', 'volumes'] as const)
        expect(Buffer.from(there[name].buffer).equals(Buffer.from(here[name].buffer))).toBe(true);
    }
    const last = { ...input, parcels: input.parcels.slice(6) };
    const part = runEnsemble(last, { ...wanted, reachOf: [0, 0, 0] });
    for (let period = 0; period < PERIODS.length; period++)
      expect(quantilesOf(part, 3, 0, period, 1)).toEqual(quantilesOf(here, 9, 0, period, 7));
    expect(runEnsemble(input, { ...wanted, seed: 2 }).parcels).not.toEqual(here.parcels);
  });
});

describe('volumes of many parcels alike', () => {
  const COUNT = 25;
  const [pattern] = randomSeason({ seed: 37, parcels: 40, days: DAYS }).parcels.filter(
    (parcel) => parcel.plantings.length === 1 && parcel.plantings[0].areaShare === 1 && parcel.plantings[0].crop.type === 'orchard',
  );
  const base = randomSeason({ seed: 37, parcels: 1, days: DAYS });
  const input = { ...base, parcels: Array.from({ length: COUNT }, (_, k) => ({ ...pattern, code: `A${k}`, area: 10_000 })) };

  /** Widths P90 − P10 of the season's volume [m³]: of all parcels together, and summed over the parcels. */
  function widths(weather: number, errors: FieldErrors): { together: number; summed: number } {
    const members = 100;
    const output = runEnsemble(input, { ...wantedOf(input, weather, errors, members) });
    const volumes = Array.from({ length: members }, (_, m) => output.volumes[m * PERIODS.length + SEASON]).sort((a, b) => a - b);
    let summed = 0;
    for (let k = 0; k < COUNT; k++) {
      const [low, , high] = quantilesOf(output, COUNT, 0, SEASON, k);
      summed += (high - low) * 10; // 1 mm on 1 ha is 10 m³
    }
    const at = (p: number) => {
      const place = (members - 1) * p;
      const below = Math.floor(place);
      return volumes[below] + (place - below) * (volumes[below + 1] - volumes[below]);
    };
    return { together: at(0.9) - at(0.1), summed };
  }

  test('are as wide as the sum of the parcels where every error is shared', () => {
    const shared = { ...NO_FIELD_ERRORS, coefficient: { shared: 0.1, own: 0 }, efficiency: { shared: 0.1, own: 0 } };
    const { together, summed } = widths(0.1, shared);
    expect(Math.abs(together / summed - 1)).toBeLessThan(1e-3);
  });

  /** Independent errors of n parcels alike add as their squares: the sum is 1/√25 as wide, by the variance of a sum. */
  test('are 1/√n as wide where every error is a parcel’s own', () => {
    const { together, summed } = widths(0, { ...NO_FIELD_ERRORS, efficiency: { shared: 0, own: 0.1 } });
    expect(together / summed).toBeGreaterThan(0.2 * 0.7);
    expect(together / summed).toBeLessThan(0.2 * 1.3);
  });

  test('lie between where both are there', () => {
    const { together, summed } = widths(0.05, DEFAULT_FIELD_ERRORS);
    expect(together / summed).toBeGreaterThan(0.4);
    expect(together / summed).toBeLessThan(0.98);
  });
});
