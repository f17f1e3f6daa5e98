/**
 * One row of a weather table → one value per variable: conversion, limits, missing codes, quality flags, and the combinations of hour readings.
 */
import { WEATHER_VARIABLES, type WeatherVariable } from '../weather/variable.ts';
import { type ByteRow, cellNumber, cellText, decimalMarkOf } from './byte-row.ts';
import { type FindingList, shown } from './finding-list.ts';
import { type HourReading, vapourPressureFromDeficit, vapourPressureFromHours } from './hour-readings.ts';
import { isMissingNumber, NOT_A_NUMBER, numberReader } from './number-cell.ts';
import type { WeatherValueRole } from './weather-column.ts';
import type { ValueColumn } from './weather-columns.ts';
import { VARIABLE_NAMES } from './weather-store.ts';

/** What is counted while rows are read, for the notes at the end. */
export interface RowCounts {
  /** column index → text that meant missing → cells */
  readonly missing: Map<number, Map<string, number>>;
  traceRain: number;
  /** column index → values left out because of their quality flag */
  readonly flagged: Map<number, number>;
  /** column index → code of origin → cells */
  readonly origins: Map<number, Map<string, number>>;
  /** small negative radiation taken as 0 */
  negativeRadiation: number;
}

export interface RowReading {
  readonly values: Float64Array;
  /** why a cell or two were dropped, null when the row is clean */
  problem: string | null;
  /** number of values kept */
  count: number;
}

/** How the numbers of a table are written. */
export interface NumberWriting {
  readonly decimalComma: boolean;
  readonly missingCodes?: readonly string[];
}

const ordinal = new Map<string, number>(VARIABLE_NAMES.map((name, index) => [name, index]));
export const V = {
  max: ordinal.get('air_temperature_max_c') as number,
  min: ordinal.get('air_temperature_min_c') as number,
  mean: ordinal.get('air_temperature_mean_c') as number,
  wind: ordinal.get('wind_speed_m_s') as number,
  vapour: ordinal.get('vapour_pressure_kpa') as number,
  radiation: ordinal.get('solar_radiation_mj_m2_d') as number,
};

/** A reader of rows that all have these columns. The returned reading is reused: copy what must last. */
export function weatherRowReader(columns: readonly ValueColumn[], writing: NumberWriting, file: string, findings: FindingList) {
  const counts: RowCounts = { missing: new Map(), traceRain: 0, flagged: new Map(), origins: new Map(), negativeRadiation: 0 };
  const reading: RowReading = { values: new Float64Array(VARIABLE_NAMES.length), problem: null, count: 0 };
  const reader = numberReader(writing.decimalComma, writing.missingCodes);
  const mark = decimalMarkOf(writing.decimalComma);
  const slow = (writing.missingCodes?.length ?? 0) > 0;
  const combine = combinations(columns);
  const extra = new Map<ValueColumn, number>();
  const places = columns.map((column) => ordinal.get(column.role) ?? -1);
  const read = (row: ByteRow): RowReading => {
    reading.values.fill(Number.NaN);
    reading.problem = null;
    for (let i = 0; i < columns.length; i++) {
      const column = columns[i];
      const value = column.flag >= 0 && isFlagged(column, row) ? Number.NaN : readCell(column, row);
      if (places[i] < 0) extra.set(column, value);
      else reading.values[places[i]] = value;
      if (column.origin >= 0) countOrigin(column, row);
    }
    combine(reading.values, extra);
    if (reading.values[V.min] > reading.values[V.max]) dropCrossedTemperatures(reading, row.row, file, findings);
    if (reading.values[V.radiation] < 0) {
      counts.negativeRadiation++;
      reading.values[V.radiation] = 0;
    }
    reading.count = presentCount(reading.values);
    return reading;
  };

  function readCell(column: ValueColumn, row: ByteRow): number {
    let number = slow ? Number.NaN : cellNumber(row, column.index, mark);
    if (Number.isNaN(number)) {
      const text = cellText(row, column.index);
      const read = reader.read(text);
      if (read === NOT_A_NUMBER) return unreadable(column, text, row.row);
      if (Number.isNaN(read)) return missing(column, reader.lastMissing);
      number = read;
    }
    const value = column.convert === null ? number : column.convert(number);
    if (value >= column.low && value <= column.high) return value;
    const text = cellText(row, column.index);
    if (isMissingNumber(number)) return missing(column, text.trim());
    return outOfRange(column, text, value, row.row);
  }

  function isFlagged(column: ValueColumn, row: ByteRow): boolean {
    const flag = cellNumber(row, column.flag);
    if (flag === 0 || Number.isNaN(flag)) return false;
    counts.flagged.set(column.index, (counts.flagged.get(column.index) ?? 0) + 1);
    return true;
  }

  function countOrigin(column: ValueColumn, row: ByteRow): void {
    tally(counts.origins, column.index, cellText(row, column.origin).trim());
  }

  function missing(column: ValueColumn, text: string): number {
    tally(counts.missing, column.index, text);
    return Number.NaN;
  }

  function unreadable(column: ValueColumn, text: string, row: number): number {
    if (column.role === 'precipitation_mm' && /^tr?(ace)?$/i.test(text.trim())) {
      counts.traceRain++;
      return 0;
    }
    const message = `"${shown(text)}" in column "${shown(column.header)}" is not a number.`;
    findings.error({
      code: 'not-a-number',
      message,
      file,
      row,
      column: column.header,
      value: shown(text),
      advice: 'Correct the cell, or list the text as a code for missing.',
    });
    reading.problem ??= message;
    return Number.NaN;
  }

  function outOfRange(column: ValueColumn, text: string, value: number, row: number): number {
    const unit = column.limitUnit;
    const told = column.unit === unit || !Number.isFinite(value) ? '' : ` (${Number(value.toPrecision(4))} ${unit})`;
    const message = `${termOf(column.role)} ${shown(text.trim())} ${column.unit}${told} is outside ${column.low} to ${column.high} ${unit}; the cell is left out.`;
    const limit = `${column.low} to ${column.high} ${unit}`;
    const advice = 'Correct the cell, choose another unit for the column, or list the value as a code for missing.';
    findings.error({
      code: 'value-out-of-range',
      message,
      file,
      row,
      column: column.header,
      value: Number.isFinite(value) ? text.trim() : shown(text),
      limit,
      advice,
    });
    reading.problem ??= message;
    return Number.NaN;
  }

  return { read, counts };
}

