/**
 * The columns of a weather table: which is what, in which unit, and how sure that is.
 */
import { columnName, unitSuffixes } from './column-name.ts';
import type { TableHead } from './csv.ts';
import { parseDate } from './date-cell.ts';
import { type FindingList, shown } from './finding-list.ts';
import { NOT_A_NUMBER, numberReader } from './number-cell.ts';
import type { DateOrder, ImportContext, ImportOptions, UnderstoodColumn } from './reading.ts';
import { sampleOf } from './table-columns.ts';
import { findUnit, unitNames } from './unit.ts';
import { guessUnit, type Spread, spreadOf } from './unit-guess.ts';
import {
  customaryUnit,
  flaggedColumn,
  isFluxnetTable,
  isSeaLevelPressure,
  kindOf,
  type NamedRole,
  originColumn,
  ROLE_KIND,
  WEATHER_KEY_ROLES,
  type WeatherRole,
  type WeatherValueRole,
  weatherRoleOf,
} from './weather-column.ts';
import { type DateColumns, dateColumns, dateOrderOf, timeOf } from './weather-date-columns.ts';
import { dayMeaning, guessReadingUnit, readingMeaning } from './weather-meaning.ts';
import type { SampledTime } from './weather-stamp.ts';

/** One column of values. Limits in the inside unit. */
export interface ValueColumn {
  readonly index: number;
  readonly header: string;
  readonly role: WeatherValueRole;
  readonly unit: string;
  readonly hour: number | null;
  readonly low: number;
  readonly high: number;
  /** unit of the limits, and of what `convert` gives */
  readonly limitUnit: string;
  /** null where the numbers are in the inside unit already */
  readonly convert: ((value: number) => number) | null;
  /** column of its quality flags, −1 when it has none: a number other than 0 means missing */
  readonly flag: number;
  /** column of codes of its origin, −1 when it has none */
  readonly origin: number;
}

export interface WeatherColumns {
  readonly columns: UnderstoodColumn[];
  /** −1 when the table has none */
  readonly site: number;
  readonly date: DateColumns;
  readonly dateOrder: DateOrder;
  readonly hour: number;
  readonly minute: number;
  /** of a table with several readings a day; null for a daily one */
  readonly time: SampledTime | null;
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
  /** header → what a legend outside the table says the column is */
  readonly legend?: ReadonlyMap<string, string>;
}

interface Assigned extends NamedRole {
  readonly index: number;
  readonly planned: boolean;
}

/** True when a header names anything of a weather table. */
export function isWeatherHeader(header: string): boolean {
  return weatherRoleOf(header, true) !== null;
}

/** Gives every column its role and unit; null after a file-level finding. */
export function bindWeatherColumns(request: ColumnRequest, findings: FindingList): WeatherColumns | UnusableColumns {
  const assigned = withClock(withDayAsDate(assignRoles(request, findings), request.head), request.head);
  const find = (role: WeatherRole) => assigned.find((column) => column.role === role)?.index ?? -1;
  const date = dateColumns(find, request, findings);
  const unusable = (): UnusableColumns => ({ columns: describeColumns(assigned, [], request, null), date: null, dateOrder: null });
  if (!date) return unusable();
  const dateOrder = dateOrderOf(date, request, findings);
  const stamps = { date, dateOrder, hour: find('hour'), minute: find('minute') };
  const time = timeOf(stamps, find('site'), request, findings);
  const values = bindValues(assigned, request, time, findings);
  if (values.length === 0) {
    findings.refuse({
      code: 'no-weather-column',
      message: 'No column of weather values was recognised.',
      file: request.file,
      advice: 'Choose the role of each column in the column plan.',
    });
    return unusable();
  }
  noteSeaLevelPressure(request, assigned, findings);
  return { columns: describeColumns(assigned, values, request, time), site: find('site'), ...stamps, time, values };
}

