/** The roles a column of each kind of file can have, with the units its numbers can be in. Made on the server: the readers are not sent to the browser. */

import { AREA_ROLES, SOIL_AREA_ROLES } from '../../lib/files/area-roles.ts';
import { CANAL_ROLES } from '../../lib/files/canal-roles.ts';
import { DELIVERY_ROLES } from '../../lib/files/deliveries-csv.ts';
import { MEASUREMENT_ROLES } from '../../lib/files/measurements-csv.ts';
import { PARCEL_ROLES } from '../../lib/files/parcel-roles.ts';
import { PLANTING_ROLES } from '../../lib/files/plantings-csv.ts';
import { SOIL_ROLES } from '../../lib/files/soils-csv.ts';
import { STATION_ROLES } from '../../lib/files/stations-csv.ts';
import type { TableRole } from '../../lib/files/table-columns.ts';
import { TURNOUT_ROLES } from '../../lib/files/turnout-rules.ts';
import { unitNames } from '../../lib/files/unit.ts';
import { ROLE_KIND, WEATHER_EXTRA_ROLES, WEATHER_KEY_ROLES, type WeatherValueRole } from '../../lib/files/weather-column.ts';
import { WEATHER_VARIABLES, type WeatherVariable } from '../../lib/weather/variable.ts';

export interface RoleChoice {
  readonly role: string;
  readonly name: string;
  readonly units: readonly string[];
}

const TABLES: Readonly<Record<string, readonly TableRole[]>> = {
  areas: AREA_ROLES,
  canals: CANAL_ROLES,
  deliveries: DELIVERY_ROLES,
  measurements: MEASUREMENT_ROLES,
  parcels: PARCEL_ROLES,
  plantings: PLANTING_ROLES,
  'soil-areas': SOIL_AREA_ROLES,
  soils: SOIL_ROLES,
  stations: STATION_ROLES,
  turnouts: TURNOUT_ROLES,
};

const EXTRA_NAMES: Readonly<Record<string, string>> = {
  vapour_pressure_deficit_kpa: 'Vapour pressure deficit',
  relative_humidity_at_hour_pct: 'Relative humidity at an hour',
  air_temperature_at_hour_c: 'Air temperature at an hour',
  wind_speed_at_hour_m_s: 'Wind speed at an hour',
};

export function roleChoices(kind: string): RoleChoice[] {
  if (kind === 'weather') return weatherChoices();
  return (TABLES[kind] ?? []).map(({ role, kind: unitKind }) => ({ role, name: words(role), units: unitKind ? unitNames(unitKind) : [] }));
}

function weatherChoices(): RoleChoice[] {
  const keys = WEATHER_KEY_ROLES.map((role) => ({ role, name: words(role), units: [] }));
  const values = [...Object.keys(WEATHER_VARIABLES), ...WEATHER_EXTRA_ROLES].map((role) => ({
    role,
    name: WEATHER_VARIABLES[role as WeatherVariable]?.term ?? EXTRA_NAMES[role] ?? words(role),
    units: unitNames(ROLE_KIND[role as WeatherValueRole]),
  }));
  return [...keys, ...values];
}

const SHORT: Readonly<Record<string, string>> = { rew: 'Readily evaporable water', tew: 'Total evaporable water', ze: 'Evaporation depth' };

function words(role: string): string {
  const text = role.replaceAll('_', ' ');
  return SHORT[role] ?? text[0].toUpperCase() + text.slice(1);
}
