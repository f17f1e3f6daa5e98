/**
 * Which weather quantity a header names. The dictionary is of plain words: names of quantities in English, the customary symbols, and
 * the variable names of open conventions (CF standard short names, FLUXNET).
 */
import type { WeatherVariable } from '../weather/variable.ts';
import { columnName, unitSuffixes, wordsOf } from './column-name.ts';
import { findUnit, type UnitKind } from './unit.ts';

/** Roles beside the variables of `WEATHER_VARIABLES`. */
export const WEATHER_KEY_ROLES = ['site', 'date', 'year', 'month', 'day', 'day_of_year', 'hour', 'minute'] as const;
export const WEATHER_EXTRA_ROLES = [
  'vapour_pressure_deficit_kpa',
  'relative_humidity_at_hour_pct',
  'air_temperature_at_hour_c',
  'wind_speed_at_hour_m_s',
] as const;

type WeatherExtraRole = (typeof WEATHER_EXTRA_ROLES)[number];
export type WeatherValueRole = WeatherVariable | WeatherExtraRole;
export type WeatherRole = WeatherValueRole | (typeof WEATHER_KEY_ROLES)[number];

/** Unit kind of each value role. */
export const ROLE_KIND: Record<WeatherValueRole, UnitKind> = {
  air_temperature_max_c: 'temperature',
  air_temperature_min_c: 'temperature',
  air_temperature_mean_c: 'temperature',
  dew_point_c: 'temperature',
  vapour_pressure_kpa: 'pressure',
  relative_humidity_max_pct: 'share',
  relative_humidity_min_pct: 'share',
  relative_humidity_mean_pct: 'share',
  specific_humidity_kg_kg: 'ratio',
  wind_speed_m_s: 'speed',
  solar_radiation_mj_m2_d: 'radiation',
  sunshine_duration_h: 'duration',
  net_radiation_mj_m2_d: 'radiation',
  precipitation_mm: 'depth',
  pressure_kpa: 'pressure',
  reference_et_given_mm: 'depth',
  vapour_pressure_deficit_kpa: 'pressure',
  relative_humidity_at_hour_pct: 'share',
  air_temperature_at_hour_c: 'temperature',
  wind_speed_at_hour_m_s: 'speed',
};

/** What the header alone says. `rank` orders rivals for one role: lower is better. */
export interface NamedRole {
  readonly role: WeatherRole;
  readonly unit: string | null;
  readonly unitText: string | null;
  readonly hour: number | null;
  readonly rank: number;
}

type Quantity = 'temperature' | 'humidity' | Exclude<WeatherValueRole, `air_temperature${string}` | `relative_humidity${string}`>;

const QUANTITIES: Record<string, readonly string[]> = {
  temperature: ['temp'],
  dew_point_c: [
    'dew point',
    'dewpoint',
    'dew',
    'td',
    'tdew',
    'tdps',
    'dew temp',
    'dew point temp',
    'dewpoint temp',
    'temp dew',
    'temp dew point',
  ],
  humidity: ['rh', 'relative rh', 'r h'],
  specific_humidity_kg_kg: ['specific rh', 'huss', 'sh', 'q2m'],
  vapour_pressure_kpa: ['vp', 'ea', 'vapour pressure', 'actual vapour pressure', 'vap'],
  vapour_pressure_deficit_kpa: ['vpd', 'vp deficit', 'vapour pressure deficit'],
  wind_speed_m_s: [
    'wind',
    'wind speed',
    'windspeed',
    'ws',
    'wspd',
    'wdsp',
    'u2',
    'u10',
    'uz',
    'ws2m',
    'ws10m',
    'wind speed 2m',
    'wind speed 10m',
    'sfcwind',
    'sfc wind',
    'wind run',
    'windrun',
  ],
  net_radiation_mj_m2_d: ['net radiation', 'net rad', 'netrad', 'rn', 'rnet'],
  solar_radiation_mj_m2_d: [
    ...['solar', 'solar radiation', 'solar rad', 'solarad', 'srad', 'rs', 'rg', 'rsds', 'ghi', 'swdown', 'sw in', 'radiation', 'rad'],
    ...[
      'shortwave',
      'shortwave radiation',
      'incoming shortwave',
      'incoming solar radiation',
      'global radiation',
      'global solar radiation',
      'glorad',
      'global irradiance',
      'global horizontal irradiance',
      'global irradiance on the horizontal plane',
    ],
  ],
  sunshine_duration_h: [
    'sunshine',
    'sunshine hours',
    'sunshine duration',
    'sun',
    'sun hours',
    'sunhours',
    'sund',
    'bright sunshine',
    'bright sunshine hours',
  ],
  precipitation_mm: ['rain', 'rainfall', 'precip', 'precipitation', 'ppt', 'prcp', 'pr', 'p', 'pcp', 'prec'],
  pressure_kpa: [
    'pressure',
    'pres',
    'press',
    'pa',
    'ps',
    'sp',
    'station pressure',
    'atmospheric pressure',
    'surface pressure',
    'barometric pressure',
    'patm',
    'baro',
  ],
  reference_et_given_mm: [
    'eto',
    'et0',
    'etos',
    'reference et',
    'ref et',
    'etref',
    'et short crop',
    'reference et given',
    'reference evapotranspiration',
  ],
};

