/**
 * GeoTIFF series: which quantity a band is, and of which day, from its description, its tags or the name of its file.
 */
import { dayNumberOf, daysInMonth, isLeapYear } from '../base/civil-date.ts';
import { SECONDS_PER_DAY } from '../base/units.ts';
import type { ArrayVariable } from './array-file.ts';
import type { GridFile } from './grid-files.ts';
import { textAttribute } from './grid-roles.ts';
import type { TimeAxis, TimeFault } from './grid-time.ts';

/** Years a date in a name may have: digits outside are something else. */
const YEARS = { low: 1850, high: 2200 };
const SEPARATED = /(?<!\d)(\d{4})[-_.](\d{2})[-_.](\d{2})(?!\d)/;
const JOINED = /(?<!\d)(\d{4})(\d{2})(\d{2})(?!\d)/;
const DAY_OF_YEAR = /(?<!\d)(\d{4})[-_.]?(\d{3})(?!\d)/;

/** A date in a text, with the text that is left without it; null when it has none. @example dateInText('tmax_20200131')?.rest // 'tmax' */
export function dateInText(text: string): { readonly day: number; readonly rest: string } | null {
  for (const pattern of [SEPARATED, JOINED]) {
    const match = pattern.exec(text);
    if (!match) continue;
    const [year, month, day] = [Number(match[1]), Number(match[2]), Number(match[3])];
    if (year < YEARS.low || year > YEARS.high || month < 1 || month > 12 || day < 1 || day > daysInMonth(year, month)) continue;
    return { day: dayNumberOf(year, month, day), rest: without(text, match[0]) };
  }
  const match = DAY_OF_YEAR.exec(text);
  if (!match) return null;
  const [year, dayOfYear] = [Number(match[1]), Number(match[2])];
  if (year < YEARS.low || year > YEARS.high || dayOfYear < 1 || dayOfYear > (isLeapYear(year) ? 366 : 365)) return null;
  return { day: dayNumberOf(year, 1, 1) + dayOfYear - 1, rest: without(text, match[0]) };
}

function without(text: string, part: string): string {
  return text
    .replace(part, '')
    .replace(/^[-_.\s]+|[-_.\s]+$/g, '')
    .replace(/[-_.\s]{2,}/g, '_');
}

/** What a band of a GeoTIFF is called, and when it is. */
export interface Band {
  readonly label: string;
  readonly time: TimeAxis | TimeFault;
}

/** Reads the names and dates around a band. */
export function bandOf(file: GridFile, variable: ArrayVariable): Band {
  const bands = file.arrays.variables.filter((other) => other.name.startsWith('band_')).length;
  const description = textAttribute(variable.attributes, 'long_name');
  const inDescription = dateInText(description);
  const inName = dateInText(file.stem);
  const stem = inName?.rest ?? file.stem;
  const words = inDescription ? inDescription.rest : description;
  const label = words !== '' ? words : bands > 1 && !inDescription ? `${stem || 'band'}_${variable.name.slice(5)}` : stem || variable.name;
  const tagged = ['ACQUISITIONDATETIME', 'TIME', 'time', 'DATE', 'date'].map((name) =>
    dateInText(textAttribute(variable.attributes, name) || textAttribute(file.arrays.attributes, name)),
  );
  const day = inDescription?.day ?? inName?.day ?? tagged.find((found) => found !== null)?.day;
  return { label, time: day === undefined ? undated(file) : dated(day) };
}

function dated(day: number): TimeAxis {
  const from = Float64Array.of(day * SECONDS_PER_DAY);
  return {
    stamps: from,
    bounds: { from, to: Float64Array.of((day + 1) * SECONDS_PER_DAY) },
    calendar: 'standard',
    zoned: false,
    note: null,
  };
}

function undated(file: GridFile): TimeFault {
  return {
    code: 'no-date',
    message: `Neither the name of "${file.name}" nor its bands say of which day it is.`,
    advice: 'Put the date into the file name (YYYYMMDD, YYYY-MM-DD or year and day of year) or into the description of each band.',
  };
}
