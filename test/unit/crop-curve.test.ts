/** Growth stages and cycles: ends, cuts, and the rules that FAO-56 leaves to the reader. */
import { describe, expect, test } from 'vitest';
import { cyclesOf, developmentProgress, plantHeight, stageCoefficient, stageOf, totalLength } from '../../lib/crop/curve.ts';

const lengths = { initial: 10, development: 20, mid: 30, late: 15 };
const later = { initial: 5, development: 10, mid: 5, late: 5 };
const base = { start: 20, lengths, later, cuts: [], repeats: false, runEnd: 365 };

describe('cyclesOf', () => {
  test('without harvest the stages’ total ends the crop', () => {
    expect(cyclesOf({ ...base, harvest: Infinity })).toEqual([{ start: 20, end: 95, lengths }]);
    expect(totalLength(lengths)).toBe(75);
  });

  test('harvest cuts the stages off; a later harvest keeps the crop standing', () => {
    expect(cyclesOf({ ...base, harvest: 50 })[0].end).toBe(50);
    expect(cyclesOf({ ...base, harvest: 200 })[0].end).toBe(200);
  });

  test('cut days restart the cycle, the last runs to the harvest', () => {
    const cycles = cyclesOf({ ...base, harvest: 150, cuts: [60, 100] });
    expect(cycles.map(({ start, end }) => [start, end])).toEqual([
      [20, 60],
      [60, 100],
      [100, 150],
    ]);
    expect(cycles.map((cycle) => cycle.lengths)).toEqual([lengths, later, later]);
  });

  test('cut forage without dates is cut when its stages are through, to the end of the run', () => {
    const cycles = cyclesOf({ ...base, harvest: Infinity, repeats: true, runEnd: 160 });
    expect(cycles.map(({ start, end }) => [start, end])).toEqual([
      [20, 95],
      [95, 120],
      [120, 145],
      [145, 160],
    ]);
  });

  test('without lengths for later cycles the first ones serve again', () => {
    const cycles = cyclesOf({ ...base, harvest: Infinity, later: null, repeats: true, runEnd: 200 });
    expect(cycles.map(({ start }) => start)).toEqual([20, 95, 170]);
  });

  test('a planting before the run begins has a negative start and the same cycles', () => {
    const cycles = cyclesOf({ ...base, start: -100, harvest: Infinity, repeats: true, runEnd: 30 });
    expect(cycles.map(({ start }) => start)).toEqual([-100, -25, 0, 25]);
  });
});

describe('stages', () => {
  test.each([
    [1, 'initial', 0],
    [10, 'initial', 0],
    [11, 'development', 0.05],
    [30, 'development', 1],
    [31, 'mid', 1],
    [60, 'mid', 1],
    [61, 'late', 1],
    [200, 'late', 1],
  ] as const)('day %i is in the %s stage', (day, stage, progress) => {
    expect(stageOf(lengths, day)).toBe(stage);
    expect(developmentProgress(lengths, day)).toBeCloseTo(progress, 12);
  });

  test('a crop without a development stage steps from initial to mid', () => {
    const abrupt = { initial: 5, development: 0, mid: 5, late: 5 };
    const coefficients = { initial: 0.2, mid: 1, end: 0.5 };
    expect([5, 6, 10, 15, 16].map((day) => stageCoefficient(abrupt, coefficients, day))).toEqual([0.2, 1, 1, 0.5, 0.5]);
  });

  test('a crop that stands past its late stage keeps the end coefficient', () => {
    expect(stageCoefficient(lengths, { initial: 0.2, mid: 1.1, end: 0.3 }, 500)).toBe(0.3);
  });

  test('height never passes its maximum nor falls in the late stage', () => {
    expect(plantHeight(1.4, 1.1, 2, 0.5)).toBe(2);
    expect(plantHeight(0.3, 1.1, 2, 1)).toBe(2);
  });
});