const KEYS: Record<string, readonly string[]> = {
  site: [
    'site',
    'site code',
    'site id',
    'station',
    'station code',
    'station id',
    'station number',
    'wban',
    'stn',
    'stid',
    'location',
    'code',
    'id',
    'site name',
    'station name',
  ],
  date: [
    'date',
    'lst date',
    'local date',
    'obs date',
    'observation date',
    'timestamp start',
    'timestamp',
    'datetime',
    'date time',
    'yyyy mm dd',
    'yyyymmdd',
    'time',
    'time utc',
    'date utc',
    'datetime utc',
    'timestamp utc',
    'timestamp end',
    'fecha',
    'datum',
  ],
  year: ['year', 'yr', 'yyyy'],
  month: ['month', 'mo'],
  day: ['day', 'dd', 'dom', 'day of month'],
  day_of_year: ['doy', 'do y', 'day of year', 'dayofyear', 'julian day', 'jday', 'yday'],
  minute: ['minute', 'minutes'],
  hour: ['hour', 'hr', 'hh', 'hhmm', 'lst time', 'utc hour', 'hour of day', 'time hhmm'],
};

const quantityOf = invert(QUANTITIES);
const keyOf = invert(KEYS);

/** Names of the FLUXNET convention, whose trailing F means gap-filled and not Fahrenheit. Source: FLUXNET2015 variable list. */
const FLUXNET: Record<string, { role: WeatherValueRole; unit: string }> = {
  TA_F: { role: 'air_temperature_mean_c', unit: '°C' },
  TA_F_MDS: { role: 'air_temperature_mean_c', unit: '°C' },
  VPD_F: { role: 'vapour_pressure_deficit_kpa', unit: 'hPa' },
  PA_F: { role: 'pressure_kpa', unit: 'kPa' },
  P_F: { role: 'precipitation_mm', unit: 'mm' },
  WS_F: { role: 'wind_speed_m_s', unit: 'm/s' },
  SW_IN_F: { role: 'solar_radiation_mj_m2_d', unit: 'W/m²' },
  NETRAD: { role: 'net_radiation_mj_m2_d', unit: 'W/m²' },
};

const NOISE = new Set(['daily', 'air', 'obs', 'observed', 'calc', 'value', 'total', 'sum', '24h', '24hr', 'measured', 'amount']);
const STAT: Record<string, 'max' | 'min' | 'mean'> = {
  ...{ max: 'max', maximum: 'max', hi: 'max', high: 'max' },
  ...{ min: 'min', minimum: 'min', lo: 'min', low: 'min' },
  ...{ mean: 'mean', avg: 'mean', average: 'mean', ave: 'mean' },
};
const SYNONYM: Record<string, string> = {
  ...{ temperature: 'temp', tmp: 'temp', t: 'temp', ta: 'temp', tair: 'temp', tas: 'temp', t2m: 'temp', temps: 'temp' },
  ...{ humidity: 'rh', hum: 'rh', rhum: 'rh', hurs: 'rh', vapor: 'vapour' },
};
const SHORT: Record<string, readonly [string, 'max' | 'min' | 'mean']> = {
  tx: ['temp', 'max'],
  tn: ['temp', 'min'],
  rhx: ['rh', 'max'],
  rhn: ['rh', 'min'],
};
const JOINED_AFTER = /^(t|ta|temp|tas|tair|rh|rhum|hum|humidity)(max|min|mean|avg|ave)$/;
const JOINED_BEFORE = /^(max|min|mean|avg)(t|temp|rh|hum|humidity)$/;

function invert(table: Record<string, readonly string[]>): Map<string, { name: string; rank: number }> {
  const map = new Map<string, { name: string; rank: number }>();
  for (const [name, spellings] of Object.entries(table))
    for (const [rank, spelling] of spellings.entries()) map.set(spelling, { name, rank });
  return map;
}

/** True when any header of the table carries a FLUXNET quality column, e.g. `TA_F_QC`. */
export function isFluxnetTable(headers: readonly string[]): boolean {
  return headers.some((header) => /^(TA|VPD|WS|PA|P|SW_IN)_F_QC$/.test(header.trim()));
}

/**
 * Role and unit that a header names, or null.
 *
 * @param fluxnet headers follow the FLUXNET convention
 * @example weatherRoleOf('tmax_f', false)?.role // 'air_temperature_max_c'
 */
export function weatherRoleOf(header: string, fluxnet: boolean): NamedRole | null {
  const known = fluxnet ? FLUXNET[header.trim()] : undefined;
  if (known) return { ...known, unitText: known.unit, hour: null, rank: 0 };
  const { words, unitText, hour } = columnName(header);
  if (words.length === 0) return null;
  for (const { rest, suffix } of unitSuffixes(words)) {
    const named = roleOfWords(rest, hour);
    if (!named) continue;
    if (suffix === null) return withUnit(named, unitText, hour);
    const kind = kindOf(named.role);
    if (kind && findUnit(kind, suffix)) return withUnit(named, unitText ?? suffix, hour);
  }
  return null;
}

