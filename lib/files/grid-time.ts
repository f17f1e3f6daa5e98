/**
 * When the steps of a field are: its time coordinate, the bounds of its steps, or year, month, day and hour variables in its place.
 */
import { dayNumberOf, isIsoDate } from '../base/civil-date.ts';
import { SECONDS_PER_DAY } from '../base/units.ts';
import type { ArrayFile, ArrayVariable } from './array-file.ts';
import { shown } from './finding-list.ts';
import { type Calendar, calendarOf, civilSeconds, isCalendarDate } from './grid-calendar.ts';
import { isTimeUnits, parseTimeUnits } from './grid-epoch.ts';
import { nameKey, textAttribute } from './grid-roles.ts';

/** The steps of a field in time. Seconds count from 1970-01-01 00:00 of the civil calendar, in the zone of the file. */
export interface TimeAxis {
  readonly stamps: Float64Array;
  /** start and end of each step, where the file gives them */
  readonly bounds: { readonly from: Float64Array; readonly to: Float64Array } | null;
  readonly calendar: Calendar;
  /** true when the file itself says that the stamps are UTC or an offset from it */
  readonly zoned: boolean;
  /** what the user should know about it */
  readonly note: { readonly code: string; readonly message: string } | null;
}

/** Why a field has no usable time. */
export interface TimeFault {
  readonly code: string;
  readonly message: string;
  readonly advice: string;
}

export function isTimeFault(time: TimeAxis | TimeFault): time is TimeFault {
  return 'message' in time;
}

const TIME_NAMES = /^(time|day|date|validtime|t|times|datetime)\d?$/;

/** The variable that gives the time of a dimension, or null. */
export function timeVariableOf(file: ArrayFile, dimension: string): ArrayVariable | null {
  const along = file.variables.filter(
    (variable) => variable.dimensions[0] === dimension && variable.dimensions.length <= (variable.type === 'text' ? 2 : 1),
  );
  const timed = along.filter(isTimeVariable);
  return (
    timed.find((variable) => variable.name === dimension) ??
    timed.find((variable) => textAttribute(variable.attributes, 'standard_name') === 'time') ??
    timed[0] ??
    null
  );
}

function isTimeVariable(variable: ArrayVariable): boolean {
  const standardName = textAttribute(variable.attributes, 'standard_name');
  if (standardName === 'forecast_reference_time' || standardName === 'forecast_period') return false;
  if (isTimeUnits(textAttribute(variable.attributes, 'units'))) return true;
  return (
    standardName === 'time' ||
    textAttribute(variable.attributes, 'axis') === 'T' ||
    (variable.type === 'text' && TIME_NAMES.test(nameKey(variable.name)))
  );
}

/** True when a dimension runs along time, by its coordinate or by its name. */
export function isTimeDimension(file: ArrayFile, dimension: string): boolean {
  return timeVariableOf(file, dimension) !== null || (TIME_NAMES.test(nameKey(dimension)) && dateParts(file, dimension) !== null);
}

/** Time of the steps along a dimension. */
export async function readTimeAxis(file: ArrayFile, dimension: string, count: number): Promise<TimeAxis | TimeFault> {
  const variable = timeVariableOf(file, dimension);
  const parts = dateParts(file, dimension);
  if (!variable) return parts ? await timeFromParts(file, parts, count, null) : missingTime(dimension);
  const time = variable.type === 'text' ? await timeFromText(file, variable, count) : await timeFromCount(file, variable, count);
  if (!isTimeFault(time) || !parts) return time;
  return timeFromParts(
    file,
    parts,
    count,
    `${time.message} The variables ${parts.map(({ name }) => name).join(', ')} are used in its place.`,
  );
}

/** Time of a field without a time dimension: a scalar coordinate, or null when the file has none. */
export async function readScalarTime(file: ArrayFile): Promise<TimeAxis | TimeFault | null> {
  const scalars = file.variables.filter(
    (variable) => variable.shape.every((length) => length === 1) && variable.type !== 'text' && isTimeVariable(variable),
  );
  const variable = scalars.find((candidate) => textAttribute(candidate.attributes, 'standard_name') === 'time') ?? scalars[0];
  return variable ? timeFromCount(file, variable, 1) : null;
}

