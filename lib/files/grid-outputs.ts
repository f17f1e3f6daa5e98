/**
 * Which blocks a quantity gives: daily values of its day, extremes of shorter steps, hours of few cells.
 */
import type { BlockVariable, HourVariable, WeatherVariable } from '../weather/variable.ts';
import type { BinOutput } from './grid-bins.ts';

/** Cells kept up to which hourly blocks are staged beside the daily ones. */
export const HOURLY_CELL_LIMIT = 500;

/** A value that shorter steps of a quantity give for each day. */
export interface DayOutput {
  readonly variable: WeatherVariable;
  readonly statistic: BinOutput['statistic'];
}

/**
 * What the steps of a quantity give for a day.
 *
 * @param given variables that other fields of the import give themselves
 */
export function dayOutputs(makes: WeatherVariable, given: ReadonlySet<WeatherVariable>): DayOutput[] {
  const spread = (max: WeatherVariable, min: WeatherVariable): DayOutput[] => [
    { variable: makes, statistic: 'mean' },
    ...(given.has(max) ? [] : [{ variable: max, statistic: 'max' } as const]),
    ...(given.has(min) ? [] : [{ variable: min, statistic: 'min' } as const]),
  ];
  switch (makes) {
    case 'air_temperature_mean_c':
      return spread('air_temperature_max_c', 'air_temperature_min_c');
    case 'relative_humidity_mean_pct':
      return spread('relative_humidity_max_pct', 'relative_humidity_min_pct');
    case 'air_temperature_max_c':
    case 'relative_humidity_max_pct':
      return [{ variable: makes, statistic: 'max' }];
    case 'air_temperature_min_c':
    case 'relative_humidity_min_pct':
      return [{ variable: makes, statistic: 'min' }];
    case 'solar_radiation_mj_m2_d':
    case 'net_radiation_mj_m2_d':
    case 'sunshine_duration_h':
    case 'precipitation_mm':
    case 'reference_et_given_mm':
      return [{ variable: makes, statistic: 'sum' }];
    default:
      return [{ variable: makes, statistic: 'mean' }];
  }
}

const HOUR_OF: Partial<Record<WeatherVariable, HourVariable>> = {
  air_temperature_mean_c: 'hour_air_temperature_c',
  dew_point_c: 'hour_dew_point_c',
  vapour_pressure_kpa: 'hour_vapour_pressure_kpa',
  relative_humidity_mean_pct: 'hour_relative_humidity_pct',
  wind_speed_m_s: 'hour_wind_speed_m_s',
  solar_radiation_mj_m2_d: 'hour_solar_radiation_mj_m2',
  precipitation_mm: 'hour_precipitation_mm',
  pressure_kpa: 'hour_pressure_kpa',
};

/** The hourly variable of a quantity, with how its steps make an hour; null when there is none. */
export function hourOutput(
  makes: WeatherVariable,
): { readonly variable: BlockVariable; readonly statistic: BinOutput['statistic'] } | null {
  const variable = HOUR_OF[makes];
  if (!variable) return null;
  return { variable, statistic: makes === 'solar_radiation_mj_m2_d' || makes === 'precipitation_mm' ? 'sum' : 'mean' };
}
