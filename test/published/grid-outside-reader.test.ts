/**
 * Days of gridded weather against an outside reader: python3-xarray 2023.01.0 with pandas and cftime 1.6.2 (Debian 12), which was given the
 * same series, written here as formulas. Sums of W m⁻² are times 3600 s.
 */
import { describe, expect, it } from 'vitest';
import { isoDate } from '../../lib/base/civil-date.ts';
import { civilSeconds } from '../../lib/files/grid-calendar.ts';
import { type FakeVariable, fakeArrays, gridAxes, gridField, readFakes, stagedValue } from '../support/fake-arrays.ts';

const HOURS = 120;
const axes = (times: readonly number[], units: string) => gridAxes([40, 39], [-4, -3], times, { units, calendar: 'standard' });
const CELL = 'r1c0';

/** A field that varies in time alone. */
function series(count: number, attributes: Record<string, string>, value: (hour: number) => number): FakeVariable {
  return gridField([count, 2, 2], attributes, (hour) => value(hour));
}

describe('hours of UTC → days of Europe/Madrid, over the start of summer time on 31 March 2024 (a day of 23 hours)', () => {
  const times = Array.from({ length: HOURS }, (_, hour) => hour);
  const file = fakeArrays({
    ...axes(times, 'hours since 2024-03-29 00:00:00'),
    t2m: series(
      HOURS,
      { units: 'degC', long_name: '2 metre temperature' },
      (h) => 15 + 8 * Math.sin((2 * Math.PI * (h - 9)) / 24) + 0.05 * h,
    ),
    rsds: series(HOURS, { units: 'W m-2' }, (h) => Math.max(0, Math.sin((2 * Math.PI * (h - 6)) / 24)) * 700),
    pr: series(HOURS, { units: 'mm' }, (h) => (h % 7 === 0 ? 0.3 : 0)),
    u10: series(HOURS, { units: 'm s**-1' }, (h) => 3 * Math.cos(h / 5)),
    v10: series(HOURS, { units: 'm s**-1' }, (h) => 2 * Math.sin(h / 7)),
  });
  const read = readFakes({ 'madrid.nc': file }, {}, { timeZone: 'Europe/Madrid' });

  it.each([
    ['air_temperature_mean_c', '2024-03-29', 15.723913],
    ['air_temperature_mean_c', '2024-03-31', 17.990024],
    ['air_temperature_max_c', '2024-03-31', 26.15],
    ['air_temperature_min_c', '2024-03-31', 9.55],
    ['air_temperature_mean_c', '2024-04-02', 20.275],
    ['solar_radiation_mj_m2_d', '2024-03-29', 19.1413],
    ['solar_radiation_mj_m2_d', '2024-03-31', 19.1413],
    ['precipitation_mm', '2024-03-29', 1.2],
    ['precipitation_mm', '2024-03-30', 0.9],
    ['precipitation_mm', '2024-03-31', 1.2],
    ['wind_speed_m_s', '2024-03-30', 2.274312],
    ['wind_speed_m_s', '2024-03-31', 2.553883],
  ])('%s on %s is %d', async (variable, date, expected) => {
    expect(stagedValue(await read, variable, CELL, date)).toBeCloseTo(expected, 4);
  });

  it('leaves out the day that the file only touches', async () => {
    expect(stagedValue(await read, 'air_temperature_mean_c', CELL, '2024-04-03')).toBeNaN();
  });
});

describe('three-hourly mean fluxes → days of Asia/Kolkata, whose midnight cuts a step', () => {
  it.each([
    ['2024-06-02', 17.636725],
    ['2024-06-03', 18.763389],
    ['2024-06-04', 16.491608],
  ])('%s has %d MJ m⁻²', async (date, expected) => {
    const times = Array.from({ length: 32 }, (_, step) => 3 * step);
    const file = fakeArrays({
      ...axes(times, 'hours since 2024-06-01'),
      rsds: series(32, { units: 'W m-2' }, (k) => 200 + 100 * Math.sin(k)),
    });
    const reading = await readFakes({ 'kolkata.nc': file }, { stamp: 'start' }, { timeZone: 'Asia/Kolkata' });
    expect(stagedValue(reading, 'solar_radiation_mj_m2_d', CELL, date)).toBeCloseTo(expected, 4);
  });
});

describe('month sums of a flux of rain [kg m⁻² s⁻¹]', () => {
  it.each([
    ['2020-01', 31, 126.144],
    ['2020-02', 29, 120.096],
    ['2020-03', 31, 136.512],
  ])('%s', async (month, days, expected) => {
    const times = Array.from({ length: 91 }, (_, day) => day + 0.5);
    const file = fakeArrays({
      ...axes(times, 'days since 2020-01-01'),
      pr: series(91, { units: 'kg m-2 s-1', standard_name: 'precipitation_flux' }, (day) => (day % 11) * 1e-5),
    });
    const reading = await readFakes({ 'rain.nc': file });
    let sum = 0;
    for (let day = 1; day <= days; day++) sum += stagedValue(reading, 'precipitation_mm', CELL, `${month}-${String(day).padStart(2, '0')}`);
    expect(sum).toBeCloseTo(expected, 3);
  });
});

describe('calendars', () => {
  const day = (seconds: number) => isoDate(Math.floor(seconds / 86400));
  const since = (calendar: Parameters<typeof civilSeconds>[0], year: number, days: number) =>
    day(civilSeconds(calendar, { year, month: 1, day: 1, second: 0 }, Float64Array.of(days * 86400))[0]);

  it.each([
    [2001, 1, '2001-01-01'],
    [2001, 30, '2001-01-30'],
    [2001, 31, '2001-01-31'],
    [2001, 36, '2001-02-05'],
    [2001, 37, '2001-02-07'],
    [2001, 60, '2001-03-02'],
    [2001, 108, '2001-04-20'],
    [2001, 181, '2001-07-03'],
    [2001, 360, '2001-12-31'],
    [2004, 31, '2004-02-01'],
    [2004, 60, '2004-03-01'],
    [2004, 108, '2004-04-19'],
    [2004, 301, '2004-11-01'],
    [2004, 360, '2004-12-31'],
  ])('360_day %d day %d is %s (convert_calendar, align_on year)', (year, dayOfYear, expected) => {
    expect(since('360_day', year, dayOfYear - 1)).toBe(expected);
  });

  it.each([
    [2001, 59, '2001-02-28'],
    [2001, 60, '2001-03-01'],
    [2004, 60, '2004-03-01'],
    [2004, 365, '2004-12-31'],
  ])('365_day %d day %d is %s', (year, dayOfYear, expected) => {
    expect(since('365_day', year, dayOfYear - 1)).toBe(expected);
  });

  it.each([
    ['standard', 1, 730000, '1999-09-02'],
    ['365_day', 1850, 60000, '2014-05-21'],
  ] as const)('%s since year %d, %d days, is %s (cftime)', (calendar, year, days, expected) => {
    expect(since(calendar, year, days)).toBe(expected);
  });
});
