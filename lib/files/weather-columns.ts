/**
 * The columns of a weather table: which is what, in which unit, and how sure that is.
 */
import { WEATHER_VARIABLES, type WeatherVariable } from '../weather/variable.ts';
import type { TableHead } from './csv.ts';
import { parseDate } from './date-cell.ts';
import { type FindingList, shown } from './finding-list.ts';
import { NOT_A_NUMBER, numberReader } from './number-cell.ts';
import type { DateOrder, ImportContext, ImportOptions, UnderstoodColumn } from './reading.ts';
import { sampleOf } from './table-columns.ts';
import { findUnit, insideUnit, unitConverter, unitNames } from './unit.ts';
import { guessUnit, type Spread, spreadOf } from './unit-guess.ts';
import {
  isFluxnetTable,
  kindOf,
  type NamedRole,
  ROLE_KIND,
  WEATHER_KEY_ROLES,
  type WeatherRole,
  type WeatherValueRole,
  weatherRoleOf,
} from './weather-column.ts';
import { type DateColumns, dateColumns, dateOrderOf, refusedAsHourly } from './weather-date-columns.ts';

/** One column of values. Limits in the inside unit. */
export interface ValueColumn {
  readonly index: number;
  readonly header: string;
  readonly role: WeatherValueRole;
  readonly unit: string;
  readonly hour: number | null;
  readonly low: number;
  readonly high: number;
  readonly convert: (value: number) => number;
}

export interface WeatherColumns {
  readonly columns: UnderstoodColumn[];
  /** −1 when the table has none */
  readonly site: number;
  readonly date: DateColumns;
  readonly dateOrder: DateOrder;
  readonly values: readonly ValueColumn[];
}

/** Columns that cannot be read as they are; still described, so that the user can choose other roles. */
interface UnusableColumns {
  readonly columns: UnderstoodColumn[];
  readonly date: null;
  readonly dateOrder: null;
}

interface ColumnRequest {
  readonly head: TableHead;
  readonly options: ImportOptions;
  readonly context: ImportContext;
  readonly file: string;
}

interface Assigned extends NamedRole {
  readonly index: number;
  readonly planned: boolean;
}

const EXTRA_LIMITS = {
  vapour_pressure_deficit_kpa: { low: 0, high: 12 },
  relative_humidity_at_hour_pct: { low: 0, high: 105 },
  air_temperature_at_hour_c: { low: -90, high: 60 },
  wind_speed_at_hour_m_s: { low: 0, high: 60 },
} as const;

/** Limits of a value role, in the inside unit. */
function limitsOf(role: WeatherValueRole): { low: number; high: number } {
  const { low, high } = role in EXTRA_LIMITS ? EXTRA_LIMITS[role as keyof typeof EXTRA_LIMITS] : WEATHER_VARIABLES[role as WeatherVariable];
  return { low, high };
}

/** True when a header names anything of a weather table. */
export function isWeatherHeader(header: string): boolean {
  return weatherRoleOf(header, true) !== null;
}

/** Gives every column its role and unit; null after a file-level finding. */
export function bindWeatherColumns(request: ColumnRequest, findings: FindingList): WeatherColumns | UnusableColumns {
  const assigned = withDayAsDate(assignRoles(request, findings), request.head);
  const find = (role: WeatherRole) => assigned.find((column) => column.role === role)?.index ?? -1;
  const date = dateColumns(find, request, findings);
  const unusable = (): UnusableColumns => ({ columns: describeColumns(assigned, [], request), date: null, dateOrder: null });
  if (!date || refusedAsHourly(find('hour'), date, request, findings)) return unusable();
  const dateOrder = dateOrderOf(date, request, findings);
  const values = bindValues(assigned, request, findings);
  if (values.length === 0) {
    findings.refuse({
      code: 'no-weather-column',
      message: 'No column of weather values was recognised.',
      file: request.file,
      advice: 'Choose the role of each column in the column plan.',
    });
    return unusable();
  }
  return { columns: describeColumns(assigned, values, request), site: find('site'), date, dateOrder, values };
}

