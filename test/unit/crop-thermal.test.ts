/** Thermal time, starts by weather and killing frost: by hand-made weather whose answer can be counted out. */
import { describe, expect, test } from 'vitest';
import { killingFrostDay } from '../../lib/crop/killing-frost.ts';
import { findStart, runningMean, runningSoilMean, type StartWeather } from '../../lib/crop/start-rule.ts';
import { degreeDays, degreeDaysOfMean, sumDegreeDays, thermalLengths } from '../../lib/crop/thermal-time.ts';

function weather(days: number, of: (day: number) => { max: number; min: number; rain?: number }): StartWeather {
  const rows = Array.from({ length: days }, (_, d) => of(d));
  return {
    airTemperatureMax: Float64Array.from(rows, ({ max }) => max),
    airTemperatureMin: Float64Array.from(rows, ({ min }) => min),
    precipitation: Float64Array.from(rows, ({ rain }) => rain ?? 0),
  };
}

describe('growing degree days', () => {
  // McMaster & Wilhelm 1997 show that the two readings of the same formula part when Tmin is below the base; worked by hand.
  test.each([
    ['both above the base', 30, 16, 13, 13],
    ['Tmin below the base', 24, 4, 4, 7],
    ['mean below the base', 14, 2, 0, 2],
    ['both below the base', 8, 2, 0, 0],
    ['Tmax above the ceiling', 40, 20, 20, 15],
  ])('%s: by the mean %f, by the extremes %f', (_, max, min, byMean, byExtremes) => {
    expect(degreeDaysOfMean(max, min, 10)).toBeCloseTo(byMean, 12);
    expect(degreeDays(max, min, 10, 30)).toBeCloseTo(byExtremes, 12);
  });

  test('NaN in gives NaN out; in a running sum a day without temperature counts as the day before', () => {
    expect(degreeDays(Number.NaN, 5, 10, 30)).toBeNaN();
    const sums = sumDegreeDays(
      Float64Array.of(20, Number.NaN, 30),
      Float64Array.of(20, 1, 20),
      { base: 10, ceiling: 40 },
      new Float64Array(4),
    );
    expect([...sums]).toEqual([0, 10, 20, 35]);
  });
});

describe('stages by thermal time', () => {
  const days = { initial: 20, development: 25, mid: 30, late: 15 };
  const constant = (count: number, rate: number) => Float64Array.from({ length: count + 1 }, (_, d) => rate * d);

  test('on days of equal warmth the sums are days', () => {
    const stages = { initial: 200, development: 250, mid: 300, late: 150 };
    expect(thermalLengths(10, stages, days, constant(365, 10))).toEqual(days);
  });

  test('what a stage overshoots is not lost: the whole takes the sum of the stages', () => {
    const lengths = thermalLengths(0, { initial: 25, development: 25, mid: 25, late: 25 }, days, constant(100, 10));
    expect(lengths).toEqual({ initial: 3, development: 2, mid: 3, late: 2 });
  });

  test('a warmer year is shorter, day by day of the stage', () => {
    const stages = { initial: 200, development: 250, mid: 300, late: 150 };
    expect(thermalLengths(0, stages, days, constant(365, 12.5))).toEqual({ initial: 16, development: 20, mid: 24, late: 12 });
  });

  test('days before the run go by the calendar’s days', () => {
    // 30 days before the run: 20 of the initial stage, 10 of 25 of development; 60 % of 250 °C d are left, 15 days at 10 °C d
    const stages = { initial: 200, development: 250, mid: 300, late: 150 };
    expect(thermalLengths(-30, stages, days, constant(365, 10))).toEqual({ initial: 20, development: 25, mid: 30, late: 15 });
    expect(thermalLengths(-30, stages, days, constant(365, 20))).toEqual({ initial: 20, development: 18, mid: 15, late: 7 });
  });

  test('past the end of the run the mean of its last 30 days goes on; without growth the calendar’s days', () => {
    const stages = { initial: 100, development: 1000, mid: 10, late: 10 };
    // 40 days at 10: initial 10, then 300 of 1000 in the run, 70 days more at 10
    expect(thermalLengths(0, stages, days, constant(40, 10)).development).toBe(30 + 70);
    const cold = constant(40, 0);
    expect(thermalLengths(0, stages, days, cold).initial).toBe(40 + 20);
  });

  test('a stage without a sum has no days', () => {
    expect(thermalLengths(5, { initial: 0, development: 100, mid: 0, late: 100 }, days, constant(365, 10))).toEqual({
      initial: 0,
      development: 10,
      mid: 0,
      late: 10,
    });
  });
});

