/**
 * Stored numbers → values: packing, declared missing values, and numbers that no place on earth has.
 *
 * Source: CF Metadata Conventions 1.11, section 2.5.1 (missing data, valid range) and 8.1 (packed data): `_FillValue`, `missing_value` and
 * the valid range are held against the packed number.
 */
import { HOUR_VARIABLES, WEATHER_VARIABLES } from '../weather/variable.ts';
import type { ArrayVariable } from './array-file.ts';
import type { GridRole } from './grid-role-names.ts';
import { GRID_ROLE_KIND, isWeatherRole, numberAttribute } from './grid-roles.ts';
import type { GridUnit } from './grid-units.ts';

/** Numbers that files use for missing without saying so; common practice, no source. */
const KNOWN_CODES = [
  ...[-3276.7, -3276.8, 3276.7, -32767, -32768, 32767, 32766, 65535, -999, -999.9, -9999, -9999.9, -99, -99.9, 9999, 99999, -99999],
  ...[1e20, -1e20, 1e30, 1e15, 1e36, -1e34, 3.4028234663852886e38, -3.4028234663852886e38, 9.969209968386869e36, -2147483648, -2147483647],
];
/** Numbers nearer to zero than this are no code. */
const LEAST_CODE = 0.99 * Math.min(...KNOWN_CODES.map(Math.abs));
/** Kinds of impossible numbers told apart in one field. */
const CODES_KEPT = 8;

/** How a field is stored. */
export interface Packing {
  readonly scale: number;
  readonly offset: number;
  /** stored numbers that mean missing */
  readonly fills: Float64Array;
  /** stored numbers outside mean missing */
  readonly validLow: number;
  readonly validHigh: number;
}

/** Packing of a variable from its attributes. */
export function packingOf(variable: ArrayVariable): Packing {
  const { attributes } = variable;
  const range = attributes.valid_range;
  const [rangeLow, rangeHigh] = Array.isArray(range) && range.length === 2 ? range.map(Number) : [Number.NaN, Number.NaN];
  const low = or(rangeLow, or(numberAttribute(attributes, 'valid_min'), Number.NEGATIVE_INFINITY));
  const high = or(rangeHigh, or(numberAttribute(attributes, 'valid_max'), Number.POSITIVE_INFINITY));
  const fills = ['_FillValue', 'missing_value', 'nodata', 'fmissing_value'].flatMap((name) => {
    const value = attributes[name];
    return value === undefined || typeof value === 'string' ? [] : value.map(Number).filter((number) => !Number.isNaN(number));
  });
  const single = variable.type === 'float32';
  return {
    scale: or(numberAttribute(attributes, 'scale_factor'), 1),
    offset: or(numberAttribute(attributes, 'add_offset'), 0),
    fills: Float64Array.from(new Set(single ? fills.flatMap((fill) => [fill, Math.fround(fill)]) : fills)),
    validLow: single ? Math.fround(low) : low,
    validHigh: single ? Math.fround(high) : high,
  };
}

function or(value: number, otherwise: number): number {
  return Number.isNaN(value) ? otherwise : value;
}

/** Limits of one step of a field in the inside unit, amounts per hour; below `low` down to `noise` a value is 0 (rounding, dark sensor). */
export interface StepLimits {
  readonly low: number;
  readonly high: number;
  readonly noise: number;
}

/** Roles whose values are amounts: sums over time. */
export function isAmount(role: GridRole): boolean {
  const kind = GRID_ROLE_KIND[role];
  return kind === 'depth' || kind === 'radiation' || kind === 'duration';
}

/** Limits of a step; a day's are those of the daily vocabulary, shorter ones those of the hourly. */
export function stepLimits(role: GridRole, daily: boolean): StepLimits {
  const noise = NOISE[role] ?? 0;
  const extra = EXTRA_LIMITS[role];
  if (extra) return { low: extra[0], high: extra[1], noise: extra[0] - noise };
  if (daily && isWeatherRole(role)) {
    const { low, high } = WEATHER_VARIABLES[role];
    const hours = isAmount(role) ? 24 : 1;
    return { low: low / hours, high: high / hours, noise: (low - noise) / hours };
  }
  const [low, high] = STEP_LIMITS[role] ?? [Number.NEGATIVE_INFINITY, Number.POSITIVE_INFINITY];
  return { low, high, noise: low - noise };
}

