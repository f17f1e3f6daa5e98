/**
 * The record of the demo stations: its days and its variables.
 */
export const DEMO_START = '2023-10-01';
export const DEMO_END = '2025-09-30';

/** Every variable the stations measure, [site × day]. */
export function emptyValues(count: number) {
  return {
    air_temperature_max_c: new Float64Array(count),
    air_temperature_min_c: new Float64Array(count),
    dew_point_c: new Float64Array(count),
    wind_speed_m_s: new Float64Array(count),
    solar_radiation_mj_m2_d: new Float64Array(count),
    precipitation_mm: new Float64Array(count),
  };
}

export type DemoValues = ReturnType<typeof emptyValues>;
