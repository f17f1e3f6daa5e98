/**
 * ASCE-EWRI (2005), The ASCE Standardized Reference Evapotranspiration Equation. The report's text was not at hand: constants and the station
 * of its Appendix C are recalled, not re-read. The constants are confirmed by their own derivation, Cd = rs · u2 / ra, from the resistances of
 * the two surfaces with the equations of FAO-56 (Eq 4). The Appendix C rows are not a certified check.
 */
import { describe, expect, test } from 'vitest';
import {
  AIR_SPECIFIC_HEAT,
  LATENT_HEAT,
  STEFAN_BOLTZMANN_DAY_FAO56,
  STEFAN_BOLTZMANN_HOUR_FAO56,
  STEFAN_BOLTZMANN_SI,
  VAPOUR_WEIGHT_RATIO,
} from '../../lib/base/constants.ts';
import type { WorkingStep } from '../../lib/base/working.ts';
import { dailyConstants } from '../../lib/energy/combination.ts';
import { saturationVapourPressure } from '../../lib/energy/humidity.ts';
import { cloudFactor, relativeShortwave } from '../../lib/energy/radiation.ts';
import { referenceEtDay } from '../../lib/energy/reference-day.ts';
import { hourlyConstants, referenceEtHour, referenceEtHours } from '../../lib/energy/reference-hour.ts';
import { aerodynamicConstant } from '../../lib/energy/resistance.ts';
import { windSpeedAt2m } from '../../lib/energy/wind.ts';
import { validation } from '../support/validation.ts';

const check = validation(import.meta.url, {
  title: 'Standardized reference ET: constants, their derivation, station of Appendix C',
  source: 'ASCE-EWRI (2005), The ASCE Standardized Reference Evapotranspiration Equation',
  provenance: 'recalled',
});

const short = aerodynamicConstant({ cropHeight: 0.12, windHeight: 2, humidityHeight: 2 });
/** The tall surface is seen from sensors over clipped grass, so that its displacement height is that of the grass (recalled). */
const tall = aerodynamicConstant({ cropHeight: 0.5, windHeight: 2, humidityHeight: 2, coverHeight: 0.12 });

const [daily, dailyTall] = [dailyConstants('asce2005', 'short'), dailyConstants('asce2005', 'tall')];
const [hourly, hourlyTall] = [hourlyConstants('asce2005', 'short'), hourlyConstants('asce2005', 'tall')];

