/**
 * The slope on elevation against R 4.2.2: coef(lm(value ~ elevation + day)) of twenty invented sites on three invented days, whole and without the first site.
 */
import { describe, expect, test } from 'vitest';
import { elevationTrend, takesElevationTrend } from '../../lib/weather/elevation-trend.ts';

const ELEVATIONS = [1084, 1145, 521, 1331, 1863, 985, 1475, 135, 425, 1095, 1711, 1168, 787, 875, 1332, 967, 194, 713, 1868, 1435];
const DAYS = [
  [3.41, 2.43, 6.17, 1.8, -1.83, 3.47, 0.79, 9.89, 7.51, 3.31, -1.85, 2.76, 4.78, 3.78, 1.97, 4.52, 9.04, 3.86, -1.8, 0.84],
  [13.59, 13.03, 16.51, 10.75, 8.29, 13.06, 10.43, 19.17, 17.18, 12.75, 8.3, 12.59, 15.43, 14.65, 11.89, 13.54, 18.63, 14.94, 7.57, 11.56],
  [
    23.97, 22.43, 26.82, 20.91, 17.58, 24.22, 20.48, 29.07, 27.14, 22.35, 19.9, 21.82, 25.32, 24.68, 21.19, 23.65, 29.78, 25.47, 17.49,
    20.71,
  ],
];
const values = Float64Array.from({ length: 60 }, (_, i) => DAYS[i % 3][Math.floor(i / 3)]);

describe('elevation trend', () => {
  test('slope with a level per day, and without each site', () => {
    const { gradient, without } = elevationTrend({ elevations: ELEVATIONS, values, dayCount: 3 });
    expect(gradient).toBeCloseTo(-0.00654876479455, 12);
    expect(without[0]).toBeCloseTo(-0.0065526637573, 12);
  });
  test('a site that is missing, or of unknown elevation, takes no part', () => {
    const gone = values.map((value, i) => (i < 3 ? Number.NaN : value));
    expect(elevationTrend({ elevations: ELEVATIONS, values: gone, dayCount: 3 }).gradient).toBeCloseTo(-0.0065526637573, 12);
    const unknown = [Number.NaN, ...ELEVATIONS.slice(1)];
    expect(elevationTrend({ elevations: unknown, values, dayCount: 3 }).gradient).toBeCloseTo(-0.0065526637573, 12);
  });
  test('none from three sites, or from sites within 50 m', () => {
    expect(elevationTrend({ elevations: [0, 500, 1000], values: Float64Array.from([9, 6, 3]), dayCount: 1 }).gradient).toBeNaN();
    expect(elevationTrend({ elevations: [0, 10, 20, 49], values: Float64Array.from([9, 6, 3, 1]), dayCount: 1 }).gradient).toBeNaN();
    expect(elevationTrend({ elevations: [0, 10, 20, 50], values: Float64Array.from([50, 40, 30, 0]), dayCount: 1 }).gradient).toBeCloseTo(
      -1,
      12,
    );
  });
  test('values that do not fit the sites are refused', () => {
    expect(() => elevationTrend({ elevations: [1, 2], values: [1, 2, 3], dayCount: 1 })).toThrow('3 values for 2 sites × 1 days');
  });
  test('rain has none: it would fall on dry days', () => {
    expect(takesElevationTrend('precipitation')).toBe(false);
    expect(takesElevationTrend('solarRadiation')).toBe(true);
  });
});
