/** Snow and frozen ground against the handbooks' own units and hand-worked days. Constants of the sources are recalled, not re-read. */
import { describe, expect, test } from 'vitest';
import { FROZEN_FROM, frozenGroundIndex, isGroundFrozen, THAWED_BELOW } from '../../lib/crop/frozen-ground.ts';
import { degreeDayMelt, MELT_COEFFICIENT, snowShare } from '../../lib/crop/snow.ts';
import { validation } from '../support/validation.ts';

const check = validation(import.meta.url, {
  title: 'Snow and frozen ground',
  source: 'USDA-NRCS National Engineering Handbook 630 chapter 11; Snow Hydrology 1956; Molnau & Bissell 1983',
  provenance: 'recalled',
});

describe('Rain or snow (Snow Hydrology 1956: all snow at 30 °F, all rain at 38 °F)', () => {
  const celsius = (fahrenheit: number) => (fahrenheit - 32) / 1.8;
  test.each([
    [20, 1],
    [30, 1],
    [34, 0.5],
    [36, 0.25],
    [38, 0],
    [60, 0],
  ])('%d °F: %d of it snow', (fahrenheit, share) => check.held(snowShare(celsius(fahrenheit)), share, 0.01));
});

describe('Degree-day melt (NEH 630 chapter 11: 0.06 inch per °F and day)', () => {
  test.each([
    [33, 0.06],
    [42, 0.6],
    [50, 1.08],
  ])('at a mean of %d °F %d inches melt', (fahrenheit, inches) => {
    check.held(degreeDayMelt(1000, (fahrenheit - 32) / 1.8) / 25.4, inches, 1e-9);
  });
  test('the coefficient is about 2.7 mm, within the printed range of 1.6 … 6.0 mm °C⁻¹ d⁻¹', () => {
    check.held(MELT_COEFFICIENT, 2.7, 0.05);
    expect(MELT_COEFFICIENT).toBeGreaterThan(1.6);
    expect(MELT_COEFFICIENT).toBeLessThan(6);
  });
  test('no more than is there, none in the cold', () => {
    expect(degreeDayMelt(5, 20)).toBe(5);
    expect(degreeDayMelt(5, -3)).toBe(0);
  });
});

describe('Frozen ground index (Molnau & Bissell 1983)', () => {
  test('bare ground at −10 °C: 10, 19.7, 29.109, 38.23573', () => {
    let index = 0;
    for (const expected of [10, 19.7, 29.109, 38.23573]) {
      index = frozenGroundIndex(index, -10, 0);
      check.held(index, expected, 1e-9);
    }
  });
  test('20 cm of snow (50 mm of water) let exp(−0.4 · 0.08 · 20) of the cold through, and exp(−0.4 · 0.5 · 20) of the warmth', () => {
    check.held(frozenGroundIndex(0, -10, 50), 5.27292, 5e-6); // 10 e^−0.64
    check.held(frozenGroundIndex(80, 5, 50), 77.50842, 5e-6); // 77.6 − 5 e^−4
  });
  test('never below 0', () => expect(frozenGroundIndex(3, 20, 0)).toBe(0));
  test('frozen from 83, thawed below 56, between them as it was', () => {
    expect([FROZEN_FROM, THAWED_BELOW]).toEqual([83, 56]);
    expect(isGroundFrozen(82.9, false)).toBe(false);
    expect(isGroundFrozen(83, false)).toBe(true);
    expect(isGroundFrozen(56, true)).toBe(true);
    expect(isGroundFrozen(55.9, true)).toBe(false);
  });
});