describe('constants of Table 1 (recalled) against their derivation', () => {
  test('aerodynamic constants: ra u2 = 208 short, 118 tall', () => {
    check.held(short, 208, 0.5);
    check.held(tall, 118, 0.5);
  });
  const rows: [name: string, constant: number, recalled: number, resistance: number, aerodynamic: number][] = [
    ['daily short, rs 70', daily.denominator, 0.34, 70, short],
    ['daily tall, rs 45', dailyTall.denominator, 0.38, 45, tall],
    ['hourly day short, rs 50', hourly.denominatorDay, 0.24, 50, short],
    ['hourly day tall, rs 30', hourlyTall.denominatorDay, 0.25, 30, tall],
    ['hourly night short, rs 200', hourly.denominatorNight, 0.96, 200, short],
    ['hourly night tall, rs 200', hourlyTall.denominatorNight, 1.7, 200, tall],
  ];
  test.each(rows)('Cd %s', (_name, constant, recalled, resistance, aerodynamic) => {
    expect(constant).toBe(recalled);
    expect(Math.abs(constant - resistance / aerodynamic)).toBeLessThan(0.006);
  });
  const numerators: [name: string, constant: number, seconds: number, aerodynamic: number, step: number][] = [
    ['daily short 900', daily.numerator, 86400, short, 10],
    ['daily tall 1600', dailyTall.numerator, 86400, tall, 100],
    ['hourly short 37', hourly.numerator, 3600, short, 1],
    ['hourly tall 66', hourlyTall.numerator, 3600, tall, 1],
  ];
  // Cn = seconds · ρ cp (T + 273) / (γ λ ra u2) with ρ = P / (1.01 · 0.287 (T + 273)) and γ = cp P / (ε λ): FAO-56, derivation of Eq 6
  test.each(numerators)('Cn %s', (_name, constant, seconds, aerodynamic, step) => {
    const gammaPerPressure = AIR_SPECIFIC_HEAT / (VAPOUR_WEIGHT_RATIO * LATENT_HEAT);
    const derived = (seconds * AIR_SPECIFIC_HEAT) / (1.01 * 0.287 * aerodynamic * gammaPerPressure * LATENT_HEAT);
    check.held(constant, derived, step);
  });
  test('cloud factor within 0.05 … 1', () => {
    expect(cloudFactor(relativeShortwave(1, 30, daily.lowestRelativeShortwave))).toBeCloseTo(0.055, 12);
    expect(cloudFactor(relativeShortwave(40, 30, daily.lowestRelativeShortwave))).toBeCloseTo(1, 12);
  });
  test('soil heat: 0.1 and 0.5 of Rn short, 0.04 and 0.2 tall', () => {
    expect(hourly.soilHeatShare).toEqual({ day: 0.1, night: 0.5 });
    expect(hourlyTall.soilHeatShare).toEqual({ day: 0.04, night: 0.2 });
  });
  const perDay = (STEFAN_BOLTZMANN_SI * 86400) / 1e6;
  const sigmas: [name: string, constant: number, perPeriod: number][] = [
    ['FAO-56 daily 4.903e-9', STEFAN_BOLTZMANN_DAY_FAO56, perDay],
    ['FAO-56 hourly 2.043e-10', STEFAN_BOLTZMANN_HOUR_FAO56, perDay / 24],
    ['2005 daily 4.901e-9', daily.stefanBoltzmann, perDay],
    ['2005 hourly 2.042e-10', hourly.stefanBoltzmann, perDay / 24],
  ];
  test.each(sigmas)('σ %s lies within 0.1 %% of the CODATA 2018 constant', (_name, constant, perPeriod) => {
    check.held(constant / perPeriod, 1, 0.001);
  });
  test('FAO-56 has no tall surface', () => {
    expect(() => dailyConstants('fao56', 'tall')).toThrow(/use method "asce2005"/);
    expect(() => hourlyConstants('fao56', 'tall')).toThrow(/use method "asce2005"/);
  });
});

/** date, J, Tmax, Tmin, ea, Rs, uz at 3 m, short, tall: results recomputed independently from the recalled equation */
const GREELEY: [date: string, number, number, number, number, number, number, short: number, tall: number][] = [
  ['1 July 2000', 183, 32.4, 10.9, 1.27, 22.4, 1.94, 5.69, 7.32],
  ['2 July 2000', 184, 33.6, 12.2, 1.19, 26.8, 2.14, 6.71, 8.68],
  ['3 July 2000', 185, 32.6, 14.8, 1.4, 23.3, 2.06, 5.98, 7.65],
  ['4 July 2000', 186, 33.8, 11.8, 1.18, 29.0, 1.97, 6.86, 8.72],
  ['5 July 2000', 187, 32.7, 15.9, 1.59, 27.9, 2.98, 7.05, 9.09],
];

function greeley(surface: 'short' | 'tall', row: (typeof GREELEY)[number], trace: WorkingStep[] | null = null): number {
  const [, dayOfYear, airTemperatureMax, airTemperatureMin, actualVapourPressure, solarRadiation, wind] = row;
  const input = {
    method: 'asce2005',
    surface,
    dayOfYear,
    latitude: 40.41,
    elevation: 1462.4,
    airTemperatureMax,
    airTemperatureMin,
    actualVapourPressure,
    solarRadiation,
    windSpeed2m: windSpeedAt2m(wind, 3),
  } as const;
  return referenceEtDay(input, trace && { step: (step) => trace.push(step) });
}

describe('Greeley, Colorado, Appendix C (recalled and recomputed, ± 0.05 mm d⁻¹, not certified)', () => {
  test.each(GREELEY)('%s', (...row) => {
    check.held(greeley('short', row), row[7], 0.05);
    check.held(greeley('tall', row), row[8], 0.05);
  });
  test('1 July as recalled from the report: 5.71 short, 7.34 tall', () => {
    check.held(greeley('short', GREELEY[0]), 5.71, 0.05);
    check.held(greeley('tall', GREELEY[0]), 7.34, 0.05);
  });
  test('the working names the tall result and marks recalled equation numbers', () => {
    const steps: WorkingStep[] = [];
    const result = greeley('tall', GREELEY[0], steps);
    expect(steps.at(-1)).toMatchObject({ symbol: 'ETr', result });
    expect(steps.filter((step) => step.source.startsWith('ASCE')).every((step) => step.source.includes('recalled'))).toBe(true);
  });
});