/** A column headed "day" whose cells are full dates is the date, unless another column is. */
function withDayAsDate(assigned: Assigned[], { sample }: ColumnRequest['head']): Assigned[] {
  if (assigned.some(({ role }) => role === 'date')) return assigned;
  return assigned.map((column) => {
    if (column.role !== 'day' || column.planned) return column;
    const cells = sample.map((row) => row[column.index]?.trim() ?? '').filter((cell) => cell !== '');
    const dates = cells.filter((cell) => parseDate(cell, 'dmy') ?? parseDate(cell, 'mdy'));
    return dates.length > cells.length / 2 ? { ...column, role: 'date' } : column;
  });
}

function assignRoles({ head, options, file }: ColumnRequest, findings: FindingList): Assigned[] {
  const fluxnet = isFluxnetTable(head.header);
  const taken = new Map<string, Assigned>();
  for (const [index, header] of head.header.entries()) {
    const named = plannedRole(header, index, options, findings, file) ?? weatherRoleOf(header, fluxnet);
    if (!named || named === 'ignored') continue;
    const column: Assigned = { ...named, index, planned: named.rank < 0 };
    const key = named.hour === null ? named.role : `${named.role}@${named.hour}`;
    const rival = taken.get(key);
    if (rival) warnDuplicate(rival, column, head.header, file, findings);
    if (!rival || outranks(column, rival)) taken.set(key, column);
  }
  return [...taken.values()].sort((a, b) => a.index - b.index);
}

/** Keys (site, date) go by preferred name; values go by place, unless the plan chose. */
function outranks(column: Assigned, rival: Assigned): boolean {
  if (column.planned !== rival.planned) return column.planned;
  return isKey(column.role) && column.rank < rival.rank;
}

function isKey(role: string): boolean {
  return (WEATHER_KEY_ROLES as readonly string[]).includes(role);
}

function warnDuplicate(rival: Assigned, column: Assigned, headers: readonly string[], file: string, findings: FindingList): void {
  const [used, ignored] = outranks(column, rival) ? [column, rival] : [rival, column];
  findings.add({
    severity: isKey(column.role) ? 'note' : 'warning',
    code: 'duplicate-column',
    message: `Columns "${shown(headers[rival.index])}" and "${shown(headers[column.index])}" both give ${column.role}; "${shown(headers[used.index])}" is used.`,
    file,
    column: headers[ignored.index],
    advice: 'Choose the other one in the column plan if that is meant.',
  });
}

function plannedRole(
  header: string,
  index: number,
  options: ImportOptions,
  findings: FindingList,
  file: string,
): NamedRole | 'ignored' | null {
  const planned = options.plan?.columns?.[header] ?? options.plan?.columns?.[String(index)];
  if (!planned) return null;
  if (planned.role === null) return 'ignored';
  const kind = kindOf(planned.role);
  if (!kind && !isKey(planned.role)) {
    findings.warn({
      code: 'unknown-role',
      message: `The plan gives column "${shown(header)}" the role "${shown(planned.role)}", which does not exist.`,
      file,
      column: header,
      limit: [...WEATHER_KEY_ROLES, ...Object.keys(ROLE_KIND)].join(', '),
    });
    return null;
  }
  const unit = kind && planned.unit ? findUnit(kind, planned.unit) : null;
  if (kind && planned.unit && !unit) {
    findings.warn({
      code: 'unknown-unit',
      message: `The plan gives column "${shown(header)}" the unit "${shown(planned.unit)}", which ${planned.role} cannot have.`,
      file,
      column: header,
      limit: unitNames(kind).join(', '),
    });
  }
  const hour = planned.hour ?? weatherRoleOf(header, false)?.hour ?? null;
  return {
    role: planned.role as WeatherRole,
    unit,
    unitText: planned.unit ?? null,
    hour: planned.role.includes('_at_hour_') ? hour : null,
    rank: -1,
  };
}

function bindValues(assigned: readonly Assigned[], request: ColumnRequest, findings: FindingList): ValueColumn[] {
  const { head } = request;
  const columns = assigned.filter((column) => !isKey(column.role)).map((column) => ({ ...column, role: column.role as WeatherValueRole }));
  const spreads = columns.map((column) => sampleSpread(head, column.index, request.options));
  const explicit = columns.map((column) => column.unit ?? rowUnit(head, column.index, column.role));
  const us = usesUsUnits(columns, explicit, spreads, request.context);
  return columns.map((column, i) => {
    const kind = ROLE_KIND[column.role];
    const header = head.header[column.index];
    const unit = explicit[i] ?? guessedUnit({ ...column, header, spread: spreads[i] }, us, request, findings);
    const convert = unitConverter(kind, unit) ?? ((v: number) => v);
    const value = { index: column.index, header, role: column.role, unit, hour: column.hour, ...limitsOf(column.role), convert };
    if (explicit[i]) warnImplausible(value, spreads[i], us, request, findings);
    return value;
  });
}

