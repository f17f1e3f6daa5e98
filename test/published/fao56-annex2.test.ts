/**
 * Meteorological tables of FAO Irrigation and Drainage Paper 56 (1998), Annex 2: sample points, each within half a unit of the last printed
 * digit. Tables 2.6 and 2.7 were not readable as text: their equations on the 15th of each month, recomputed independently to one decimal,
 * stand in for them.
 */
import { describe, expect, test } from 'vitest';
import { dayNumberOf, dayOfYear } from '../../lib/base/civil-date.ts';
import { STEFAN_BOLTZMANN_DAY_FAO56 } from '../../lib/base/constants.ts';
import { atmosphericPressure, psychrometricConstant } from '../../lib/energy/air.ts';
import { saturationVapourPressure, vapourPressureSlope } from '../../lib/energy/humidity.ts';
import { blackBodyRadiation } from '../../lib/energy/radiation.ts';
import { daylightHours, solarGeometry } from '../../lib/energy/sun.ts';
import { windProfileFactor } from '../../lib/energy/wind.ts';
import { validation } from '../support/validation.ts';

const check = validation(import.meta.url, {
  title: 'Meteorological tables, Annex 2 of FAO-56',
  source: 'Allen, Pereira, Raes & Smith (1998), FAO Irrigation and Drainage Paper 56, Tables 2.1–2.9',
});

type Point = [at: number, printed: number];

/** "at:printed at:printed …" → pairs */
function points(text: string): Point[] {
  return text.split(' ').map((pair) => pair.split(':').map(Number) as Point);
}

/** Half a unit of the last printed digit, with room for the binary form of a value that lies just on it. */
function within(digits: number): number {
  return 0.5 * 10 ** -digits + 1e-9;
}

describe('Table 2.1: atmospheric pressure [kPa] by elevation [m] (Eq 7)', () => {
  // The sample prints 81.8 at 1800 m and one decimal throughout.
  const table =
    '0:101.3 250:98.4 500:95.5 750:92.7 1000:90.0 1250:87.4 1500:84.8 1800:81.8 2000:79.8 2250:77.4 2500:75.0 2750:72.7 3000:70.5 3500:66.2 4000:62.1';
  test.each(points(table))('%d m: %d kPa', (elevation, printed) => {
    check.held(atmosphericPressure(elevation), printed, within(1));
  });
});

describe('Table 2.2: psychrometric constant [kPa °C⁻¹] by elevation [m] (Eq 8)', () => {
  const table = '0:0.067 400:0.064 900:0.061 1300:0.058 1700:0.055 2100:0.052 2600:0.049 3100:0.046 3600:0.043 4000:0.041';
  test.each(points(table))('%d m: %d', (elevation, printed) => {
    check.held(psychrometricConstant(atmosphericPressure(elevation)), printed, within(3));
  });
});

describe('Table 2.3: saturation vapour pressure [kPa] by temperature [°C] (Eq 11)', () => {
  const table =
    '1:0.657 3.5:0.785 6.5:0.968 8:1.073 10:1.228 12.5:1.449 15:1.705 17.5:2.000 20:2.338 22.5:2.726 25:3.168 27.5:3.671 30:4.243 33.5:5.173 36:5.941 38:6.625 41.5:7.986 45:9.582 48.5:11.447';
  test.each(points(table))('%d °C: %d kPa', (temperature, printed) => {
    check.held(saturationVapourPressure(temperature), printed, within(3));
  });
});

describe('Table 2.4: slope of the vapour pressure curve [kPa °C⁻¹] by temperature [°C] (Eq 13)', () => {
  const table =
    '1:0.047 5:0.061 8.5:0.075 10:0.082 12.5:0.095 15:0.110 18:0.130 20:0.145 23:0.170 25:0.189 28.5:0.226 30:0.243 33.5:0.289 36:0.326 40:0.393 44:0.471 48.5:0.574';
  test.each(points(table))('%d °C: %d', (temperature, printed) => {
    check.held(vapourPressureSlope(temperature), printed, within(3));
  });
});

describe('Table 2.5: number of the day in the year', () => {
  const rows: [label: string, month: number, day: number, common: number, leap: number][] = [
    ['1 February', 2, 1, 32, 32],
    ['1 March', 3, 1, 60, 61],
    ['15 April', 4, 15, 105, 106],
    ['6 July', 7, 6, 187, 188],
    ['3 September', 9, 3, 246, 247],
    ['1 October', 10, 1, 274, 275],
    ['31 December', 12, 31, 365, 366],
  ];
  test.each(rows)('%s', (_label, month, day, common, leap) => {
    expect(dayOfYear(dayNumberOf(1998, month, day))).toBe(common);
    expect(dayOfYear(dayNumberOf(2000, month, day))).toBe(leap);
  });
});

