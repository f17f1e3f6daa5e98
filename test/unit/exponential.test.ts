import { describe, expect, it } from 'vitest';
import { exponential } from '../../lib/base/exponential.ts';

describe('exponential', () => {
  it('is e to the power within 5e-16 of itself, over its table and beyond', () => {
    let worst = 0;
    for (let x = -20; x < 12; x += 0.00137) worst = Math.max(worst, Math.abs(exponential(x) / Math.exp(x) - 1));
    expect(worst).toBeLessThan(5e-16);
  });

  // Abramowitz & Stegun 1964, Table 4.4 (recalled)
  it.each([
    [0, 1],
    [1, Math.E],
    [-1, 0.36787944117144233],
    [0.5, 1.6487212707001282],
    [2, 7.38905609893065],
  ])('e^%d', (x, expected) => expect(Math.abs(exponential(x) / expected - 1)).toBeLessThan(5e-16));

  it('e^x e^−x is 1', () => {
    for (let x = -7.9; x < 7.9; x += 0.0731) expect(Math.abs(exponential(x) * exponential(-x) - 1)).toBeLessThan(1e-15);
  });

  it('never falls as x rises, across the steps of the table too', () => {
    for (let k = -640; k < 500; k++) {
      const edge = (k + 0.5) / 64;
      expect(exponential(edge + 1e-9)).toBeGreaterThan(exponential(edge - 1e-9));
    }
  });

  it('goes to its ends, and NaN stays NaN', () => {
    expect(exponential(-1000)).toBe(0);
    expect(exponential(1000)).toBe(Number.POSITIVE_INFINITY);
    expect(exponential(Number.NaN)).toBeNaN();
  });
});
