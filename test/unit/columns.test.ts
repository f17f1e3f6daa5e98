import { describe, expect, test } from 'vitest';
import { columnName } from '../../lib/files/column-name.ts';
import { findUnit, isUnitText, unitConverter } from '../../lib/files/unit.ts';
import { guessUnit, spreadOf } from '../../lib/files/unit-guess.ts';
import { weatherRoleOf, windHeightOf } from '../../lib/files/weather-column.ts';

/** header → role, unit, hour */
const HEADERS: [string, string | null, string | null, number | null][] = [
  ['tmax_f', 'air_temperature_max_c', '°F', null],
  ['Tmax (°F)', 'air_temperature_max_c', '°F', null],
  ['t_daily_max', 'air_temperature_max_c', null, null],
  ['MinTemp', 'air_temperature_min_c', null, null],
  ['air_temperature_mean_c', 'air_temperature_mean_c', '°C', null],
  ['Temp9am', 'air_temperature_at_hour_c', null, 9],
  ['Humidity3pm', 'relative_humidity_at_hour_pct', null, 15],
  ['WindSpeed9am', 'wind_speed_at_hour_m_s', null, 9],
  ['Rainfall', 'precipitation_mm', null, null],
  ['Rain, mm', 'precipitation_mm', 'mm', null],
  ['precip_in', 'precipitation_mm', 'in', null],
  ['p_daily_calc', 'precipitation_mm', null, null],
  ['Sunshine', 'sunshine_duration_h', null, null],
  ['solarad_daily', 'solar_radiation_mj_m2_d', null, null],
  ['Solar radiation [W m⁻²]', 'solar_radiation_mj_m2_d', 'W/m²', null],
  ['rs_mj_m2_d', 'solar_radiation_mj_m2_d', 'MJ/m²/d', null],
  ['rh_daily_max', 'relative_humidity_max_pct', null, null],
  ['RHmin (%)', 'relative_humidity_min_pct', '%', null],
  ['rh_tmax', 'relative_humidity_min_pct', null, null],
  ['wind_speed_m_s', 'wind_speed_m_s', 'm/s', null],
  ['Wind Run (km/day)', 'wind_speed_m_s', 'km/d', null],
  ['vp_deficit', 'vapour_pressure_deficit_kpa', null, null],
  ['Vapor Pressure (hPa)', 'vapour_pressure_kpa', 'hPa', null],
  ['STATION', 'site', null, null],
  ['lst_date', 'date', null, null],
  ['DoY', 'day_of_year', null, null],
  ['sur_temp_daily_max', null, null, null],
  ['soil_temp_5_daily', null, null, null],
  ['WindGustSpeed', null, null, null],
  ['max_temp_source', null, null, null],
  ['Pressure9am', null, null, null],
  ['mslp', null, null, null],
];

describe('weatherRoleOf', () => {
  for (const [header, role, unit, hour] of HEADERS) {
    test(header, () => {
      const named = weatherRoleOf(header, false);
      expect(named?.role ?? null).toBe(role);
      expect(named?.unit ?? null).toBe(unit);
      expect(named?.hour ?? null).toBe(hour);
    });
  }

  test('TA_F is filled in a FLUXNET table and Fahrenheit elsewhere', () => {
    expect(weatherRoleOf('TA_F', true)).toMatchObject({ role: 'air_temperature_mean_c', unit: '°C' });
    expect(weatherRoleOf('TA_F', false)).toMatchObject({ role: 'air_temperature_mean_c', unit: '°F' });
  });
});

test('a header is taken apart', () => {
  expect(columnName('Humidity3pm')).toEqual({ words: ['humidity'], unitText: null, hour: 15 });
  expect(columnName('temp 12am').hour).toBe(0);
});

test('a wind header may name its height', () => {
  expect([windHeightOf('u2'), windHeightOf('WS10m'), windHeightOf('wind')]).toEqual([2, 10, null]);
});

/** value, unit, value inside. Source: NIST SP 811 Appendix B; FAO-56 Table 3 (1 cal cm⁻² = 0.041868 MJ m⁻², 1 W m⁻² = 0.0864 MJ m⁻² d⁻¹). */
const CONVERSIONS: [Parameters<typeof unitConverter>[0], string, number, number][] = [
  ['temperature', '°F', 212, 100],
  ['temperature', 'K', 273.15, 0],
  ['pressure', 'mbar', 1013.25, 101.325],
  ['pressure', 'Pa', 101325, 101.325],
  ['pressure', 'mmHg', 760, 101.325],
  ['pressure', 'inHg', 29.92126, 101.325],
  ['share', 'fraction', 0.55, 55],
  ['speed', 'km/h', 36, 10],
  ['speed', 'mph', 100, 44.704],
  ['speed', 'knots', 1, 0.514444],
  ['speed', 'km/d', 86.4, 1],
  ['radiation', 'W/m²', 100, 8.64],
  ['radiation', 'ly', 100, 4.1868],
  ['radiation', 'kWh/m2', 1, 3.6],
  ['radiation', 'J cm-2', 2000, 20],
  ['depth', 'in', 1, 25.4],
  ['depth', 'kg m-2', 3, 3],
  ['duration', 'min', 90, 1.5],
  ['length', 'ft', 1000, 304.8],
  ['flow', 'cfs', 1, 0.028316846592],
  ['flow', 'l_s', 250, 0.25],
];

describe('units', () => {
  for (const [kind, unit, value, inside] of CONVERSIONS) {
    test(`${value} ${unit}`, () => {
      const convert = unitConverter(kind, unit);
      expect(convert?.(value)).toBeCloseTo(inside, 3);
    });
  }

  test('spellings', () => {
    expect(findUnit('radiation', 'MJ m⁻² d⁻¹')).toBe('MJ/m²/d');
    expect(findUnit('temperature', 'Deg. F')).toBe('°F');
    expect(findUnit('speed', 'furlongs')).toBeNull();
    expect([isUnitText('°C'), isUnitText('Modesto')]).toEqual([true, false]);
  });
});

describe('units told from values', () => {
  const guess = (role: Parameters<typeof guessUnit>[0], kind: Parameters<typeof guessUnit>[1], values: number[], us = false) =>
    guessUnit(role, kind, spreadOf(values), us).unit;
  test('each', () => {
    expect(guess('air_temperature_max_c', 'temperature', [290, 301, 288])).toBe('K');
    expect(guess('air_temperature_max_c', 'temperature', [55, 81, 98, 102])).toBe('°F');
    expect(guess('air_temperature_max_c', 'temperature', [5, 21, 41, -9999])).toBe('°C');
    expect(guess('relative_humidity_mean_pct', 'share', [0.2, 0.6, 1])).toBe('fraction');
    expect(guess('pressure_kpa', 'pressure', [955, 1012, 1004])).toBe('hPa');
    expect(guess('pressure_kpa', 'pressure', [95.5, 101.2])).toBe('kPa');
    expect(guess('vapour_pressure_kpa', 'pressure', [11.6, 11.5, 9])).toBe('hPa');
    expect(guess('solar_radiation_mj_m2_d', 'radiation', [12, 30.1])).toBe('MJ/m²/d');
    expect(guess('solar_radiation_mj_m2_d', 'radiation', [120, 340])).toBe('W/m²');
    expect(guess('wind_speed_m_s', 'speed', [15, 28, 20])).toBe('km/h');
    expect(guess('sunshine_duration_h', 'duration', [0, 500])).toBe('min');
    expect(guess('precipitation_mm', 'depth', [0, 1.25], true)).toBe('in');
  });
});
