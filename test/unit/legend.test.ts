import { describe, expect, test } from 'vitest';
import { RangeViolation, ShapeError } from '../../lib/base/errors.ts';
import { mulberry32 } from '../../lib/base/random.ts';
import { classify, classOf, quantileSorted } from '../../lib/report/classes.ts';
import { classColours, PRINT_PATTERNS, patternOf } from '../../lib/report/colour-scale.ts';
import { legendOf } from '../../lib/report/legend.ts';

const METHODS = ['quantile', 'equal-interval', 'natural'] as const;

describe('classes', () => {
  // Hyndman & Fan (1996), type 7: position 1 + (n − 1)p in the order statistics. For 1…10: 3.25 at 0.25, 5.5 at 0.5, 9.1 at 0.9.
  test.each([
    [0.25, 3.25],
    [0.5, 5.5],
    [0.9, 9.1],
    [1, 10],
  ])('quantile %d of 1…10', (share, expected) => {
    expect(quantileSorted([1, 2, 3, 4, 5, 6, 7, 8, 9, 10], share)).toBeCloseTo(expected, 12);
  });

  test('quantile classes of 1…100 hold a fifth each', () => {
    const values = Array.from({ length: 100 }, (_, i) => i + 1);
    expect(classify({ values, method: 'quantile', count: 5 }).counts).toEqual([20, 20, 20, 20, 20]);
  });

  test('equal intervals', () => {
    const { breaks, counts } = classify({ values: [0, 1, 1, 9, 10], method: 'equal-interval', count: 5 });
    expect(breaks).toEqual([0, 2, 4, 6, 8, 10]);
    expect(counts).toEqual([3, 0, 0, 0, 2]);
  });

  test('own limits stay whatever the values are, and take in what lies outside them', () => {
    const own = [10, 20, 30];
    expect(classify({ values: [5, 10, 15, 40], method: 'own', count: 0, own }).counts).toEqual([1, 2, 0, 1]);
    expect(classify({ values: [12, 12], method: 'own', count: 0, own }).counts).toEqual([0, 2, 0, 0]);
    const classes = classify({ values: [25], method: 'own', count: 0, own });
    const { entries } = legendOf({ title: 'x', quantity: null, classes, units: 'metric', scale: 'amount', theme: 'light' });
    expect(entries.map((entry) => entry.label)).toEqual(['< 10', '10–20', '20–30', '≥ 30']);
  });

  test('natural breaks have the least sum of squares of all partitions', () => {
    const random = mulberry32(41);
    for (let trial = 0; trial < 60; trial++) {
      const size = 3 + Math.floor(random() * 10);
      const values = Array.from({ length: size }, () => Math.round(random() * (trial % 2 === 0 ? 12 : 1000)) + (trial % 3) * 1e6);
      const count = 2 + Math.floor(random() * 4);
      const { breaks } = classify({ values, method: 'natural', count });
      const groups = new Map<number, number[]>();
      for (const value of values) groups.set(classOf(breaks, value), [...(groups.get(classOf(breaks, value)) ?? []), value]);
      expect(within([...groups.values()])).toBeCloseTo(leastWithin(values, count), 5);
    }
  });

  test('natural breaks of three clear groups', () => {
    expect(classify({ values: [1, 2, 2, 50, 51, 53, 200, 205], method: 'natural', count: 3 }).breaks).toEqual([1, 50, 200, 205]);
  });

  test.each(METHODS)('%s: equal values make one class, nothing known makes none', (method) => {
    expect(classify({ values: [7, 7, 7], areas: [1, 2, 3], method, count: 5 })).toMatchObject({
      breaks: [7, 7],
      counts: [3],
      areas: [6],
      missingCount: 0,
    });
    expect(classify({ values: [Number.NaN], areas: [4], method, count: 5 })).toMatchObject({
      breaks: [],
      counts: [],
      missingCount: 1,
      missingArea: 4,
    });
    expect(classify({ values: [], method, count: 5 })).toMatchObject({ breaks: [], counts: [], missingCount: 0 });
  });

  test.each(METHODS)('%s: every value and all area is in some class, breaks rise', (method) => {
    const random = mulberry32(17);
    for (let trial = 0; trial < 50; trial++) {
      const values = Array.from({ length: 1 + Math.floor(random() * 40) }, () => (random() < 0.15 ? Number.NaN : Math.floor(random() * 6)));
      const areas = values.map(() => random() * 100);
      const {
        breaks,
        counts,
        areas: classAreas,
        missingCount,
        missingArea,
      } = classify({ values, areas, method, count: 1 + Math.floor(random() * 9) });
      expect(counts.reduce((sum, count) => sum + count, missingCount)).toBe(values.length);
      expect(classAreas.reduce((sum, area) => sum + area, missingArea)).toBeCloseTo(
        areas.reduce((sum, area) => sum + area, 0),
        9,
      );
      for (let i = 1; i + 1 < breaks.length; i++) expect(breaks[i]).toBeGreaterThan(breaks[i - 1]);
      expect(counts.length).toBe(Math.max(0, breaks.length - 1));
    }
  });

  test('100 000 distinct values are classed at once', () => {
    const random = mulberry32(3);
    const values = Float64Array.from({ length: 100_000 }, () => random() ** 2 * 900);
    const { counts } = classify({ values, method: 'natural', count: 7 });
    expect(counts).toHaveLength(7);
    expect(Math.min(...counts)).toBeGreaterThan(0);
  });

  test.each([
    ['no class', { values: [1], method: 'quantile', count: 0 }, RangeViolation],
    ['ten classes', { values: [1], method: 'natural', count: 10 }, RangeViolation],
    ['falling limits', { values: [1], method: 'own', count: 3, own: [5, 4] }, RangeViolation],
    ['no limits', { values: [1], method: 'own', count: 3 }, RangeViolation],
    ['areas that do not fit', { values: [1], areas: [], method: 'quantile', count: 3 }, ShapeError],
  ] as const)('refuses %s', (_, request, kind) => {
    expect(() => classify(request)).toThrow(kind);
  });
});

