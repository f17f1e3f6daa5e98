/** Stratified chance: the normal quantile against an independent program, strata each drawn from once, quantiles by their definition. */
import { describe, expect, it } from 'vitest';
import { normalQuantile, quantileOf, seededStream, stratifiedNormal } from '../../lib/base/stratified.ts';

/** Roots of log Φ(z) = log p at 40 digits, by mpmath 1.3. */
const QUANTILES: readonly (readonly [number, number])[] = [
  [1e-300, -37.0470962993612],
  [1e-20, -9.262340089798407],
  [1e-9, -5.9978070150076865],
  [0.001, -3.0902323061678136],
  [0.01, -2.326347874040841],
  [0.025, -1.9599639845400543],
  [0.074, -1.4466320671589785],
  [0.1, -1.2815515655446004],
  [0.25, -0.6744897501960817],
  [0.4, -0.2533471031357998],
  [0.6, 0.2533471031357998],
  [0.9, 1.2815515655446004],
  [0.975, 1.9599639845400543],
  [0.999, 3.0902323061678136],
];

describe('normal quantile', () => {
  it.each(QUANTILES)('of %d is %d', (p, z) => {
    expect(Math.abs(normalQuantile(p) / z - 1)).toBeLessThan(1e-14);
  });

  it('is 0 at the middle and missing outside 0–1', () => {
    expect(normalQuantile(0.5)).toBe(0);
    for (const p of [0, 1, -0.1, 1.1, Number.NaN]) expect(normalQuantile(p)).toBeNaN();
  });
});

describe('stratified sample', () => {
  const sample = (seed: number, count: number) => {
    const into = new Float64Array(count);
    stratifiedNormal(seededStream(seed, 'a margin'), into);
    return into;
  };

  /** Edges of ten strata of equal probability: deciles of the standard normal distribution, from printed tables (Abramowitz & Stegun 1972, Table 26.5). */
  const DECILES = [-1.28155, -0.84162, -0.5244, -0.25335, 0, 0.25335, 0.5244, 0.84162, 1.28155];

  it('takes one value of each stratum', () => {
    for (let seed = 0; seed < 50; seed++) {
      const strata = [...sample(seed, 10)].map((z) => DECILES.filter((edge) => z > edge).length);
      expect(strata.sort((a, b) => a - b)).toEqual([0, 1, 2, 3, 4, 5, 6, 7, 8, 9]);
    }
  });

  it('has mean 0 and standard deviation 1 far closer than chance without strata', () => {
    for (let seed = 0; seed < 20; seed++) {
      const z = sample(seed, 500);
      const mean = z.reduce((sum, value) => sum + value, 0) / z.length;
      const variance = z.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (z.length - 1);
      expect(Math.abs(mean)).toBeLessThan(0.005); // without strata the standard error is 0.045
      expect(Math.abs(Math.sqrt(variance) - 1)).toBeLessThan(0.02);
    }
  });

  it('stands on its seed and name alone', () => {
    expect(sample(7, 100)).toEqual(sample(7, 100));
    expect(sample(7, 100)).not.toEqual(sample(8, 100));
    const other = new Float64Array(100);
    stratifiedNormal(seededStream(7, 'another margin'), other);
    expect(other).not.toEqual(sample(7, 100));
  });

  it('leaves margins of different names uncorrelated', () => {
    const count = 400;
    const [a, b] = [new Float64Array(count), new Float64Array(count)];
    let worst = 0;
    for (let pair = 0; pair < 40; pair++) {
      stratifiedNormal(seededStream(1, `day ${pair}`), a);
      stratifiedNormal(seededStream(1, `day ${pair + 1}`), b);
      const correlation = a.reduce((sum, value, i) => sum + value * b[i], 0) / count;
      worst = Math.max(worst, Math.abs(correlation));
    }
    expect(worst).toBeLessThan(4 / Math.sqrt(count)); // four standard errors
  });
});

describe('quantile of values', () => {
  // By hand from definition 7 of Hyndman & Fan: place (n − 1) p.
  it.each([
    [[5], 0.1, 5],
    [[1, 2, 3, 4, 5], 0.5, 3],
    [[1, 2, 3, 4], 0.5, 2.5],
    [[0, 10], 0.1, 1],
    [[0, 10, 20, 30, 40, 50, 60, 70, 80, 90, 100], 0.9, 90],
    [[2, 2, 2], 0.9, 2],
  ])('of %j at %d is %d', (values, p, expected) => {
    expect(quantileOf(values, p)).toBeCloseTo(expected, 12);
  });

  it('is missing where there is nothing', () => {
    expect(quantileOf([], 0.5)).toBeNaN();
  });
});