function withUnit(named: { role: WeatherRole; rank: number }, unitText: string | null, hour: number | null): NamedRole {
  const kind = kindOf(named.role);
  return { ...named, unitText, unit: kind && unitText ? findUnit(kind, unitText) : null, hour };
}

/** Unit kind of a role, null for keys. */
export function kindOf(role: string): UnitKind | null {
  return ROLE_KIND[role as WeatherValueRole] ?? null;
}

function roleOfWords(words: readonly string[], hour: number | null): { role: WeatherRole; rank: number } | null {
  const key = keyOf.get(words.join(' '));
  if (key && hour === null) return { role: key.name as WeatherRole, rank: key.rank };
  const { base, stat } = baseAndStat(words);
  if (base === 'rh temp' && (stat === 'max' || stat === 'min')) {
    return { role: stat === 'max' ? 'relative_humidity_min_pct' : 'relative_humidity_max_pct', rank: 5 };
  }
  const quantity = quantityOf.get(base);
  if (!quantity) return null;
  const role = roleOfQuantity(quantity.name as Quantity, stat, hour);
  return role ? { role, rank: quantity.rank } : null;
}

function baseAndStat(words: readonly string[]): { base: string; stat: 'max' | 'min' | 'mean' | null } {
  let stat: 'max' | 'min' | 'mean' | null = null;
  const base: string[] = [];
  for (const word of words.flatMap(splitJoined)) {
    if (STAT[word]) stat = STAT[word];
    else if (!NOISE.has(word)) base.push(SYNONYM[word] ?? word);
  }
  return { base: base.join(' '), stat };
}

function splitJoined(word: string): string[] {
  if (SHORT[word]) return [...SHORT[word]];
  const after = JOINED_AFTER.exec(word);
  if (after) return [after[1], after[2]];
  const before = JOINED_BEFORE.exec(word);
  return before ? [before[1], before[2]] : [word];
}

function roleOfQuantity(quantity: Quantity, stat: 'max' | 'min' | 'mean' | null, hour: number | null): WeatherValueRole | null {
  if (hour !== null) {
    if (quantity === 'temperature') return 'air_temperature_at_hour_c';
    if (quantity === 'humidity') return 'relative_humidity_at_hour_pct';
    return quantity === 'wind_speed_m_s' ? 'wind_speed_at_hour_m_s' : null;
  }
  if (quantity === 'temperature') return `air_temperature_${stat ?? 'mean'}_c`;
  if (quantity === 'humidity') return `relative_humidity_${stat ?? 'mean'}_pct`;
  return stat === 'max' || stat === 'min' ? null : quantity;
}

/** Height [m] that a wind header names, e.g. u2 or `wind speed 10m`; null when it names none. */
export function windHeightOf(header: string): number | null {
  const match = /^(?:u|ws|wind speed )(\d{1,2})m?$/.exec(wordsOf(header).join(' '));
  return match ? Number(match[1]) : null;
}

/** Names under which open archives publish in one unit without saying so in the file. Common practice, no source. */
const CUSTOMARY_UNITS: Record<string, string> = { wdsp: 'knots' };

/** Unit that a header's name customarily has where nothing else tells; null for the others. @example customaryUnit('wdsp') // 'knots' */
export function customaryUnit(header: string): string | null {
  return CUSTOMARY_UNITS[wordsOf(header).join(' ')] ?? null;
}

const SEA_LEVEL = new Set(['msl', 'mslp', 'slp', 'sea level pressure', 'mean sea level pressure', 'pressure msl', 'psl', 'qff', 'qnh']);

/** True for a header that names pressure reduced to sea level, which is not the pressure at the station. */
export function isSeaLevelPressure(header: string): boolean {
  return SEA_LEVEL.has(columnName(header).words.join(' '));
}

/**
 * The column whose quality flags a header holds, as words: `qc_temp`, `temp_qc`, `temp_flag`.
 *
 * @example flaggedColumn('RH_QC') // 'rh'
 */
export function flaggedColumn(header: string): string | null {
  const words = wordsOf(header);
  const mark = (word: string) => word === 'qc' || word === 'flag' || word === 'qcflag';
  if (words.length < 2) return null;
  if (mark(words[words.length - 1])) return words.slice(0, -1).join(' ');
  return mark(words[0]) ? words.slice(1).join(' ') : null;
}

/** The column whose origin a header tells by codes: `max_temp_source`. @example originColumn('vp_source') // 'vp' */
export function originColumn(header: string): string | null {
  const words = wordsOf(header);
  const last = words[words.length - 1];
  return words.length >= 2 && (last === 'source' || last === 'src') ? words.slice(0, -1).join(' ') : null;
}