function missingTime(dimension: string): TimeFault {
  return {
    code: 'no-time',
    message: `Nothing in the file says when the steps along "${shown(dimension)}" are.`,
    advice: 'Add a time coordinate with units such as "days since 2020-01-01".',
  };
}

async function timeFromCount(file: ArrayFile, variable: ArrayVariable, count: number): Promise<TimeAxis | TimeFault> {
  const units = textAttribute(variable.attributes, 'units');
  const calendarText = textAttribute(variable.attributes, 'calendar');
  const calendar = calendarOf(calendarText);
  if (calendar === null) return badCalendar(variable, calendarText);
  if (/^day as %Y%m%d/i.test(units)) return timeFromDecimalDates(await readAll(file, variable, count), calendar);
  const parsed = parseTimeUnits(units);
  if ('fault' in parsed) return badUnits(variable, units, parsed.fault);
  if (!isCalendarDate(calendar, parsed.epoch)) {
    return badUnits(variable, units, `${epochText(parsed.epoch)} is a day that the calendar "${calendarText || 'standard'}" does not have`);
  }
  const values = await readAll(file, variable, count);
  const offset = parsed.offset ?? 0;
  const convert = (counts: Float64Array) => {
    const seconds = civilSeconds(calendar, parsed.epoch, wholeSeconds(counts, parsed.stepSeconds));
    return offset === 0 ? seconds : seconds.map((second) => second - offset);
  };
  const bounds = await readBounds(file, variable, count);
  return {
    stamps: convert(values),
    bounds: bounds && { from: convert(bounds.from), to: convert(bounds.to) },
    calendar,
    zoned: parsed.offset !== null,
    note: null,
  };
}

/** Counts as seconds; fractions of days carry rounding errors that whole seconds take away. */
function wholeSeconds(counts: Float64Array, stepSeconds: number): Float64Array {
  return counts.map((count) => Math.round(count * stepSeconds));
}

async function readAll(file: ArrayFile, variable: ArrayVariable, count: number): Promise<Float64Array> {
  const scalar = variable.shape.every((length) => length === 1);
  return file.read(
    variable.name,
    variable.shape.map(() => 0),
    variable.shape.map((length) => (scalar ? 1 : Math.min(length, count))),
  );
}

async function readBounds(
  file: ArrayFile,
  variable: ArrayVariable,
  count: number,
): Promise<{ from: Float64Array; to: Float64Array } | null> {
  const name = textAttribute(variable.attributes, 'bounds') || textAttribute(variable.attributes, 'climatology');
  const bounds =
    name === '' ? undefined : file.variables.find((candidate) => candidate.name === name || candidate.name.endsWith(`/${name}`));
  if (bounds?.shape.at(-1) !== 2 || bounds.shape.slice(0, -1).reduce((a, b) => a * b, 1) !== count) return null;
  const values = await file.read(
    bounds.name,
    bounds.shape.map(() => 0),
    bounds.shape,
  );
  return { from: values.filter((_, i) => i % 2 === 0), to: values.filter((_, i) => i % 2 === 1) };
}

async function timeFromText(file: ArrayFile, variable: ArrayVariable, count: number): Promise<TimeAxis | TimeFault> {
  const texts = await file.readText(
    variable.name,
    variable.shape.map(() => 0),
    variable.shape,
  );
  const stamps = Float64Array.from(texts.slice(0, count), secondsOfText);
  const bad = stamps.findIndex((stamp) => Number.isNaN(stamp));
  if (bad < 0) return { stamps, bounds: null, calendar: 'standard', zoned: texts.every((text) => /Z\s*$/.test(text)), note: null };
  return {
    code: 'bad-time',
    message: `Time "${shown(texts[bad] ?? '')}" of step ${bad + 1} is not a date.`,
    advice: 'Write times as YYYY-MM-DDThh:mm.',
  };
}