describe('starts by weather', () => {
  const rising = weather(100, (d) => ({ max: d / 5 + 5, min: d / 5 - 5 })); // mean d / 5

  test('the mean of ten days reaches 13 °C: mean of the days 61 … 70 is 13.1, of 60 … 69 12.9', () => {
    expect(findStart({ kind: 'air-temperature', threshold: 13, days: 10 }, 0, 99, rising)).toEqual({ day: 70, met: true });
    expect(runningMean(rising, 70, 10)).toBeCloseTo(13.1, 12);
    expect(runningMean(rising, 2, 10)).toBeCloseTo(0.2, 12);
  });

  test('falling: winter wheat at 17 °C', () => {
    const falling = weather(100, (d) => ({ max: 30 - d / 5, min: 20 - d / 5 })); // mean 25 − d / 5
    expect(findStart({ kind: 'air-temperature', threshold: 17, days: 10, falling: true }, 0, 91, falling)).toEqual({ day: 45, met: true });
  });

  test('the latest day stands in where the rule is not met', () => {
    expect(findStart({ kind: 'air-temperature', threshold: 13, days: 10 }, 0, 40, rising)).toEqual({ day: 40, met: false });
  });

  test('soil temperature follows the air of the week before', () => {
    // mean of 7 days up to d is (d − 3) / 5
    expect(runningSoilMean(rising, 50, 1)).toBeCloseTo(47 / 5, 12);
    expect(findStart({ kind: 'soil-temperature', threshold: 10, days: 1 }, 0, 99, rising).day).toBe(53);
  });

  test('rain within days', () => {
    const wet = weather(60, (d) => ({ max: 20, min: 10, rain: d % 10 < 2 ? 8 : 0 }));
    expect(findStart({ kind: 'rain', depth: 15, days: 3 }, 5, 50, wet)).toEqual({ day: 11, met: true });
    expect(findStart({ kind: 'rain', depth: 20, days: 3 }, 5, 50, wet)).toEqual({ day: 55, met: false });
  });

  test('frost-free: the day after the last minimum below the threshold of the window', () => {
    const frosts = new Set([3, 20, 41, 90]);
    const cold = weather(100, (d) => ({ max: 15, min: frosts.has(d) ? -5 : 2 }));
    expect(findStart({ kind: 'frost-free', threshold: -4 }, 0, 60, cold)).toEqual({ day: 42, met: true });
    expect(findStart({ kind: 'frost-free', threshold: -8 }, 10, 60, cold)).toEqual({ day: 10, met: true });
  });

  test('degree days from the earliest day', () => {
    const even = weather(60, () => ({ max: 20, min: 10 }));
    expect(findStart({ kind: 'growing-degree-days', base: 5, sum: 100 }, 8, 50, even)).toEqual({ day: 17, met: true });
  });

  test('a window before the run has the planting’s own day; one that reaches in is searched from the first day', () => {
    expect(findStart({ kind: 'air-temperature', threshold: 0, days: 1 }, -60, 30, rising)).toEqual({ day: -60, met: false });
    expect(findStart({ kind: 'air-temperature', threshold: 0, days: 1 }, -60, 90, rising)).toEqual({ day: 0, met: true });
  });
});

describe('killing frost', () => {
  const minimum = Float64Array.from({ length: 300 }, (_, d) => (d === 20 || d === 250 || d === 270 ? -4 : 5));

  test.each([
    [0, { threshold: -4, notBefore: 120 }, 250],
    [0, { threshold: -4, notBefore: 10 }, 20],
    [0, { threshold: -4, notBefore: 120, after: 7 }, 257],
    [200, { threshold: -4, notBefore: 60 }, 270],
    [0, { threshold: -5, notBefore: 0 }, Number.POSITIVE_INFINITY],
    [-100, { threshold: -4, notBefore: 110 }, 20],
  ])('from day %i', (start, rule, expected) => expect(killingFrostDay(minimum, start, rule)).toBe(expected));
});
