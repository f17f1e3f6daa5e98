/**
 * The regression by which gaps are completed, against published and hand-worked values.
 *
 * Anscombe (1973), "Graphs in statistical analysis", The American Statistician 27, 17–21: all four sets give y = 3.0 + 0.5 x and r² = 0.67.
 */
import { describe, expect, test } from 'vitest';
import { isAccepted, refusalOf, regression, spansAround } from '../../lib/weather/gaps-regression.ts';

const ANSCOMBE_X = [10, 8, 13, 9, 11, 14, 6, 4, 12, 7, 5];
const ANSCOMBE_Y1 = [8.04, 6.95, 7.58, 8.81, 8.33, 9.96, 7.24, 4.26, 10.84, 4.82, 5.68];
const ANSCOMBE_Y2 = [9.14, 8.14, 8.74, 8.77, 9.26, 8.1, 6.13, 3.1, 9.13, 7.26, 4.74];
const ALL: [number, number][] = [[0, 100]];

describe('regression of a site on a neighbour', () => {
  test.each([
    ['I', ANSCOMBE_Y1],
    ['II', ANSCOMBE_Y2],
  ])('Anscombe’s set %s', (_, y) => {
    const fit = regression(ANSCOMBE_X, y, ALL);
    expect(fit.n).toBe(11);
    expect(Math.abs(fit.slope - 0.5)).toBeLessThan(0.0005);
    expect(Math.abs(fit.intercept - 3)).toBeLessThan(0.005);
    expect(Math.abs(fit.r2 - 0.67)).toBeLessThan(0.005);
  });

  // By hand: x̄ 3, ȳ 4, Σ(x−x̄)² 10, Σ(x−x̄)(y−ȳ) 9, Σ(y−ȳ)² 10.
  test('five days by hand: b = 0.9, a = 1.3, r² = 0.81', () => {
    const fit = regression([1, 2, 3, 4, 5], [2, 3, 5, 4, 6], ALL);
    expect(fit.slope).toBeCloseTo(0.9, 12);
    expect(fit.intercept).toBeCloseTo(1.3, 12);
    expect(fit.r2).toBeCloseTo(0.81, 12);
  });

  test('days that one of the two lacks are left out, and so are days outside the spans', () => {
    const none = Number.NaN;
    const fit = regression(
      [1, none, 2, 3, 4, 5, 99],
      [2, 7, 3, 5, 4, 6, 1],
      [
        [-5, 3],
        [3, 6],
      ],
    );
    expect(fit).toMatchObject({ n: 5 });
    expect(fit.slope).toBeCloseTo(0.9, 12);
  });
});

describe('limits of FAO-56 Annex 4: r² ≥ 0.7 and 0.7 ≤ b ≤ 1.3', () => {
  const at = (r2: number, slope: number, n = 30) => ({ n, slope, intercept: 0, r2 });
  test.each([
    [0.7, 0.7, true],
    [0.7, 1.3, true],
    [0.6999, 1, false],
    [0.9, 0.6999, false],
    [0.9, 1.3001, false],
    [Number.NaN, 1, false],
  ])('r² %d, b %d: %s', (r2, slope, accepted) => {
    expect(isAccepted(at(r2, slope))).toBe(accepted);
    expect(refusalOf(at(r2, slope)) === null).toBe(accepted);
  });
  test('29 common days are too few', () => {
    expect(isAccepted(at(0.95, 1, 29))).toBe(false);
    expect(refusalOf(at(0.95, 1, 29))).toBe('29 common days, at least 30 are needed');
  });
});

describe('days looked at', () => {
  test('60 days on either side of the gap, else the same days of every year', () => {
    const { own, everyYear } = spansAround(465, 470, 1461);
    expect(own).toEqual([[405, 530]]);
    expect(everyYear).toEqual([
      [40, 165],
      [405, 530],
      [770, 895],
      [1136, 1261],
    ]);
  });
});
