/**
 * Soil water, stress, runoff and yield against FAO Irrigation and Drainage Paper 56 and the NRCS curve-number tables.
 *
 * Printed values with the tolerance of their last digit; "recomputed" values are the printed formula in double precision.
 */
import { describe, expect, test } from 'vitest';
import { depletionFraction, drainage, refilledDepletion, stressCoefficient, totalAvailableWater } from '../../lib/crop/root-zone.ts';
import { potentialRetention, surfaceRunoff } from '../../lib/crop/runoff.ts';
import { relativeYield, stressFromRelativeYield } from '../../lib/crop/yield-response.ts';
import { walkStrip } from '../../lib/season/walk.ts';
import { handStrip } from '../support/hand-strip.ts';
import { validation } from '../support/validation.ts';

const check = validation(import.meta.url, {
  title: 'Soil water, stress, runoff and yield: Examples 36, 37, 44 and the curve number',
  source: 'FAO-56 chapter 8; NEH 630 chapter 10, TR-55; FAO-33',
});

describe('Example 36: TAW and RAW, printed in whole mm', () => {
  test.each([
    ['onion, loamy sand', 90, 0.4, 0.3, 36, 11],
    ['onion, silt', 170, 0.4, 0.3, 68, 20],
    ['onion, silty clay', 120, 0.4, 0.3, 48, 14],
    ['tomato, loamy sand', 90, 0.8, 0.4, 72, 29],
    ['tomato, silt', 170, 0.8, 0.4, 136, 54],
    ['tomato, silty clay', 120, 0.8, 0.4, 96, 38],
    ['maize, loamy sand', 90, 1.2, 0.55, 108, 59],
    ['maize, silt', 170, 1.2, 0.55, 204, 112],
    ['maize, silty clay', 120, 1.2, 0.55, 144, 79],
  ])('%s', (_, perMetre, depth, fraction, available, readily) => {
    const total = totalAvailableWater(0.1 + perMetre / 1000, 0.1, depth);
    check.held(total, available, 1e-9);
    // At ETc 5 mm/d the table value of p stands.
    check.held(depletionFraction(fraction, 5) * total, readily, 0.51);
  });
});

describe('Example 37: tomato drying out', () => {
  const printedDepletion = [61.0, 67.0, 72.8, 78.3, 83.4, 88.2, 92.6, 96.9, 100.8, 104.5];
  const printedStress = [1, 1, 0.97, 0.91, 0.85, 0.8, 0.75, 0.7, 0.66, 0.62];
  const recomputedStress = [1, 1, 0.969, 0.908, 0.851, 0.798, 0.748, 0.702, 0.658, 0.617];

  test('Dr and Ks over ten days, Ks from the depletion at the start of the day', () => {
    const available = totalAvailableWater(0.32, 0.12, 0.8);
    let depletion = 55;
    for (let k = 0; k < 10; k++) {
      const stress = stressCoefficient(depletion, available, 0.4);
      check.held(stress, recomputedStress[k], 0.0006);
      check.held(stress, printedStress[k], 0.0051);
      depletion += stress * 1.2 * 5;
      check.held(depletion, printedDepletion[k], 0.06);
    }
  });

  test('the walk of the season gives the same Dr and Ks, with Kcb 1.2, no evaporation and p held at 0.40', () => {
    // A dry surface evaporates nothing. ETc is 6 mm/d, so that a table p of 0.44 gives the example's 0.40.
    const { walk, row } = handStrip({
      days: 10,
      settings: { irrigate: false },
      weather: { referenceEt: 5 },
      curve: { basal: 1.2, height: 0.6, rootDepth: 0.8, available: 160, tableFraction: 0.44 },
      ground: { readilyEvaporable: 9, totalEvaporable: 26 },
      opening: [55, 0, 26],
    });
    expect(walkStrip(walk)).toBeLessThan(1e-9);
    for (let k = 0; k < 10; k++) {
      check.held(row('stress_coefficient')[k], recomputedStress[k], 0.0006);
      check.held(row('root_zone_depletion')[k], printedDepletion[k], 0.06);
    }
  });
});

describe('Order of drainage and ET', () => {
  test('drains before ET, as the printed Example 38 does: a 40 mm irrigation on a depletion of 30 mm loses 10 mm and leaves 0', () => {
    // Numbers chosen here; Eq. 88 read literally would take the day's ET of 5 mm first and lose only 5 mm.
    expect(drainage(30, 0, 40)).toBe(10);
    expect(refilledDepletion(30, 0, 40)).toBe(0);
  });
});

describe('Depletion fraction (Table 22, footnote)', () => {
  test.each([
    [0.5, 5, 0.5],
    [0.5, 7.5, 0.4],
    [0.5, 2.5, 0.6],
    [0.8, 0, 0.8],
    [0.2, 12, 0.1],
  ])('p %f at ETc %f → %f', (table, cropEt, expected) => check.held(depletionFraction(table, cropEt), expected, 1e-12));
});

describe('Curve number (NRCS)', () => {
  test.each([
    ['TR-55 example, CN 70, 6.0 in', 70, 6, 2.81],
    ['TR-55 example, CN 75, 6.0 in', 75, 6, 3.28],
  ])('%s', (_, curveNumber, inches, expected) => {
    check.held(surfaceRunoff(inches * 25.4, potentialRetention(curveNumber)) / 25.4, expected, 0.005);
  });

  test('CN 78, 75 mm: S 71.64, Q 27.82 mm (recomputed)', () => {
    check.held(potentialRetention(78), 71.64, 0.005);
    check.held(surfaceRunoff(75, potentialRetention(78)), 27.82, 0.005);
  });

  const depths = [1, 1.4, 2, 3, 4, 5, 6, 8, 10];
  test.each([
    [60, [0, 0, 0.06, 0.33, 0.76, 1.3, 1.92, 3.33, 4.9]],
    [70, [0, 0.06, 0.24, 0.71, 1.33, 2.04, 2.81, 4.46, 6.22]],
    [80, [0.08, 0.24, 0.56, 1.25, 2.04, 2.89, 3.78, 5.62, 7.52]],
    [90, [0.32, 0.61, 1.09, 1.98, 2.92, 3.88, 4.85, 6.81, 8.78]],
    [98, [0.79, 1.18, 1.77, 2.77, 3.77, 4.76, 5.76, 7.76, 9.76]],
  ])('TR-55 Table 2-1 layout, CN %i, inches (recomputed)', (curveNumber, expected) => {
    for (const [k, depth] of depths.entries()) {
      check.held(surfaceRunoff(depth * 25.4, potentialRetention(curveNumber)) / 25.4, expected[k], 0.0051);
    }
  });
});

describe('Yield (Eq. 90, 103)', () => {
  test('Example 44: 1100 of 1800 kg/ha with Ky 1.15 → Ks 0.66', () =>
    check.held(stressFromRelativeYield(1.15, 1100 / 1800), 0.6618, 0.0001));

  test('Eq. 90 undoes Eq. 103 on the same example', () => check.held(relativeYield(1.15, 0.6618, 1), 1100 / 1800, 0.0001));
});
