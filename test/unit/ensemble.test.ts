/** What an ensemble adds up to, on a parcel that is walked by hand: sums by period, quantiles, differences of reaches and district. */
import { describe, expect, it } from 'vitest';
import { memberInflows } from '../../lib/canal/member-inflow.ts';
import { buildTree } from '../../lib/canal/tree.ts';
import { type FieldErrors, NO_FIELD_ERRORS } from '../../lib/season/band-factors.ts';
import { type EnsembleWanted, type MemberWalker, runEnsemble } from '../../lib/season/ensemble.ts';
import type { SeasonInput } from '../../lib/season/types.ts';
import { near } from '../support/near.ts';
import { randomSeason } from '../support/random-season.ts';

/** Takes 10 mm a day, divided by what the efficiency came to. */
const TEN_A_DAY: MemberWalker = () => (factors, rows) => {
  rows.grossRequirement?.fill(10 / factors.efficiency);
  rows.netRequirement?.fill(10);
};

const DAYS = 14;
const WEEKS = [
  { start: '2024-01-01', end: '2024-01-07', from: 0, to: 6 },
  { start: '2024-01-08', end: '2024-01-14', from: 7, to: 13 },
];

function season(parcels: number): SeasonInput {
  const made = randomSeason({ seed: 3, parcels, days: DAYS });
  return { ...made, parcels: made.parcels.map((parcel) => ({ ...parcel, area: 20_000 })) };
}

function wanted(errors: FieldErrors, members: number, reachOf: number[]): EnsembleWanted {
  const none = new Float64Array(DAYS);
  const weather = { deviation: none, persistence: none };
  return { members, seed: 1, weather, errors, periods: WEEKS, reachOf, reachCount: 1 };
}

describe('ensemble', () => {
  it('without error is the plain run in every quantile, and differs from it nowhere', () => {
    const { parcels, demand, volumes } = runEnsemble(season(2), wanted(NO_FIELD_ERRORS, 7, [0, -1]), TEN_A_DAY);
    const gross = parcels.subarray(0, 3 * 2 * 2);
    expect([...gross]).toEqual(new Array(12).fill(70));
    expect(demand.every((value) => value === 0)).toBe(true);
    expect(volumes.every((value) => value === 0)).toBe(true);
    expect(demand).toHaveLength(7 * DAYS);
    expect(volumes).toHaveLength(3 * 7 * 2);
  });

  /** gross = 70 / factor, of mean 70: quantiles of the lognormal distribution with cv 0.1, σ = √ln 1.01 = 0.099752, decile 1.28155. */
  it('has the quantiles of the distribution it draws from', () => {
    const errors = { ...NO_FIELD_ERRORS, efficiency: { shared: 0.1, own: 0 } };
    const { parcels, demand, volumes } = runEnsemble(season(1), wanted(errors, 500, [0]), TEN_A_DAY);
    const median = Math.exp(-0.5 * 0.099752 ** 2);
    near(parcels[0], 70 * median * Math.exp(-1.28155 * 0.099752), 0.1);
    near(parcels[2], 70 * median, 0.1);
    near(parcels[4], 70 * median * Math.exp(1.28155 * 0.099752), 0.1);
    const [first] = volumes; // member 0, week 0, over 2 ha
    near(first, 7 * demand[0], 0.001 * Math.abs(first));
    const daily = Array.from({ length: 500 }, (_, m) => 10 + (demand[m * DAYS] * 1000) / 20_000).sort((a, b) => a - b);
    near(daily[450], 10 * median * Math.exp(1.28155 * 0.099752), 0.05);
  });

  it('gives a parcel the same numbers whichever others are asked for', () => {
    const errors = { ...NO_FIELD_ERRORS, efficiency: { shared: 0.1, own: 0.1 } };
    const whole = season(3);
    const all = runEnsemble(whole, wanted(errors, 40, [0, 0, 0]), TEN_A_DAY).parcels;
    whole.parcels.forEach((parcel, k) => {
      const alone = runEnsemble({ ...whole, parcels: [parcel] }, wanted(errors, 40, [0]), TEN_A_DAY).parcels;
      expect([...alone]).toEqual([...all].filter((_, i) => i % 3 === k));
    });
  });
});

describe('inflow of members', () => {
  const tree = buildTree([
    { code: 'M', parentCode: null },
    { code: 'L', parentCode: 'M' },
  ]);
  const reaches = [
    { length: 1000, lossRule: { kind: 'efficiency', efficiency: 0.8 } as const },
    { length: 1000, lossRule: { kind: 'seepage', rate: 100, wettedPerimeter: 1 } as const },
  ];
  const plain = Float64Array.from([0, 40, 0, 100]); // [reach × day]
  const periods = [{ start: '2024-01-01', end: '2024-01-02', from: 0, to: 1 }];

  /**
   * By hand. L seeps 0.1 m/d · 1 m · 1000 m = 100 m³ a day while it runs. Member 0: L takes 200 on day 1, M (200 + 40)/0.8 = 300. Member 1 asks for 60
   * more on both days: L 160 and 260, M 160/0.8 = 200 and (260 + 40)/0.8 = 375. Member 2 asks for 300 less than nothing: L is dry, M 40/0.8 = 50.
   */
  it('carries each member’s own demand and losses up the tree', () => {
    const difference = Float64Array.from([0, 0, 0, 0, 0, 0, 60, 60, 0, 0, -300, -300]);
    const inflows = memberInflows({ tree, reaches, plain, difference, periods });
    const expected = [300, 575, 50, 200, 420, 0];
    inflows.forEach((inflow, i) => {
      near(inflow, expected[i], 1e-9);
    });
  });

  it('refuses differences that do not fit', () => {
    expect(() => memberInflows({ tree, reaches, plain, difference: new Float64Array(5), periods })).toThrow(/not a multiple of the 4/);
  });
});