/** A second column of time beside the date, with clock readings in it, is the hour. */
function withClock(assigned: Assigned[], { header, sample }: TableHead): Assigned[] {
  if (assigned.some(({ role }) => role === 'hour')) return assigned;
  const date = assigned.find(({ role }) => role === 'date');
  const index = header.findIndex((name, at) => at !== date?.index && /^(time|clock|local ?time|time ?of ?day)\b/i.test(name.trim()));
  if (!date || index < 0 || assigned.some((column) => column.index === index)) return assigned;
  const cells = sample.map((row) => row[index]?.trim() ?? '').filter((cell) => cell !== '');
  const clock = cells.filter(
    (cell) => /^\d{1,2}[:h]\d{2}(:\d{2})?(\s*[ap]m)?$/i.test(cell) || (/^\d{1,4}$/.test(cell) && Number(cell) <= 2400),
  );
  if (cells.length === 0 || clock.length < cells.length) return assigned;
  const column: Assigned = { role: 'hour', unit: null, unitText: null, hour: null, rank: 0, index, planned: false };
  return [...assigned, column].sort((a, b) => a.index - b.index);
}

function noteSeaLevelPressure({ head, file }: ColumnRequest, assigned: readonly Assigned[], findings: FindingList): void {
  const header = head.header.find((name, index) => isSeaLevelPressure(name) && !assigned.some((column) => column.index === index));
  if (header === undefined) return;
  findings.note({
    code: 'sea-level-pressure',
    message: `Column "${shown(header)}" is pressure reduced to sea level, not the pressure at the station; it is not used. Pressure follows from the elevation (FAO-56 Eq. 7).`,
    file,
    column: header,
  });
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

function assignRoles({ head, options, file, legend }: ColumnRequest, findings: FindingList): Assigned[] {
  const fluxnet = isFluxnetTable(head.header);
  const taken = new Map<string, Assigned>();
  for (const [index, header] of head.header.entries()) {
    const named = plannedRole(header, index, options, findings, file) ?? headerRole(header, fluxnet, legend);
    if (!named || named === 'ignored') continue;
    const column: Assigned = { ...named, index, planned: named.rank < 0 };
    const key = named.hour === null ? named.role : `${named.role}@${named.hour}`;
    const rival = taken.get(key);
    if (rival) warnDuplicate(rival, column, head.header, file, findings);
    if (!rival || outranks(column, rival)) taken.set(key, column);
  }
  return [...taken.values()].sort((a, b) => a.index - b.index);
}

/** Role of a header; where a legend explains it, the legend gives the unit, and the role of a header that says nothing by itself. */
function headerRole(header: string, fluxnet: boolean, legend: ColumnRequest['legend']): NamedRole | null {
  const named = weatherRoleOf(header, fluxnet);
  const explained = legend?.get(header);
  if (explained === undefined || (named && isKey(named.role))) return named;
  const { unitText } = columnName(explained);
  const role = named ?? weatherRoleOf(explained, false);
  const kind = role && kindOf(role.role);
  return role && kind ? { ...role, unitText: unitText ?? role.unitText, unit: (unitText && findUnit(kind, unitText)) || role.unit } : named;
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

function bindValues(assigned: readonly Assigned[], request: ColumnRequest, time: SampledTime | null, findings: FindingList): ValueColumn[] {
  const { head } = request;
  const columns = assigned
    .filter((column) => !isKey(column.role) && !(time && column.hour !== null))
    .map((column) => ({ ...column, role: column.role as WeatherValueRole }));
  const spreads = columns.map((column) => sampleSpread(head, column.index, request.options));
  const explicit = columns.map((column) => column.unit ?? rowUnit(head, column.index, column.role));
  const us = usesUsUnits(columns, explicit, spreads, request.context);
  return columns.map((column, i) => {
    const header = head.header[column.index];
    const unit = explicit[i] ?? guessedUnit({ ...column, header, spread: spreads[i], time }, us, request, findings);
    const meaning = time ? readingMeaning(column.role, unit, time.step) : dayMeaning(column.role, unit);
    const beside = { flag: flagColumn(head, header), origin: besideColumn(head, header, originColumn) };
    const value = { index: column.index, header, role: column.role, unit, hour: column.hour, ...meaning, ...beside };
    if (explicit[i]) warnImplausible(value, spreads[i], us, request, findings);
    return value;
  });
}

/** Column of the quality flags of a column, −1 when there is none. FLUXNET's tell how a gap was filled and are not for leaving out. */
function flagColumn(head: TableHead, header: string): number {
  return isFluxnetTable(head.header) ? -1 : besideColumn(head, header, flaggedColumn);
}

function besideColumn(head: TableHead, header: string, names: (other: string) => string | null): number {
  const own = new Set([...unitSuffixes(columnName(header).words)].map(({ rest }) => rest.join(' ')));
  return head.header.findIndex((other) => {
    const of = names(other);
    return of !== null && other !== header && own.has(of);
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
  column: { role: WeatherValueRole; header: string; spread: Spread; unitText: string | null; time: SampledTime | null },
  us: boolean,
  { file }: ColumnRequest,
  findings: FindingList,
): string {
  const kind = ROLE_KIND[column.role];
  const guess = guessOf(column.header, column.role, column.spread, { us, time: column.time });
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
  const median = column.convert === null ? spread.median : column.convert(spread.median);
  if (spread.count === 0 || (median >= column.low && median <= column.high)) return;
  const guess = guessUnit(column.role, ROLE_KIND[column.role], spread, us);
  findings.warn({
    code: 'unit-implausible',
    message: `Column "${shown(column.header)}" says ${column.unit}, but its middle value ${spread.median} is then out of range.`,
    file,
    column: column.header,
    value: String(spread.median),
    limit: `${column.low} to ${column.high} ${column.limitUnit}`,
    advice: guess.unit === column.unit ? 'Check the unit.' : `The values look like ${guess.unit}: choose it in the column plan.`,
  });
}

/** Unit guessed from name, values and the time that a reading covers. */
function guessOf(
  header: string,
  role: WeatherValueRole,
  spread: Spread,
  { us, time }: { us: boolean; time: SampledTime | null },
): ReturnType<typeof guessUnit> {
  const customary = customaryUnit(header);
  if (customary)
    return { unit: customary, confidence: 0.5, reason: `no unit given; read as ${customary}, as columns of this name usually are` };
  return (time && guessReadingUnit(role, spread)) ?? guessUnit(role, ROLE_KIND[role], spread, us);
}

function describeColumns(
  assigned: readonly Assigned[],
  values: readonly ValueColumn[],
  { head }: ColumnRequest,
  time: SampledTime | null,
): UnderstoodColumn[] {
  return head.header.map((header, index): UnderstoodColumn => {
    const sample = sampleOf(head.sample, index);
    const column = assigned.find((candidate) => candidate.index === index);
    if (!column) return { index, header, unitText: null, role: null, unit: null, confidence: 0, sample, reason: whyIgnored(header) };
    const value = values.find((candidate) => candidate.index === index);
    const unitText = column.unitText ?? (head.units?.[index] || null);
    const guessed = value && !column.unit && !rowUnit(head, index, value.role);
    const guess = guessed && guessOf(header, value.role, sampleSpread(head, index, {}), { us: false, time });
    const confidence = column.planned ? 1 : guess ? guess.confidence : 0.95;
    return { index, header, unitText, role: column.role, unit: value?.unit ?? null, confidence, sample, hour: column.hour ?? undefined };
  });
}

function whyIgnored(header: string): string {
  if (isSeaLevelPressure(header)) return 'pressure at sea level, not at the station: ignored';
  if (flaggedColumn(header)) return 'quality flags of another column';
  if (originColumn(header)) return 'codes of origin of another column';
  return 'not recognised as weather: ignored';
}