function secondsOfText(text: string): number {
  const match = /^(\d{4}-\d{2}-\d{2})(?:[T ](\d{2}):?(\d{2})(?::?(\d{2}(?:\.\d+)?))?)?\s*Z?$/.exec(text.trim());
  if (!match || !isIsoDate(match[1])) return Number.NaN;
  const [year, month, day] = match[1].split('-').map(Number);
  return (
    dayNumberOf(year, month, day) * SECONDS_PER_DAY + Number(match[2] ?? 0) * 3600 + Number(match[3] ?? 0) * 60 + Number(match[4] ?? 0)
  );
}

function timeFromDecimalDates(values: Float64Array, calendar: Calendar): TimeAxis {
  const stamps = values.map((value) => {
    const date = Math.floor(value);
    const [year, month, day] = [Math.floor(date / 10000), Math.floor(date / 100) % 100, date % 100];
    return dayNumberOf(year, month, day) * SECONDS_PER_DAY + Math.round((value - date) * SECONDS_PER_DAY);
  });
  return { stamps, bounds: null, calendar, zoned: false, note: null };
}

/** Variables year, month, day and perhaps hour and minute along a dimension, or null. */
function dateParts(file: ArrayFile, dimension: string): readonly ArrayVariable[] | null {
  const along = (name: string) =>
    file.variables.find(
      (variable) =>
        nameKey(variable.name) === name &&
        variable.type !== 'text' &&
        variable.dimensions.every((other, i) => (other === dimension ? true : variable.shape[i] === 1)) &&
        variable.dimensions.includes(dimension),
    );
  const parts = ['year', 'month', 'day', 'hour', 'minute'].map(along);
  if (!parts[0] || !parts[1] || !parts[2]) return null;
  return parts.filter((part) => part !== undefined);
}

async function timeFromParts(
  file: ArrayFile,
  parts: readonly ArrayVariable[],
  count: number,
  message: string | null,
): Promise<TimeAxis | TimeFault> {
  const [year, month, day, hour, minute] = await Promise.all(
    parts.map((part) =>
      file.read(
        part.name,
        part.shape.map(() => 0),
        part.shape,
      ),
    ),
  );
  const stamps = new Float64Array(count);
  for (let i = 0; i < count; i++) {
    const seconds = Math.round((hour?.[i] ?? 0) * 3600 + (minute?.[i] ?? 0) * 60);
    const valid = year[i] > 0 && month[i] >= 1 && month[i] <= 12 && day[i] >= 1 && day[i] <= 31;
    if (!valid)
      return {
        code: 'bad-time',
        message: `Year, month and day of step ${i + 1} are ${year[i]}, ${month[i]}, ${day[i]}: no date.`,
        advice: 'Correct the variables of the date.',
      };
    stamps[i] = dayNumberOf(year[i], month[i], day[i]) * SECONDS_PER_DAY + seconds;
  }
  return { stamps, bounds: null, calendar: 'standard', zoned: false, note: message === null ? null : { code: 'time-from-parts', message } };
}

function badCalendar(variable: ArrayVariable, calendar: string): TimeFault {
  return {
    code: 'unknown-calendar',
    message: `The calendar "${shown(calendar)}" of "${shown(variable.name)}" cannot be placed among civil dates.`,
    advice: 'Convert the file to the standard calendar.',
  };
}

function badUnits(variable: ArrayVariable, units: string, fault: string): TimeFault {
  return {
    code: 'bad-time-units',
    message: `The time units "${shown(units)}" of "${shown(variable.name)}" cannot be used: ${fault}.`,
    advice: 'Give the time axis units such as "days since 1950-01-01".',
  };
}

function epochText({ year, month, day }: { year: number; month: number; day: number }): string {
  return `${String(year).padStart(4, '0')}-${String(month).padStart(2, '0')}-${String(day).padStart(2, '0')}`;
}
