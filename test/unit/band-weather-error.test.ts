/** How far reference ET may be off: by hand on two sites and three years, and day by day through a season that is partly to come. */
import { describe, expect, it } from 'vitest';
import { errorByDay, observedError } from '../../lib/jobs/band-weather-error.ts';
import { DEFAULT_RUN_SETTINGS } from '../../lib/jobs/run-settings.ts';
import { leaveOneOutError, spreadOfYears } from '../../lib/weather/relative-error.ts';
import type { Site } from '../../lib/weather/variable.ts';
import { near } from '../support/near.ts';
import { randomSeason } from '../support/random-season.ts';

function site(code: string, longitude: number): Site {
  return { code, name: code, longitude, latitude: 40, elevation: 100, windHeight: 2 };
}

const HOW = { power: 2, maximumSites: 6 };

describe('leaving one site out', () => {
  it('of two sites holds each against the other: ±1 mm about a mean of 4.5, and a constant bias persists', () => {
    const values = Float64Array.from([4, 4, 4, 4, 5, 5, 5, 5]);
    const { deviation, persistence, n } = leaveOneOutError([site('A', -2), site('B', -1)], values, 4, HOW);
    near(deviation, 1 / 4.5, 1e-12);
    expect(persistence).toBe(0.98);
    expect(n).toBe(8);
  });

  it('finds no memory in errors that change their sign every day', () => {
    const values = Float64Array.from([4, 5, 4, 5, 5, 4, 5, 4]);
    expect(leaveOneOutError([site('A', -2), site('B', -1)], values, 4, HOW).persistence).toBe(0);
  });

  /** Errors by day 1, 1, 0, 1: products of neighbours 1 + 0 + 0, mean squares 1 + 0.5 + 0.5. */
  it('correlates the errors of two days in a row', () => {
    const values = Float64Array.from([4, 4, 4, 4, 5, 5, 4, 5]);
    near(leaveOneOutError([site('A', -2), site('B', -1)], values, 4, HOW).persistence, 0.5, 1e-12);
  });

  it('takes a third site by its distance: at a quarter of the way, 16 times less far squared', () => {
    const sites = [site('A', 0), site('B', 0.1), site('C', 0.5)];
    const values = Float64Array.from([Number.NaN, 4, 8]);
    values[0] = 5; // A: B at 1, C at 5 → (4 · 25 + 8 · 1)/26; B: A at 1, C at 4 → (5 · 16 + 8)/17; C: B at 4, A at 5 → (4 · 25 + 5 · 16)/41
    const errors = [108 / 26 - 5, 88 / 17 - 4, 180 / 41 - 8];
    const expected = Math.sqrt(errors.reduce((sum, error) => sum + error * error, 0) / 3) / (17 / 3);
    near(leaveOneOutError(sites, values, 1, HOW).deviation, expected, 1e-4);
  });

  it('tells nothing of one site', () => {
    expect(leaveOneOutError([site('A', -2)], Float64Array.from([4, 4]), 2, HOW)).toMatchObject({ n: 0, deviation: Number.NaN });
  });
});

describe('spread of years', () => {
  it('is the standard deviation between years, n − 1, over the mean', () => {
    const years = [4, 5, 6].map((value) => new Float64Array(10).fill(value));
    const { deviation, persistence } = spreadOfYears(years);
    near(deviation, 1 / 5, 1e-12);
    expect(persistence).toBe(0.98);
  });

  it('leaves out what a year does not have, and needs two', () => {
    const years = [Float64Array.from([4, 4]), Float64Array.from([6, Number.NaN])];
    near(spreadOfYears(years).deviation, Math.SQRT2 / 5, 1e-12);
    expect(spreadOfYears([Float64Array.from([4])]).deviation).toBeNaN();
  });
});

describe('error of the days', () => {
  const observed = { deviation: 0.05, persistence: 0.4, n: 100 };
  const normal = { deviation: 0.12, persistence: 0.6, n: 100 };

  it('is wider ahead: a forecast grows to the normal’s in ten days, a normal adds the spread of the years', () => {
    const kinds = ['observed', ...new Array(12).fill('forecast'), 'normal'] as const;
    const { deviation, persistence } = errorByDay(kinds, observed, normal);
    near(deviation[0], 0.05, 1e-12);
    near(deviation[1], 0.05 + 0.08 / 10, 1e-12); // √(0.05² + 0.12²) = 0.13
    near(deviation[5], 0.09, 1e-12);
    near(deviation[10], 0.13, 1e-12);
    near(deviation[12], 0.13, 1e-12);
    near(deviation[13], 0.13, 1e-12);
    expect([persistence[0], persistence[13]]).toEqual([0.4, 0.6]);
  });

  it('of an analogue year is √2 of the spread', () => {
    near(errorByDay(['analogue'], { ...observed, deviation: 0 }, normal).deviation[0], 0.12 * Math.SQRT2, 1e-12);
  });
});

describe('error of observed days', () => {
  const season = randomSeason({ seed: 9, parcels: 3, days: 120 });
  const settings = DEFAULT_RUN_SETTINGS;

  it('comes from the sites where there are two', () => {
    const told = observedError({ settings, manifest: {} }, season, 100);
    expect(told.from).toMatch(/^leave-one-out over \d+ sites$/);
    expect(told.error.deviation).toBeGreaterThan(0.02);
    expect(told.error.deviation).toBeLessThanOrEqual(0.5);
  });

  it('comes from the run’s own check, or the kriging variance, where there is one', () => {
    const record = (series: object) => ({ interpolation: { source: 'stations', series } });
    const plain = observedError({ settings, manifest: record({}) }, season, 100);
    const checked = observedError({ settings, manifest: record({ referenceEt: { leave_one_out: { rmse: 0.3 } } }) }, season, 100);
    const half = observedError({ settings, manifest: record({ referenceEt: { leave_one_out: { rmse: 0.15 } } }) }, season, 100);
    expect(checked.from).toBe('leave-one-out of the run');
    near(checked.error.deviation / half.error.deviation, 2, 1e-9);
    expect(checked.error.persistence).toBe(plain.error.persistence);
    const kriged = {
      ...season,
      parcels: season.parcels.map((parcel) => ({
        ...parcel,
        series: { referenceEt: { weights: parcel.weights, gradient: 0, variance: 0.09 } },
      })),
    };
    near(observedError({ settings, manifest: record({}) }, kriged, 100).error.deviation / checked.error.deviation, 1, 1e-9);
  });

  it('is taken as stated for a grid', () => {
    expect(observedError({ settings, manifest: { interpolation: { source: 'grid', series: {} } } }, season, 100).error).toMatchObject({
      deviation: 0.1,
    });
  });
});