const EXTRA_LIMITS: Partial<Record<GridRole, readonly [number, number]>> = {
  eastward_wind_m_s: [-75, 75],
  northward_wind_m_s: [-75, 75],
  vapour_pressure_deficit_kpa: [0, 12],
  elevation_m: [-450, 8900],
};

const temperature = [HOUR_VARIABLES.hour_air_temperature_c.low, HOUR_VARIABLES.hour_air_temperature_c.high] as const;

/** Limits of steps shorter than a day; amounts per hour. */
const STEP_LIMITS: Partial<Record<GridRole, readonly [number, number]>> = {
  air_temperature_max_c: temperature,
  air_temperature_min_c: temperature,
  air_temperature_mean_c: temperature,
  dew_point_c: [HOUR_VARIABLES.hour_dew_point_c.low, HOUR_VARIABLES.hour_dew_point_c.high],
  vapour_pressure_kpa: [0, HOUR_VARIABLES.hour_vapour_pressure_kpa.high],
  relative_humidity_max_pct: [0, 105],
  relative_humidity_min_pct: [0, 105],
  relative_humidity_mean_pct: [0, 105],
  specific_humidity_kg_kg: [0, 0.04],
  wind_speed_m_s: [0, HOUR_VARIABLES.hour_wind_speed_m_s.high],
  solar_radiation_mj_m2_d: [0, HOUR_VARIABLES.hour_solar_radiation_mj_m2.high],
  net_radiation_mj_m2_d: [-1.5, HOUR_VARIABLES.hour_solar_radiation_mj_m2.high],
  sunshine_duration_h: [0, 1.001],
  precipitation_mm: [0, HOUR_VARIABLES.hour_precipitation_mm.high],
  pressure_kpa: [45, 110],
  reference_et_given_mm: [0, 3],
};

/** How far below zero a value may fall by rounding, packing or a dark sensor and still be zero; amounts per day where a day is limited. */
const NOISE: Partial<Record<GridRole, number>> = {
  solar_radiation_mj_m2_d: 0.1,
  precipitation_mm: 0.05,
  reference_et_given_mm: 1,
  sunshine_duration_h: 0.01,
  specific_humidity_kg_kg: 1e-5,
  vapour_pressure_kpa: 1e-3,
  vapour_pressure_deficit_kpa: 0.1,
  wind_speed_m_s: 0.01,
  relative_humidity_max_pct: 0.5,
  relative_humidity_min_pct: 0.5,
  relative_humidity_mean_pct: 0.5,
};

/** What unpacking met in one field. */
export interface Tally {
  declared: number;
  outside: number;
  zeroed: number;
  values: number;
  readonly codes: Float64Array;
  readonly codeCounts: Float64Array;
  codeKinds: number;
  /** the first impossible number */
  firstRaw: number;
  firstValue: number;
  firstCell: number;
  firstStep: number;
  firstPiece: number;
  /** first of the cells, and the file, that are being unpacked */
  base: number;
  piece: number;
}

export function newTally(): Tally {
  return {
    ...{
      declared: 0,
      outside: 0,
      zeroed: 0,
      values: 0,
      codes: new Float64Array(CODES_KEPT),
      codeCounts: new Float64Array(CODES_KEPT),
      codeKinds: 0,
    },
    ...{ firstRaw: Number.NaN, firstValue: Number.NaN, firstCell: -1, firstStep: -1, firstPiece: -1, base: 0, piece: 0 },
  };
}

/** Straight line from stored number to inside value, and its limits. */
export interface Unpacking extends StepLimits {
  readonly factor: number;
  readonly offset: number;
  readonly packing: Packing;
}

/**
 * Joins packing and unit. Amounts come out per hour.
 *
 * @param stepSeconds length of the steps, for amounts of a step
 */
