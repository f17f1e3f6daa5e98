/**
 * Salt tolerance and leaching against FAO Irrigation and Drainage Papers 29 rev. 1 (Ayers & Westcot 1985) and 56. Examples of FAO-29 are recalled, not
 * re-read; the values they print are rounded, the recomputed ones stand beside them.
 */
import { describe, expect, test } from 'vitest';
import {
  combinedStress,
  depthWithLeaching,
  leachingRequirement,
  MOST_LEACHING,
  relativeYieldInSalt,
  saltStress,
  saltStressIsValid,
  steadySoilSalinity,
} from '../../lib/crop/salinity.ts';
import { validation } from '../support/validation.ts';

const check = validation(import.meta.url, {
  title: 'Salt tolerance and leaching',
  source: 'FAO Irrigation and Drainage Papers 29 rev. 1 and 56',
  provenance: 'recomputed',
});

const MAIZE = { threshold: 1.7, slope: 12 };

describe('Relative yield (FAO-56 Eq. 89; FAO-29 Table 4, recalled, within its last digit)', () => {
  // ECe at 100, 90, 75, 50 and 0 % of the yield
  test.each([
    ['maize', MAIZE, [1.7, 2.5, 3.8, 5.9, 10]],
    ['cotton', { threshold: 7.7, slope: 5.2 }, [7.7, 9.6, 12.5, 17.3, 26.9]],
    ['wheat', { threshold: 6, slope: 7.1 }, [6, 7.4, 9.5, 13, 20.1]],
    ['alfalfa', { threshold: 2, slope: 7.3 }, [2, 3.4, 5.4, 8.8, 15.7]],
    ['bean', { threshold: 1, slope: 19 }, [1, 1.5, 2.3, 3.6, 6.3]],
  ] as const)('%s', (name, tolerance, levels) => {
    for (const [k, part] of [1, 0.9, 0.75, 0.5, 0].entries()) {
      const what = `Relative yield of ${name} at ECe ${levels[k]} dS/m, FAO-29 Table 4`;
      const tolerated = (0.051 * tolerance.slope) / 100;
      check.held(relativeYieldInSalt(levels[k], tolerance), part, tolerated, { what, provenance: 'recalled' });
    }
  });

  test('full below the threshold, none far above', () => {
    expect(relativeYieldInSalt(0.5, MAIZE)).toBe(1);
    expect(relativeYieldInSalt(30, MAIZE)).toBe(0);
  });
});

describe('Stress coefficient of salt (FAO-56 Eq. 91, 92)', () => {
  test('maize at ECe 3.7, Ky 1.25: 1 − 12 × 2 / 125', () => check.held(saltStress(3.7, MAIZE, 1.25), 0.808, 1e-12));
  test('with the yield response: Eq. 89 and 90 together give Eq. 91', () => {
    // Ya/Ym = 1 − Ky (1 − Ks) has to give back Eq. 89
    const stress = saltStress(4.2, MAIZE, 1.25);
    check.held(1 - 1.25 * (1 - stress), 1 - ((4.2 - 1.7) * 12) / 100, 1e-12);
  });
  test('1 up to the threshold, 0 at the least', () => {
    expect(saltStress(1.7, MAIZE, 1.25)).toBe(1);
    expect(saltStress(40, MAIZE, 1.25)).toBe(0);
  });
  test('valid while yield falls by less than half: ECt + 50 / b = 5.867', () => {
    expect(saltStressIsValid(5.86, MAIZE)).toBe(true);
    expect(saltStressIsValid(5.87, MAIZE)).toBe(false);
  });
  test('both together are the product', () => check.held(combinedStress(0.808, 0.75), 0.606, 1e-12));
});

describe('Leaching (FAO-29)', () => {
  test('maize, ECw 1.2: printed LR 0.16 at full yield, 0.10 at 90 %', () => {
    check.held(leachingRequirement(1.2, 1.7), 0.16, 0.005, { what: 'LR of maize, ECw 1.2, full yield', provenance: 'recalled' });
    check.held(leachingRequirement(1.2, 1.7), 0.1644, 0.00005);
    check.held(leachingRequirement(1.2, 2.5), 0.1, 0.0065, { what: 'LR of maize, ECw 1.2, 90 % yield', provenance: 'recalled' }); // the print cuts 0.1062 to 0.10
    check.held(leachingRequirement(1.2, 2.5), 0.1062, 0.00005);
  });
  test('ET 800 mm: printed 890 mm at LR 0.10, 952 mm at 0.16; 1369 mm gross at 65 %', () => {
    check.held(depthWithLeaching(800, 0.1), 890, 5, { what: 'Water for ET 800 mm at LR 0.10', unit: 'mm', provenance: 'recalled' });
    check.held(depthWithLeaching(800, 0.1), 888.9, 0.05);
    check.held(depthWithLeaching(800, 0.16), 952, 0.5, { what: 'Water for ET 800 mm at LR 0.16', unit: 'mm' });
    check.held(depthWithLeaching(800, 0.1) / 0.65, 1369, 2, {
      what: 'The same at an efficiency of 65 %',
      unit: 'mm',
      provenance: 'recalled',
    });
  });
  test('water too salty for the crop asks for the limit, not for less than nothing', () => {
    expect(leachingRequirement(9, 1.7)).toBe(MOST_LEACHING);
    expect(leachingRequirement(8.5, 1.7)).toBe(MOST_LEACHING);
    expect(leachingRequirement(0, 1.7)).toBe(0);
  });
  // (1 + LF) / (5 LF), recomputed from FAO-56 Eq. 93
  test.each([
    [0.05, 4.2],
    [0.1, 2.2],
    [0.15, 1.53],
    [0.2, 1.2],
    [0.3, 0.87],
    [0.4, 0.7],
  ])('concentration at leaching fraction %d: %d', (fraction, factor) => check.held(steadySoilSalinity(1, fraction), factor, 0.005));
});