function rowUnit(head: TableHead, index: number, role: WeatherValueRole): string | null {
  return head.units?.[index] ? findUnit(ROLE_KIND[role], head.units[index]) : null;
}

function sampleSpread(head: TableHead, index: number, options: ImportOptions): Spread {
  const reader = numberReader(head.decimalComma, options.missingCodes);
  const numbers: number[] = [];
  for (const cells of head.sample) {
    const value = reader.read(cells[index] ?? '');
    if (value !== NOT_A_NUMBER && Number.isFinite(value)) numbers.push(value);
  }
  return spreadOf(numbers);
}

/** Are the unlabelled columns likely in US units? The temperatures tell; without them, the district. */
function usesUsUnits(
  columns: readonly { role: WeatherValueRole }[],
  explicit: readonly (string | null)[],
  spreads: readonly Spread[],
  context: ImportContext,
): boolean {
  const district = context.districtUnits === 'us';
  for (const [i, { role }] of columns.entries()) {
    if (ROLE_KIND[role] !== 'temperature') continue;
    if (explicit[i]) return explicit[i] === '°F';
    if (role === 'air_temperature_max_c') return guessUnit(role, 'temperature', spreads[i], district).unit === '°F';
  }
  return district;
}

function guessedUnit(
  column: { role: WeatherValueRole; header: string; spread: Spread; unitText: string | null },
  us: boolean,
  { file }: ColumnRequest,
  findings: FindingList,
): string {
  const kind = ROLE_KIND[column.role];
  const guess = guessUnit(column.role, kind, column.spread, us);
  const unknown = column.unitText ? `Unit "${shown(column.unitText)}" of column "${shown(column.header)}" is not known. ` : '';
  findings.add({
    severity: guess.confidence < 0.6 || unknown ? 'warning' : 'note',
    code: 'unit-assumed',
    message: `${unknown}Column "${shown(column.header)}": ${guess.reason}.`,
    file,
    column: column.header,
    limit: unitNames(kind).join(', '),
    advice: 'Choose the unit in the column plan if it is another.',
  });
  return guess.unit;
}

function warnImplausible(column: ValueColumn, spread: Spread, us: boolean, { file }: ColumnRequest, findings: FindingList): void {
  const median = column.convert(spread.median);
  if (spread.count === 0 || (median >= column.low && median <= column.high)) return;
  const guess = guessUnit(column.role, ROLE_KIND[column.role], spread, us);
  findings.warn({
    code: 'unit-implausible',
    message: `Column "${shown(column.header)}" says ${column.unit}, but its middle value ${spread.median} is then out of range.`,
    file,
    column: column.header,
    value: String(spread.median),
    limit: `${column.low} to ${column.high} ${insideUnit(ROLE_KIND[column.role])}`,
    advice: guess.unit === column.unit ? 'Check the unit.' : `The values look like ${guess.unit}: choose it in the column plan.`,
  });
}

function describeColumns(assigned: readonly Assigned[], values: readonly ValueColumn[], { head }: ColumnRequest): UnderstoodColumn[] {
  return head.header.map((header, index): UnderstoodColumn => {
    const sample = sampleOf(head.sample, index);
    const column = assigned.find((candidate) => candidate.index === index);
    if (!column)
      return { index, header, unitText: null, role: null, unit: null, confidence: 0, sample, reason: 'not recognised as weather: ignored' };
    const value = values.find((candidate) => candidate.index === index);
    const unitText = column.unitText ?? (head.units?.[index] || null);
    const guessed = value && !column.unit && !rowUnit(head, index, value.role);
    const guess = guessed && guessUnit(value.role, ROLE_KIND[value.role], sampleSpread(head, index, {}), false);
    const confidence = column.planned ? 1 : guess ? guess.confidence : 0.95;
    return { index, header, unitText, role: column.role, unit: value?.unit ?? null, confidence, sample, hour: column.hour ?? undefined };
  });
}
