/** Names that the settings of a district are written with. */

/** The settings of a district that its manager may change, as the API names them. */
export interface DistrictSettings {
  readonly name: string;
  readonly time_zone: string;
  readonly units: 'metric' | 'us';
  readonly week_start: number;
  readonly water_year_start_month: number;
  readonly default_elevation_m: number;
  readonly radiation_coefficient: number;
}

export const UNIT_NAMES: readonly (readonly [DistrictSettings['units'], string])[] = [
  ['metric', 'mm, ha, m³, m³/s'],
  ['us', 'in, ac, ac-ft, cfs'],
];
export const WEEKDAYS = ['Monday', 'Tuesday', 'Wednesday', 'Thursday', 'Friday', 'Saturday', 'Sunday'] as const;
export const MONTH_NAMES = [
  'January',
  'February',
  'March',
  'April',
  'May',
  'June',
  'July',
  'August',
  'September',
  'October',
  'November',
  'December',
] as const;

/** Roles, what each is called and what it may do. */
export const ROLES = [
  { role: 'manager', name: 'Manager', may: 'everything' },
  { role: 'operator', name: 'Operator', may: 'sees all, imports and runs' },
  { role: 'regulator', name: 'Regulator', may: 'sees all' },
  { role: 'grower', name: 'Grower', may: 'sees the own parcels' },
] as const;
export type RoleName = (typeof ROLES)[number]['role'];
