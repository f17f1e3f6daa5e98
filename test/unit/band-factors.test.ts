/** The errors behind a band: lognormal factors with the stated spread, shared by what shares them, and no factor but 1 where there is no error. */
import { describe, expect, it } from 'vitest';
import { quantileOf } from '../../lib/base/stratified.ts';
import { factorSource, NO_FIELD_ERRORS, weatherFactors } from '../../lib/season/band-factors.ts';
import { near } from '../support/near.ts';

const MEMBERS = 500;

function constant(value: number, days: number): Float64Array {
  return new Float64Array(days).fill(value);
}

function correlation(a: ArrayLike<number>, b: ArrayLike<number>): number {
  const mean = (values: ArrayLike<number>) => Array.from(values).reduce((sum, value) => sum + value, 0) / values.length;
  const [ma, mb] = [mean(a), mean(b)];
  let [ab, aa, bb] = [0, 0, 0];
  for (let i = 0; i < a.length; i++) {
    ab += (a[i] - ma) * (b[i] - mb);
    aa += (a[i] - ma) ** 2;
    bb += (b[i] - mb) ** 2;
  }
  return ab / Math.sqrt(aa * bb);
}

describe('weather factors', () => {
  it('are 1, to the bit, where there is no error', () => {
    const factors = weatherFactors(3, 20, { deviation: constant(0, 30), persistence: constant(0.5, 30) });
    expect(factors.every((factor) => factor === 1)).toBe(true);
  });

  /** Deciles of the standard normal distribution ±1.28155 (Abramowitz & Stegun 1972, Table 26.5); σ of a lognormal with cv 0.2: √ln 1.04 = 0.19804. */
  it('have mean 1 and the quantiles of the lognormal distribution on every day', () => {
    const factors = weatherFactors(3, MEMBERS, { deviation: constant(0.2, 3), persistence: constant(0, 3) });
    for (let day = 0; day < 3; day++) {
      const values = Float64Array.from({ length: MEMBERS }, (_, m) => factors[m * 3 + day]).sort();
      const median = Math.exp(-0.5 * 0.19804 ** 2);
      near(values.reduce((sum, value) => sum + value, 0) / MEMBERS, 1, 0.002);
      near(quantileOf(values, 0.5), median, 0.003);
      near(quantileOf(values, 0.1), median * Math.exp(-1.28155 * 0.19804), 0.004);
      near(quantileOf(values, 0.9), median * Math.exp(1.28155 * 0.19804), 0.006);
    }
  });

  /** Variance of the mean of n terms of a first-order autoregressive series: σ²/n · [(1 + ρ)/(1 − ρ) − 2ρ(1 − ρⁿ)/(n (1 − ρ)²)] (Box & Jenkins 1970). */
  it.each([0, 0.5, 0.9])('keep the memory of the day before, %d', (rho) => {
    const days = 60;
    const factors = weatherFactors(5, MEMBERS, { deviation: constant(0.1, days), persistence: constant(rho, days) });
    const shift = 0.5 * Math.log(1.01); // the logarithm of a factor of mean 1 lies so far below 0
    const means = Float64Array.from({ length: MEMBERS }, (_, m) => {
      let sum = 0;
      for (let day = 0; day < days; day++) sum += Math.log(factors[m * days + day]) + shift;
      return sum / days;
    });
    const variance = means.reduce((sum, mean) => sum + mean * mean, 0) / MEMBERS;
    const sigma2 = Math.log(1.01);
    const expected = (sigma2 / days) * ((1 + rho) / (1 - rho) - (2 * rho * (1 - rho ** days)) / (days * (1 - rho) ** 2));
    near(variance / expected, 1, 0.2); // three standard errors of a variance of 500 values
    const [first, second] = [10, 11].map((day) => Array.from({ length: MEMBERS }, (_, m) => Math.log(factors[m * days + day])));
    near(correlation(first, second), rho, 0.14);
  });
});

describe('factors of parcels', () => {
  const errors = { coefficient: { shared: 0.1, own: 0 }, efficiency: { shared: 0.1, own: 0.1 }, available: { shared: 0, own: 0.2 } };
  const of = (seed: number, code: string, method: string, soil: string) => {
    const made = factorSource(seed, MEMBERS, errors).of({ code, method, soil });
    return {
      efficiency: made.efficiency.slice(),
      available: made.available.slice(),
      maize: made.basal('maize'),
      wheat: made.basal('wheat'),
    };
  };

  it('are 1, to the bit, where there is no error', () => {
    const { efficiency, available, basal } = factorSource(1, 50, NO_FIELD_ERRORS).of({ code: 'P', method: 'furrow', soil: 'loam' });
    for (const factors of [efficiency, available, basal('maize')]) expect(factors.every((factor) => factor === 1)).toBe(true);
  });

  it('are shared within a crop, and by nothing else', () => {
    const [a, b] = [of(1, 'A', 'furrow', 'loam'), of(1, 'B', 'drip', 'clay')];
    expect(a.maize).toEqual(b.maize);
    near(correlation(a.maize, a.wheat), 0, 0.14);
    near(correlation(a.maize, a.available), 0, 0.14);
  });

  it('of one method keep an own part per parcel: half of the variance in common is a correlation of one half', () => {
    const [a, b, c] = [of(1, 'A', 'furrow', 'loam'), of(1, 'B', 'furrow', 'loam'), of(1, 'B', 'drip', 'loam')];
    near(correlation(a.efficiency, b.efficiency), 0.5, 0.12);
    near(correlation(a.efficiency, c.efficiency), 0, 0.14);
    near(correlation(a.available, b.available), 0, 0.14);
  });

  it('stand on seed and parcel alone', () => {
    expect(of(1, 'A', 'furrow', 'loam')).toEqual(of(1, 'A', 'furrow', 'loam'));
    expect(of(1, 'A', 'furrow', 'loam').efficiency).not.toEqual(of(2, 'A', 'furrow', 'loam').efficiency);
    const source = factorSource(1, MEMBERS, errors);
    source.of({ code: 'B', method: 'furrow', soil: 'loam' });
    expect(source.of({ code: 'A', method: 'furrow', soil: 'loam' }).efficiency).toEqual(of(1, 'A', 'furrow', 'loam').efficiency);
  });
});
