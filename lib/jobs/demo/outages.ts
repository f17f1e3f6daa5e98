/**
 * Gaps of the demo weather, such as every network has, so that filling and flags have something to show.
 */
import { dayNumber } from '../../base/civil-date.ts';
import { DEMO_START, type DemoValues } from './record.ts';

interface Outage {
  readonly site: number;
  readonly from: string;
  readonly to: string;
  /** absent: the whole station */
  readonly variable?: keyof DemoValues;
}

const OUTAGES: readonly Outage[] = [
  { site: 1, from: '2024-02-11', to: '2024-02-13' },
  { site: 3, from: '2024-07-08', to: '2024-07-19', variable: 'dew_point_c' },
  { site: 4, from: '2024-05-20', to: '2024-05-26', variable: 'solar_radiation_mj_m2_d' },
  { site: 5, from: '2024-08-30', to: '2024-09-03', variable: 'wind_speed_m_s' },
  { site: 2, from: '2025-06-14', to: '2025-06-14' },
  { site: 0, from: '2025-01-18', to: '2025-01-24', variable: 'precipitation_mm' },
  { site: 4, from: '2025-07-02', to: '2025-07-09', variable: 'air_temperature_min_c' },
];

/** Empties the values of the outages in place. */
export function demoOutages(values: DemoValues, dayCount: number): void {
  const first = dayNumber(DEMO_START);
  for (const { site, from, to, variable } of OUTAGES) {
    const names = variable ? [variable] : (Object.keys(values) as (keyof DemoValues)[]);
    for (const name of names)
      values[name].fill(Number.NaN, site * dayCount + dayNumber(from) - first, site * dayCount + dayNumber(to) - first + 1);
  }
}