describe('FAO-56 Example 19 with the 2005 constants (recomputed, mm h⁻¹)', () => {
  const place = (surface: 'short' | 'tall') =>
    ({
      method: 'asce2005',
      surface,
      dayOfYear: 274,
      latitude: 16 + 13 / 60,
      longitude: -16.25,
      zoneLongitude: -15,
      elevation: 8,
      periodLength: 1,
    }) as const;
  const day = {
    clockHour: 14.5,
    airTemperature: 38,
    actualVapourPressure: 0.52 * saturationVapourPressure(38),
    solarRadiation: 2.45,
    windSpeed2m: 3.3,
    carriedRelativeShortwave: Number.NaN,
  };
  const night = {
    clockHour: 2.5,
    airTemperature: 28,
    actualVapourPressure: 0.9 * saturationVapourPressure(28),
    solarRadiation: 0,
    windSpeed2m: 1.9,
    carriedRelativeShortwave: 0.8,
  };
  const rows: [name: string, value: number, expected: number, tolerance: number][] = [
    ['short, day 0.656', referenceEtHour(place('short'), day).referenceEt, 0.656, 0.0007],
    ['tall, day 0.822', referenceEtHour(place('tall'), day).referenceEt, 0.822, 0.0009],
    ['short, night 0.0035', referenceEtHour(place('short'), night).referenceEt, 0.0035, 0.0001],
    ['tall, night 0.0067', referenceEtHour(place('tall'), night).referenceEt, 0.0067, 0.0001],
  ];
  test.each(rows)('%s', (_name, value, expected, tolerance) => {
    check.held(value, expected, tolerance);
  });
  test('through the hours of a day the night takes Rs/Rso of the last high sun', () => {
    const [afternoon, evening] = referenceEtHours(place('short'), [day, { ...night, clockHour: 21.5, carriedRelativeShortwave: 0.5 }]);
    check.held(afternoon.relativeShortwave, 0.922, 0.0005); // printed in Example 19
    expect(evening.relativeShortwave).toBe(afternoon.relativeShortwave);
  });
  // By hand, sin β = sin φ sin δ + cos φ cos δ cos ω with the printed δ −0.0753: at 16:30 ω 1.206 and β 0.33; at 17:00 ω 1.337 and β 0.20.
  const late: [name: string, clockHour: number, expected: number][] = [
    ['16:30, sun at 0.33 rad: the hour has a ratio of its own, held at 0.3', 16.5, 0.3],
    ['17:00, sun at 0.20 rad: the ratio is carried', 17, 0.8],
  ];
  test.each(late)('%s', (_name, clockHour, expected) => {
    const hour = { ...day, clockHour, solarRadiation: 0.1, carriedRelativeShortwave: 0.8 };
    expect(referenceEtHour(place('short'), hour).relativeShortwave).toBe(expected);
  });
});

describe('lowest wind', () => {
  const calm = (method: 'fao56' | 'asce2005', windSpeed2m: number) =>
    referenceEtDay(
      {
        method,
        surface: 'short',
        dayOfYear: 187,
        latitude: 50.8,
        elevation: 100,
        airTemperatureMax: 21.5,
        airTemperatureMin: 12.3,
        actualVapourPressure: 1.409,
        solarRadiation: 22.07,
        windSpeed2m,
      },
      null,
    );
  test('FAO-56 advises u2 of at least 0.5 m s⁻¹', () => {
    expect(calm('fao56', 0.1)).toBe(calm('fao56', 0.5));
    expect(calm('fao56', 0.6)).not.toBe(calm('fao56', 0.5));
  });
  test('the 2005 equation takes the wind as it is', () => {
    expect(calm('asce2005', 0.1)).not.toBe(calm('asce2005', 0.5));
  });
});
