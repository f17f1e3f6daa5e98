/**
 * The stamps of a table with several readings a day: where they stand, how they are written, and what time each reading covers.
 */
import { type DayNumber, dayNumberOf, isLeapYear } from '../base/civil-date.ts';
import { type ByteRow, byteRowOf, cellDay, cellMinute, cellNumber, cellText } from './byte-row.ts';
import type { TableHead } from './csv.ts';
import { dayFromParts, parseDate, YEAR_LIMITS } from './date-cell.ts';
import type { DateOrder } from './reading.ts';
import type { DateColumns } from './weather-date-columns.ts';

const MINUTES_PER_DAY = 1440;
const TEXT_CACHE_LIMIT = 200_000;
/** Time between readings where the table does not tell [min]. */
const USUAL_STEP = 60;

/** Columns that make up a stamp; −1 where there is none. */
export interface StampColumns {
  readonly date: DateColumns;
  readonly dateOrder: DateOrder;
  readonly hour: number;
  readonly minute: number;
}

/** How an hour column is written: hours 0–24 (broken ones too), 0–2400, or 13:30. */
type HourForm = 'hours' | 'hhmm' | 'clock';

/** Reader of the day of a row; NaN where there is none. */
export function dayReader({ date, dateOrder }: Pick<StampColumns, 'date' | 'dateOrder'>): (row: ByteRow) => DayNumber {
  if (date.kind === 'parts') {
    return (row) => dayFromParts(cellNumber(row, date.year), cellNumber(row, date.month), cellNumber(row, date.day)) ?? Number.NaN;
  }
  if (date.kind === 'doy') return (row) => dayOfYearDay(cellNumber(row, date.year), cellNumber(row, date.dayOfYear));
  const known = new Map<string, number>();
  return (row) => {
    const plain = cellDay(row, date.index);
    if (!Number.isNaN(plain)) return plain;
    return remembered(known, cellText(row, date.index), (text) => parseDate(text, dateOrder)?.day ?? Number.NaN);
  };
}

function dayOfYearDay(year: number, day: number): DayNumber {
  const whole = Number.isInteger(year) && Number.isInteger(day) && year >= YEAR_LIMITS.low && year <= YEAR_LIMITS.high;
  return whole && day >= 1 && day <= (isLeapYear(year) ? 366 : 365) ? dayNumberOf(year, 1, 1) + day - 1 : Number.NaN;
}

function remembered(known: Map<string, number>, text: string, read: (text: string) => number): number {
  let value = known.get(text);
  if (value === undefined) {
    value = read(text);
    if (known.size < TEXT_CACHE_LIMIT) known.set(text, value);
  }
  return value;
}

/**
 * Reader of the stamp of a row [min since 1970-01-01 00:00 of the file's clock; of UTC for cells that state their offset]; NaN for a row
 * without a stamp. Day 366 of a common year at hour 0 is the end of its last day.
 */
export function stampReader(columns: StampColumns, head: TableHead): (row: ByteRow) => number {
  const { date, dateOrder, hour, minute } = columns;
  if (hour >= 0) return hourColumnReader(columns, hourForm(head, hour));
  if (date.kind === 'date') {
    const known = new Map<string, number>();
    return (row) => {
      const plain = cellMinute(row, date.index);
      if (!Number.isNaN(plain)) return plain;
      return remembered(known, cellText(row, date.index), (text) => {
        const read = parseDate(text, dateOrder);
        return read ? read.day * MINUTES_PER_DAY + Math.max(0, read.minute) - (read.offset ?? 0) : Number.NaN;
      });
    };
  }
  const day = dayReader(columns);
  return (row) => day(row) * MINUTES_PER_DAY + (minute >= 0 ? cellNumber(row, minute) : 0);
}

function hourColumnReader(columns: StampColumns, form: HourForm): (row: ByteRow) => number {
  const { date, hour, minute } = columns;
  const day = dayReader(columns);
  const minutes = minutesReader(hour, form);
  return (row) => {
    const within = minutes(row) + (minute >= 0 ? cellNumber(row, minute) : 0);
    const start = day(row);
    if (!Number.isNaN(start) || date.kind !== 'doy' || within !== 0) return start * MINUTES_PER_DAY + within;
    return (dayOfYearDay(cellNumber(row, date.year), cellNumber(row, date.dayOfYear) - 1) + 1) * MINUTES_PER_DAY;
  };
}

function minutesReader(hour: number, form: HourForm): (row: ByteRow) => number {
  const valid = (minutes: number) => (minutes >= 0 && minutes <= MINUTES_PER_DAY ? Math.round(minutes * 60) / 60 : Number.NaN);
  if (form === 'hours') return (row) => valid(cellNumber(row, hour) * 60);
  if (form === 'hhmm') {
    return (row) => {
      const number = cellNumber(row, hour);
      return number % 100 < 60 ? valid(Math.floor(number / 100) * 60 + (number % 100)) : Number.NaN;
    };
  }
  return (row) => {
    const match = /^\s*(\d{1,2})[:h.](\d{2})(?::\d{2})?\s*([ap])?/i.exec(cellText(row, hour));
    if (!match) return Number.NaN;
    const hours = match[3] ? (Number(match[1]) % 12) + (match[3].toLowerCase() === 'p' ? 12 : 0) : Number(match[1]);
    return valid(hours * 60 + Number(match[2]));
  };
}

function hourForm(head: TableHead, hour: number): HourForm {
  const cells = head.sample.map((row) => row[hour]?.trim() ?? '').filter((cell) => cell !== '');
  if (cells.some((cell) => /^\d{1,2}[:h]\d{2}/.test(cell))) return 'clock';
  return cells.some((cell) => Number(cell) > 24) ? 'hhmm' : 'hours';
}

/** True when the hour column counts the hours of a day from 1 to 24, each named by its end. */
export function countsToTwentyFour(head: TableHead, hour: number): boolean {
  if (hour < 0) return false;
  const hours = head.sample.map((row) => Number(row[hour]?.trim() || Number.NaN));
  return hours.some((value) => value === 24 || value === 2400) && !hours.some((value) => value === 0);
}

/** What the sample of a table tells of its time. */
export interface SampledTime {
  /** two readings of one site within a day */
  readonly severalADay: boolean;
  /** most frequent time between readings of a site [min] */
  readonly step: number;
  readonly stepKnown: boolean;
}

/** Looks through the sample of a table. */
export function sampleTime(columns: StampColumns, site: number, head: TableHead): SampledTime {
  const read = stampReader(columns, head);
  const last = new Map<string, number>();
  const steps = new Map<number, number>();
  let severalADay = false;
  for (const cells of head.sample) {
    const stamp = read(byteRowOf(cells, 0));
    if (Number.isNaN(stamp)) continue;
    const key = site >= 0 ? cells[site] : '';
    const before = last.get(key);
    last.set(key, stamp);
    if (before === undefined || stamp === before) continue;
    if (Math.floor(before / MINUTES_PER_DAY) === Math.floor(stamp / MINUTES_PER_DAY)) severalADay = true;
    const step = Math.round(Math.abs(stamp - before));
    steps.set(step, (steps.get(step) ?? 0) + 1);
  }
  const [most] = [...steps].sort((a, b) => b[1] - a[1]);
  return { severalADay, step: most ? Math.min(most[0], MINUTES_PER_DAY) : USUAL_STEP, stepKnown: most !== undefined };
}
