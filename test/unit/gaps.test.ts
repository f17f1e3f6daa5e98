/**
 * Gaps in temperature: what is bridged, what takes the normal of the day, what stays missing. Expected values are worked by hand.
 */
import { describe, expect, test } from 'vitest';
import { dayNumber } from '../../lib/base/civil-date.ts';
import { normalOfDay } from '../../lib/weather/gaps.ts';
import { fillGaps } from '../../lib/weather/gaps-fill.ts';
import { FALLBACK, type Site, type SiteObservations } from '../../lib/weather/variable.ts';

const NONE = Number.NaN;
const IN_TIME = FALLBACK.temperatureFilledInTime;
const NORMAL = FALLBACK.temperatureFromNormal;

function site(code: string): Site {
  return { code, name: `Site ${code} (invented)`, longitude: -119, latitude: 36, elevation: 100, windHeight: 2 };
}

function observe(startDate: string, max: number[], min: number[], siteCount = 1): SiteObservations {
  const sites = Array.from({ length: siteCount }, (_, i) => site(`S${i}`));
  const values = { air_temperature_max_c: Float64Array.from(max), air_temperature_min_c: Float64Array.from(min) };
  return { sites, startDate, dayCount: max.length / siteCount, values };
}

/** The extremes of a record after filling, with the bits of each day. */
function fillTemperatures(observations: SiteObservations) {
  const { values, flags } = fillGaps(observations);
  return {
    airTemperatureMax: values.air_temperature_max_c as Float64Array,
    airTemperatureMin: values.air_temperature_min_c as Float64Array,
    flags,
  };
}

describe('short gaps inside the record', () => {
  test('three days between 20 and 28 °C lie on the straight line 22, 24, 26', () => {
    const filled = fillTemperatures(observe('2024-06-01', [20, NONE, NONE, NONE, 28], [10, 10, 10, 10, 10]));
    expect([...filled.airTemperatureMax]).toEqual([20, 22, 24, 26, 28]);
    expect([...filled.flags]).toEqual([0, IN_TIME, IN_TIME, IN_TIME, 0]);
  });
  test('five days are bridged, six are not', () => {
    const five = fillTemperatures(observe('2024-06-01', [20, ...Array(5).fill(NONE), 26], Array(7).fill(10)));
    expect([...five.airTemperatureMax]).toEqual([20, 21, 22, 23, 24, 25, 26]);
    const six = fillTemperatures(observe('2024-06-01', [20, ...Array(6).fill(NONE), 27], Array(8).fill(10)));
    expect(six.airTemperatureMax.slice(1, 7).every(Number.isNaN)).toBe(true);
    expect(six.flags.every((bits) => bits === 0)).toBe(true);
  });
  test('a gap at the edge of the record has one neighbour only and is not bridged', () => {
    const filled = fillTemperatures(observe('2024-06-01', [NONE, 20, 21, NONE], [10, 10, 10, 10]));
    expect([...filled.airTemperatureMax]).toEqual([NONE, 20, 21, NONE]);
  });
  test('each extreme is filled by itself', () => {
    const filled = fillTemperatures(observe('2024-06-01', [20, 25, 28], [10, NONE, 14]));
    expect([...filled.airTemperatureMax]).toEqual([20, 25, 28]);
    expect([...filled.airTemperatureMin]).toEqual([10, 12, 14]);
    expect([...filled.flags]).toEqual([0, IN_TIME, 0]);
  });
  test('one site never borrows from the next', () => {
    const filled = fillTemperatures(observe('2024-06-01', [20, 21, NONE, NONE, 30, 31], Array(6).fill(5), 2));
    expect([...filled.airTemperatureMax]).toEqual([20, 21, NONE, NONE, 30, 31]);
  });
  test('the observations stay as they came', () => {
    const observations = observe('2024-06-01', [20, NONE, 24], [10, 11, 12]);
    fillTemperatures(observations);
    expect([...(observations.values.air_temperature_max_c ?? [])]).toEqual([20, NONE, 24]);
  });
  test('a filled maximum below the measured minimum is withdrawn', () => {
    const filled = fillTemperatures(observe('2024-06-01', [10, NONE, 12], [5, 18, 6]));
    expect(filled.airTemperatureMax[1]).toBeNaN();
    expect(filled.airTemperatureMin[1]).toBe(18);
    expect(filled.flags[1]).toBe(0);
  });
});

describe('long gaps take the normal of the day', () => {
  /** Two years of a record: 2022 warm by the day of the month, 2023 with June missing. */
  const start = '2022-01-01';
  const dayCount = 730;
  const offset = (date: string) => dayNumber(date) - dayNumber(start);

  function twoYears(): SiteObservations {
    const max = Array.from({ length: dayCount }, (_, i) => (i < 365 ? i / 10 : 99));
    for (let i = offset('2023-06-01'); i <= offset('2023-06-30'); i++) max[i] = NONE;
    return observe(
      start,
      max,
      max.map(() => -5),
    );
  }

  test('the mean of ± 7 days around the same date of the other year; of a straight line, its middle', () => {
    const filled = fillTemperatures(twoYears());
    const day = offset('2023-06-15');
    expect(filled.airTemperatureMax[day]).toBeCloseTo(offset('2022-06-15') / 10, 12);
    expect(filled.flags[day]).toBe(NORMAL);
  });
  test('without another year it stays missing', () => {
    const filled = fillTemperatures(observe('2024-06-01', [20, ...Array(9).fill(NONE), 27], Array(11).fill(10)));
    expect(filled.airTemperatureMax.slice(1, 10).every(Number.isNaN)).toBe(true);
  });
  test('missing days of the other year are left out of the mean', () => {
    const observed = new Float64Array(dayCount).fill(NONE);
    observed[offset('2022-06-10')] = 20;
    observed[offset('2022-06-22')] = 26;
    observed[offset('2022-06-23')] = 1000; // eight days away
    expect(normalOfDay(observed, dayNumber(start), offset('2023-06-15'))).toBe(23);
  });
  test('29 February and the turn of the year find their neighbours', () => {
    const first = dayNumber('2023-01-01');
    const observed = new Float64Array(730).fill(NONE);
    observed[dayNumber('2023-03-01') - first] = 12;
    expect(normalOfDay(observed, first, dayNumber('2024-02-29') - first)).toBe(12);
    const turn = new Float64Array(730).fill(NONE);
    turn[dayNumber('2023-12-30') - first] = 3;
    expect(normalOfDay(turn, first, dayNumber('2024-01-02') - first)).toBeNaN();
    expect(normalOfDay(turn, first, dayNumber('2024-12-30') - first)).toBe(3);
  });
});
