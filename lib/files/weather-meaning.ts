/**
 * What the numbers of a weather column become and where they must lie: values of a day in a daily table; in a table with several readings a
 * day, states and rates at the reading, or amounts of the time it covers.
 */
import { HOUR_VARIABLES, WEATHER_VARIABLES, type WeatherVariable } from '../weather/variable.ts';
import { insideUnit, unitConverter } from './unit.ts';
import type { Spread } from './unit-guess.ts';
import { ROLE_KIND, type WeatherValueRole } from './weather-column.ts';

/** Conversion and limits of a column; limits in `limitUnit`. */
export interface ColumnMeaning {
  readonly convert: ((value: number) => number) | null;
  readonly low: number;
  readonly high: number;
  readonly limitUnit: string;
}

interface Limits {
  readonly low: number;
  readonly high: number;
}

const HOURS_PER_DAY = 24;
const MINUTES_PER_HOUR = 60;
const MINUTES_PER_DAY = 1440;
const RADIATION_RATE = 'MJ m⁻² h⁻¹';

/** Limits of roles that are no daily variable. */
const EXTRA_LIMITS: Partial<Record<WeatherValueRole, Limits>> = {
  vapour_pressure_deficit_kpa: { low: 0, high: 12 },
  relative_humidity_at_hour_pct: { low: 0, high: 105 },
  air_temperature_at_hour_c: { low: -90, high: 60 },
  wind_speed_at_hour_m_s: { low: 0, high: 60 },
};

/**
 * Limits of single readings. Radiation of a minute may exceed that of a clear sky where clouds reflect (WMO-No. 8, recalled): 2,000 W m⁻².
 * Rain of an hour: the limit of the hour holds for every shorter time too.
 */
const READING_LIMITS: Partial<Record<WeatherValueRole, Limits>> = {
  air_temperature_max_c: HOUR_VARIABLES.hour_air_temperature_c,
  air_temperature_min_c: HOUR_VARIABLES.hour_air_temperature_c,
  air_temperature_mean_c: HOUR_VARIABLES.hour_air_temperature_c,
  wind_speed_m_s: HOUR_VARIABLES.hour_wind_speed_m_s,
  precipitation_mm: HOUR_VARIABLES.hour_precipitation_mm,
  solar_radiation_mj_m2_d: { low: HOUR_VARIABLES.hour_solar_radiation_mj_m2.low, high: 7.2 },
  net_radiation_mj_m2_d: { low: -2, high: 5 },
  reference_et_given_mm: { low: -0.5, high: 3 },
};

/** What a column of a daily table means. */
export function dayMeaning(role: WeatherValueRole, unit: string): ColumnMeaning {
  const limits = EXTRA_LIMITS[role] ?? WEATHER_VARIABLES[role as WeatherVariable];
  return { convert: conversion(role, unit), low: limits.low, high: limits.high, limitUnit: insideUnit(ROLE_KIND[role]) };
}

/** null where the unit is the inside one. */
function conversion(role: WeatherValueRole, unit: string): ((value: number) => number) | null {
  const kind = ROLE_KIND[role];
  return unit === insideUnit(kind) ? null : unitConverter(kind, unit);
}

/**
 * What a column means where a reading covers `step` minutes: radiation becomes a rate per hour (from W m⁻², or from the energy of the step),
 * depth and sunshine are amounts of the step, all else is as in a daily table.
 */
export function readingMeaning(role: WeatherValueRole, unit: string, step: number): ColumnMeaning {
  const day = dayMeaning(role, unit);
  const limits = READING_LIMITS[role] ?? day;
  if (ROLE_KIND[role] === 'radiation') {
    const perDay = day.convert ?? ((value: number) => value);
    const share = unit === 'W/m²' ? 1 / HOURS_PER_DAY : MINUTES_PER_HOUR / step;
    return { convert: (value) => perDay(value) * share, low: limits.low, high: limits.high, limitUnit: RADIATION_RATE };
  }
  if (unit === 'kg/m²/s') {
    const perDay = day.convert ?? ((value: number) => value);
    return { ...day, ...pick(limits), convert: (value) => (perDay(value) * step) / MINUTES_PER_DAY };
  }
  if (role === 'sunshine_duration_h') return { ...day, low: 0, high: (step / MINUTES_PER_HOUR) * 1.05 };
  return { ...day, ...pick(limits) };
}

function pick({ low, high }: Limits): Limits {
  return { low, high };
}

/** Unit of a column of readings, where it is told from other values than in a daily table; null where it is not. */
export function guessReadingUnit(role: WeatherValueRole, spread: Spread): { unit: string; confidence: number; reason: string } | null {
  if (ROLE_KIND[role] !== 'radiation' || spread.count === 0) return null;
  const [unit, confidence] = spread.max > 1600 ? ['kJ/m²', 0.5] : spread.max > 8 || spread.min < -3 ? ['W/m²', 0.8] : ['MJ/m²/d', 0.5];
  const told = unit === 'MJ/m²/d' ? 'MJ/m² of each reading' : unit;
  return {
    unit: unit as string,
    confidence: confidence as number,
    reason: `no unit given; values ${spread.min} to ${spread.max} read as ${told}`,
  };
}