function tally(counts: Map<number, Map<string, number>>, index: number, text: string): void {
  let of = counts.get(index);
  if (!of) {
    of = new Map();
    counts.set(index, of);
  }
  of.set(text, (of.get(text) ?? 0) + 1);
}

function presentCount(values: Float64Array): number {
  let count = 0;
  for (let i = 0; i < values.length; i++) if (!Number.isNaN(values[i])) count++;
  return count;
}

function dropCrossedTemperatures(reading: RowReading, row: number, file: string, findings: FindingList): void {
  const [min, max] = [reading.values[V.min], reading.values[V.max]];
  reading.values[V.min] = Number.NaN;
  reading.values[V.max] = Number.NaN;
  const message = `Minimum temperature ${min.toFixed(1)} °C is above maximum ${max.toFixed(1)} °C; both are left out.`;
  findings.error({
    code: 'tmin-above-tmax',
    message,
    file,
    row,
    value: min.toFixed(1),
    limit: `at most ${max.toFixed(1)} °C`,
    advice: 'Correct the row, or swap the columns in the column plan.',
  });
  reading.problem ??= message;
}

type Combine = (values: Float64Array, extra: ReadonlyMap<ValueColumn, number>) => void;

/** What these columns give beyond their own values: mean wind of the hours, vapour pressure of hour readings or of the deficit. */
function combinations(columns: readonly ValueColumn[]): Combine {
  const of = (role: WeatherValueRole) => columns.filter((column) => column.role === role);
  const has = (role: WeatherValueRole) => of(role).length > 0;
  const winds = has('wind_speed_m_s') ? [] : of('wind_speed_at_hour_m_s');
  const pairs = has('vapour_pressure_kpa') ? [] : hourPairs(columns);
  const deficit = has('vapour_pressure_kpa') || pairs.length > 0 ? undefined : of('vapour_pressure_deficit_kpa')[0];
  if (winds.length === 0 && pairs.length === 0 && !deficit) return () => undefined;
  return (values, extra) => {
    if (winds.length > 0) values[V.wind] = meanOf(winds.map((column) => extra.get(column) ?? Number.NaN));
    if (pairs.length > 0) {
      const readings = pairs.map(
        ([t, rh]): HourReading => ({ airTemperature: extra.get(t) ?? Number.NaN, relativeHumidity: extra.get(rh) ?? Number.NaN }),
      );
      values[V.vapour] = vapourPressureFromHours(readings);
    }
    if (deficit) {
      const temperature = { max: values[V.max], min: values[V.min], mean: values[V.mean] };
      values[V.vapour] = vapourPressureFromDeficit(extra.get(deficit) ?? Number.NaN, temperature);
    }
  };
}

/** Temperature and humidity columns of the same hour. */
export function hourPairs(columns: readonly ValueColumn[]): [ValueColumn, ValueColumn][] {
  const pairs: [ValueColumn, ValueColumn][] = [];
  for (const humidity of columns) {
    if (humidity.role !== 'relative_humidity_at_hour_pct') continue;
    const temperature = columns.find((column) => column.role === 'air_temperature_at_hour_c' && column.hour === humidity.hour);
    if (temperature) pairs.push([temperature, humidity]);
  }
  return pairs;
}

/** Mean of the hours read; NaN when any is missing, so that days stay comparable. */
function meanOf(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}

/** What readers call a role; roles that are only read on the way to another variable are spelt out. */
export function termOf(role: string): string {
  return role in WEATHER_VARIABLES ? WEATHER_VARIABLES[role as WeatherVariable].term : role.replaceAll('_', ' ');
}
