/**
 * What each field of an array file is: by the user's plan, by its standard name, by its own name, by its long name, in this order.
 */
import { WEATHER_VARIABLES, type WeatherVariable } from '../weather/variable.ts';
import type { ArrayVariable, AttributeValue } from './array-file.ts';
import {
  GRID_EXTRA_ROLES,
  type GridRole,
  NOT_WANTED,
  POTENTIAL_EVAPORATION,
  type Quantity,
  STANDARD_NAMES,
  VARIABLE_NAMES,
} from './grid-role-names.ts';
import type { ImportOptions } from './reading.ts';
import type { UnitKind } from './unit.ts';
import { weatherRoleOf } from './weather-column.ts';

export type Statistic = 'max' | 'min' | 'mean';

/** Role of a field and how sure it is. */
export interface FieldRole {
  readonly role: GridRole | null;
  /** 0–1 */
  readonly confidence: number;
  readonly reason: string;
  /** false for a role that is only offered: taken when the plan confirms it */
  readonly taken: boolean;
}

export const GRID_ROLE_KIND: Record<GridRole, UnitKind> = {
  air_temperature_max_c: 'temperature',
  air_temperature_min_c: 'temperature',
  air_temperature_mean_c: 'temperature',
  dew_point_c: 'temperature',
  vapour_pressure_kpa: 'pressure',
  vapour_pressure_deficit_kpa: 'pressure',
  relative_humidity_max_pct: 'share',
  relative_humidity_min_pct: 'share',
  relative_humidity_mean_pct: 'share',
  specific_humidity_kg_kg: 'ratio',
  wind_speed_m_s: 'speed',
  eastward_wind_m_s: 'speed',
  northward_wind_m_s: 'speed',
  solar_radiation_mj_m2_d: 'radiation',
  net_radiation_mj_m2_d: 'radiation',
  sunshine_duration_h: 'duration',
  precipitation_mm: 'depth',
  pressure_kpa: 'pressure',
  reference_et_given_mm: 'depth',
  elevation_m: 'length',
};

export function isGridRole(text: string): text is GridRole {
  return text in WEATHER_VARIABLES || (GRID_EXTRA_ROLES as readonly string[]).includes(text);
}

/** Role that is a weather variable of the product, as opposed to a part of one. */
export function isWeatherRole(role: GridRole): role is WeatherVariable {
  return role in WEATHER_VARIABLES;
}

/** Text of an attribute, '' when it is absent or a number. */
export function textAttribute(attributes: Readonly<Record<string, AttributeValue>>, name: string): string {
  const value = attributes[name];
  if (typeof value === 'string') return value.trim();
  return Array.isArray(value) && typeof value[0] === 'string' ? value[0].trim() : '';
}

/** First number of an attribute, NaN when it has none. */
export function numberAttribute(attributes: Readonly<Record<string, AttributeValue>>, name: string): number {
  const value = attributes[name];
  if (value === undefined) return Number.NaN;
  const first = typeof value === 'string' ? value : value[0];
  return first === undefined || first === '' ? Number.NaN : Number(first);
}

/** A name for the tables: lower case letters and digits of its last part. @example nameKey('met/T_air') // 'tair' */
export function nameKey(name: string): string {
  return (name.split('/').at(-1) ?? name).toLowerCase().replace(/[^a-z0-9]/g, '');
}

/** Role of a field. @param label name shown to the user, by which the plan speaks of it */
export function fieldRole(variable: ArrayVariable, label: string, options: ImportOptions): FieldRole {
  const planned = options.plan?.columns?.[label] ?? options.plan?.columns?.[variable.name];
  if (planned) return plannedRole(planned.role);
  const standardName = textAttribute(variable.attributes, 'standard_name').toLowerCase().split(' ')[0];
  const key = nameKey(label);
  const potential = POTENTIAL_EVAPORATION[standardName] ?? POTENTIAL_EVAPORATION[key];
  if (potential) return { role: 'reference_et_given_mm', confidence: 0.3, reason: potential, taken: false };
  if (NOT_WANTED[standardName]) return none(NOT_WANTED[standardName]);
  const method = statisticOf(textAttribute(variable.attributes, 'cell_methods'), '');
  const statistic = method ?? statisticOf('', key) ?? statisticOf(textAttribute(variable.attributes, 'long_name'), '');
  const byStandard = STANDARD_NAMES[standardName];
  if (byStandard) return withStatistic(byStandard, statistic, 0.95, `standard name ${standardName}`);
  const byName = VARIABLE_NAMES[key];
  if (byName) return withStatistic(byName, statistic, 0.8, `variable name ${label}`);
  return byWords(variable, label, statistic);
}

function plannedRole(role: string | null): FieldRole {
  if (role === null) return none('left out by the plan');
  if (isGridRole(role)) return { role, confidence: 1, reason: 'named by the plan', taken: true };
  return none(`the plan's role "${role}" is not one a field can have`);
}

function byWords(variable: ArrayVariable, label: string, statistic: Statistic | null): FieldRole {
  const longName = textAttribute(variable.attributes, 'long_name');
  for (const [text, what] of [
    [longName, 'long name'],
    [label, 'variable name'],
  ]) {
    const role = text === '' ? null : weatherRoleOf(text, false)?.role;
    if (!role || !isGridRole(role)) continue;
    const temperature = role.startsWith('air_temperature') ? 'temperature' : role.startsWith('relative_humidity') ? 'humidity' : role;
    return withStatistic(temperature as Quantity, statistic ?? statisticOf(role.replaceAll('_', ' '), ''), 0.6, `${what} "${text}"`);
  }
  return none('no role is known for this name');
}

function withStatistic(quantity: Quantity, statistic: Statistic | null, confidence: number, reason: string): FieldRole {
  if (quantity === 'temperature') return { role: `air_temperature_${statistic ?? 'mean'}_c`, confidence, reason, taken: true };
  if (quantity === 'humidity') return { role: `relative_humidity_${statistic ?? 'mean'}_pct`, confidence, reason, taken: true };
  if (statistic === 'max' || statistic === 'min')
    return none(`the day's ${statistic === 'max' ? 'maximum' : 'minimum'} of this quantity is not used`);
  return { role: quantity, confidence, reason, taken: true };
}

function none(reason: string): FieldRole {
  return { role: null, confidence: 0, reason, taken: false };
}

function statisticOf(text: string, key: string): Statistic | null {
  if (/\bmax(imum)?\b/i.test(text) || /(max|mmx)$|^(tx|mx2t)/.test(key)) return 'max';
  if (/\bmin(imum)?\b/i.test(text) || /(min|mmn)$|^(tn|mn2t)/.test(key)) return 'min';
  return null;
}

/**
 * Height above ground [m] of a wind field, from its names; null when they name none.
 *
 * @param heightCoordinate value of a scalar height coordinate of the field, NaN when it has none
 */
export function windHeightOfField(variable: ArrayVariable, label: string, heightCoordinate: number): number | null {
  if (heightCoordinate >= 0.5 && heightCoordinate <= 200) return heightCoordinate;
  const key = nameKey(label);
  if (/^(sfcwind|uas|vas)$/.test(key)) return 10;
  const text = `${textAttribute(variable.attributes, 'long_name')} ${textAttribute(variable.attributes, 'description')}`;
  const match = /(?:^|\D)(\d{1,3})\s*-?\s*m(?:et(?:er|re)s?)?\b/i.exec(text) ?? /(?:^|[a-z])(2|10)(?:m|[uv]|si|$)/.exec(key);
  const height = match ? Number(match[1]) : Number.NaN;
  return height >= 0.5 && height <= 200 ? height : null;
}