export function unpackingOf(
  role: GridRole,
  packing: Packing,
  unit: GridUnit,
  step: { readonly seconds: number; readonly daily: boolean },
): Unpacking {
  const perHour = unit.per === 'second' ? 3600 : unit.per === 'day' ? 1 / 24 : unit.per === 'step' ? 3600 / step.seconds : 1;
  return {
    ...stepLimits(role, step.daily),
    factor: packing.scale * unit.factor * perHour,
    offset: (packing.offset * unit.factor + unit.offset) * perHour,
    packing,
  };
}

/** Where the cells of one step lie in a block of stored numbers. */
export interface Places {
  /** offset of each cell from the start of the step */
  readonly offsets: Int32Array;
  /** place of each cell in the result */
  readonly cells: Int32Array;
}

/**
 * Unpacks the cells of one step into `out`; NaN where missing or impossible.
 *
 * @param base index of the step's first number in `raw`
 * @param step number of the step, for the tally
 */
export function unpackStep(
  raw: Float64Array,
  base: number,
  places: Places,
  unpacking: Unpacking,
  out: Float64Array,
  tally: Tally,
  step: number,
): void {
  const { offsets, cells } = places;
  const { factor, offset, low, high, noise } = unpacking;
  const { fills, validLow, validHigh } = unpacking.packing;
  const fill = fills.length > 0 ? fills[0] : Number.NaN;
  const more = fills.length > 1;
  for (let i = 0; i < offsets.length; i++) {
    const stored = raw[base + offsets[i]];
    if (Number.isNaN(stored) || stored === fill || (more && fills.includes(stored)) || stored < validLow || stored > validHigh) {
      out[cells[i]] = Number.NaN;
      tally.declared++;
      continue;
    }
    const value = stored * factor + offset;
    if (value >= low && value <= high) {
      out[cells[i]] = value;
      tally.values++;
    } else if (value < low && value >= noise) {
      out[cells[i]] = low;
      tally.zeroed++;
      tally.values++;
    } else {
      out[cells[i]] = Number.NaN;
      countOutside(tally, stored, value, cells[i], step);
    }
  }
}

function countOutside(tally: Tally, stored: number, value: number, cell: number, step: number): void {
  if (tally.outside === 0) {
    tally.firstRaw = stored;
    tally.firstValue = value;
    tally.firstCell = tally.base + cell;
    tally.firstStep = step;
    tally.firstPiece = tally.piece;
  }
  tally.outside++;
  for (let k = 0; k < tally.codeKinds; k++) {
    if (tally.codes[k] !== stored) continue;
    tally.codeCounts[k]++;
    return;
  }
  if (tally.codeKinds === CODES_KEPT) return;
  tally.codes[tally.codeKinds] = stored;
  tally.codeCounts[tally.codeKinds++] = 1;
}

/** True for a number that files use for missing. @example isKnownCode(-3276.699951171875) // true */
export function isKnownCode(value: number): boolean {
  if (Math.abs(value) < LEAST_CODE) return false;
  for (const code of KNOWN_CODES) if (Math.abs(value - code) <= Math.abs(code) * 1e-6) return true;
  return false;
}

/** The impossible numbers of a field: codes for missing with their counts, and how many other values lie outside. */
export function splitOutside(
  tally: Tally,
  packing: Packing,
): { readonly codes: readonly { code: number; count: number }[]; readonly others: number } {
  const codes: { code: number; count: number }[] = [];
  for (let k = 0; k < tally.codeKinds; k++) {
    const [code, count] = [tally.codes[k], tally.codeCounts[k]];
    const single = count >= 3 && count > 0.5 * tally.outside;
    if (isKnownCode(code) || isKnownCode(code * packing.scale + packing.offset) || single) codes.push({ code, count });
  }
  return { codes, others: tally.outside - codes.reduce((sum, { count }) => sum + count, 0) };
}

/** A stored number as the file's writer would have typed it. @example storedText(-3276.699951171875, 'float32') // '-3276.7' */
export function storedText(value: number, type: ArrayVariable['type']): string {
  return type === 'float32' ? String(Number(value.toPrecision(7))) : String(value);
}