function within(groups: readonly number[][]): number {
  return groups.reduce((sum, group) => {
    const mean = group.reduce((a, b) => a + b, 0) / group.length;
    return sum + group.reduce((a, value) => a + (value - mean) ** 2, 0);
  }, 0);
}

/** Every way to cut the sorted values into at most `count` groups without parting equal values. */
function leastWithin(values: readonly number[], count: number): number {
  const sorted = [...values].sort((a, b) => a - b);
  const cut = (from: number, left: number): number => {
    let least = within([sorted.slice(from)]);
    if (left === 1) return least;
    for (let to = from + 1; to < sorted.length; to++) {
      if (sorted[to] === sorted[to - 1]) continue;
      least = Math.min(least, within([sorted.slice(from, to)]) + cut(to, left - 1));
    }
    return least;
  };
  return cut(0, count);
}

describe('colours', () => {
  // ColorBrewer.org: YlGnBu in 4 classes #ffffcc #a1dab4 #41b6c4 #225ea8; BrBG in 3 classes #d8b365 #f5f5f5 #5ab4ac.
  test('are the published ones, without the end that meets the background', () => {
    expect(classColours(3, 'amount', 'light')).toEqual(['#a1dab4', '#41b6c4', '#225ea8']);
    expect(classColours(3, 'amount', 'dark')).toEqual(['#41b6c4', '#a1dab4', '#ffffcc']);
    expect(classColours(3, 'balance', 'light')).toEqual(['#d8b365', '#f5f5f5', '#5ab4ac']);
  });

  test('are as many as the classes, all different', () => {
    for (const kind of ['amount', 'balance'] as const) {
      for (const theme of ['light', 'dark'] as const) {
        for (let count = 1; count <= 9; count++) {
          const colours = classColours(count, kind, theme);
          expect(new Set(colours).size).toBe(count);
          for (const colour of colours) expect(colour).toMatch(/^#[0-9a-f]{6}$/);
        }
      }
    }
    expect(() => classColours(10, 'amount', 'light')).toThrow(RangeViolation);
  });

  test('each class has its own pattern, up to the patterns there are', () => {
    for (let count = 1; count <= PRINT_PATTERNS.length; count++) {
      expect(new Set(Array.from({ length: count }, (_, i) => patternOf(i, count))).size).toBe(count);
    }
  });
});

describe('legend', () => {
  // 25.4 mm = 1 in; 4046.8564224 m² = 1 ac (NIST SP 811).
  const classes = classify({
    values: [25.4, 50.8, 76.2, 101.6, Number.NaN],
    areas: [4046.8564224, 4046.8564224, 8093.7128448, 4046.8564224, 4046.8564224],
    method: 'equal-interval',
    count: 3,
  });
  const legend = legendOf({ title: 'Depth', quantity: 'mm', classes, units: 'us', scale: 'amount', theme: 'light' });

  test('labels and areas are in the units of the reader', () => {
    expect(legend.unit).toBe('in');
    expect(legend.entries.map((entry) => entry.label)).toEqual(['1–2', '2–3', '3–4']);
    expect(legend.entries.map((entry) => entry.areaLabel)).toEqual(['1.00 ac', '1.00 ac', '3.00 ac']);
    expect(legend.missing).toMatchObject({ count: 1, areaLabel: '1.00 ac', pattern: -1 });
    expect(legend.entries.reduce((sum, entry) => sum + entry.areaShare, legend.missing?.areaShare ?? 0)).toBeCloseTo(1, 12);
  });

  test('breaks close together keep enough digits to be told apart', () => {
    const close = classify({ values: [0.11, 0.12, 0.13, 0.14], method: 'equal-interval', count: 3 });
    const labels = legendOf({
      title: 'Stress',
      quantity: null,
      classes: close,
      units: 'metric',
      scale: 'balance',
      theme: 'dark',
    }).entries.map((entry) => entry.label);
    expect(labels).toEqual(['0.11–0.12', '0.12–0.13', '0.13–0.14']);
  });

  test('one value has one label, no values no entries', () => {
    const of = (values: number[]) =>
      legendOf({
        title: 'x',
        quantity: 'mm',
        classes: classify({ values, method: 'natural', count: 4 }),
        units: 'metric',
        scale: 'amount',
        theme: 'light',
      });
    expect(of([12, 12]).entries.map((entry) => entry.label)).toEqual(['12.0']);
    expect(of([Number.NaN]).entries).toEqual([]);
  });
});