/** Days the recomputed columns stand for: the 15th of a common year, but 16 March (J 75), on which that column was worked. */
const MID_MONTH = [15, 46, 75, 105, 135, 166, 196, 227, 258, 288, 319, 349];

type MonthRow = [latitude: number, months: string];

function monthly(rows: MonthRow[], quantity: (latitude: number, dayOfYear: number) => number, tolerance: number) {
  test.each(rows)('latitude %d', (latitude, months) => {
    const expected = months.split(' ').map(Number);
    const ours = MID_MONTH.map((day) => quantity(latitude, day));
    expect(Math.max(...ours.map((value, i) => Math.abs(value - expected[i])))).toBeLessThanOrEqual(tolerance);
  });
}

function radiationAt(latitude: number, day: number): number {
  return solarGeometry(latitude).extraterrestrialRadiation[day];
}

describe('Table 2.6: extraterrestrial radiation [MJ m⁻² d⁻¹], Eq 21 on the 15th, recomputed', () => {
  monthly(
    [
      [60, '3.3 8.3 16.9 27.5 36.7 41.2 39.1 31.3 20.5 10.8 4.4 2.2'],
      [45, '11.9 17.5 25.1 33.2 39.2 41.9 40.6 35.6 27.9 19.7 13.2 10.5'],
      [40, '15.0 20.4 27.5 34.7 39.7 41.8 40.8 36.7 29.9 22.5 16.3 13.6'],
      [20, '26.8 30.6 34.8 37.9 39.3 39.5 39.3 38.3 35.7 31.7 27.6 25.6'],
      [0, '36.2 37.4 37.9 36.8 34.8 33.4 33.9 35.6 37.2 37.3 36.3 35.6'],
      [-20, '41.9 40.0 36.4 31.3 26.6 24.1 25.0 29.0 34.2 38.6 41.2 42.1'],
      [-35, '43.4 39.0 32.4 24.8 18.6 15.7 16.8 21.8 29.3 36.6 42.0 44.3'],
      [-50, '42.7 35.6 26.2 16.7 9.9 7.1 8.2 13.4 22.3 32.2 40.6 44.5'],
    ],
    radiationAt,
    within(1),
  );
});

describe('Table 2.6, equator, as printed (recalled, not re-read; printed values lie within 0.1 of the equation)', () => {
  monthly([[0, '36.2 37.5 37.9 36.8 34.8 33.4 33.9 35.7 37.2 37.4 36.3 35.6']], radiationAt, 0.1);
});

describe('Table 2.7: daylight hours, Eq 34 on the 15th, recomputed', () => {
  monthly(
    [
      [60, '6.4 8.8 11.5 14.2 16.8 18.4 17.7 15.3 12.5 9.7 7.1 5.6'],
      [45, '9.0 10.2 11.7 13.3 14.7 15.4 15.1 13.9 12.3 10.7 9.3 8.6'],
      [20, '10.9 11.3 11.9 12.5 13.0 13.2 13.1 12.7 12.1 11.5 11.0 10.8'],
      [-35, '14.1 13.3 12.2 11.1 10.2 9.7 9.9 10.7 11.8 12.9 13.9 14.3'],
    ],
    (latitude, day) => daylightHours(solarGeometry(latitude).sunsetAngle[day]),
    within(1),
  );
});

describe('Table 2.8: σT⁴ [MJ m⁻² d⁻¹] by temperature [°C] (Eq 39)', () => {
  const table =
    '1:27.70 6.5:29.99 10:31.52 15:33.81 18.5:35.48 21.5:36.96 25:38.75 29.5:41.14 33:43.08 36.5:45.08 40:47.15 44:49.61 48.5:52.49';
  test.each(points(table))('%d °C: %d', (temperature, printed) => {
    check.held(blackBodyRadiation(temperature, STEFAN_BOLTZMANN_DAY_FAO56), printed, within(2));
  });
});

describe('Table 2.9: factor to wind at 2 m by height [m] (Eq 47)', () => {
  const table =
    '1:1.178 1.2:1.125 1.4:1.084 1.6:1.051 1.8:1.023 2:1.000 2.2:0.980 2.8:0.933 3:0.921 3.6:0.889 4:0.872 5:0.838 6:0.812 7.5:0.783 9:0.760 10:0.748 10.5:0.742';
  test.each(points(table))('%d m: %d', (height, printed) => {
    check.held(windProfileFactor(height), printed, within(3));
  });
});
