/**
 * Rows of a table as bytes: where each cell begins and ends, and numbers and days read straight from them. A text is only made of a cell
 * when somebody asks for it.
 */
import { type DayNumber, dayNumberOf, daysInMonth } from '../base/civil-date.ts';

/** One row. The object is used again for the next row: copy what must last. Bytes are UTF-8. */
export interface ByteRow {
  /** line in the file, from 1 */
  row: number;
  bytes: Uint8Array;
  /** cells in the row */
  count: number;
  readonly starts: Int32Array;
  readonly ends: Int32Array;
}

const BLANK = 0x20;
const TAB = 0x09;
const ZERO = 0x30;
const POINT = 0x2e;
const COMMA = 0x2c;
const MINUS = 0x2d;
const PLUS = 0x2b;
const COLON = 0x3a;
/** Digits that a double holds exactly. */
const EXACT_DIGITS = 15;
const POWERS = Float64Array.from({ length: EXACT_DIGITS + 1 }, (_, exponent) => 10 ** exponent);
const decoder = new TextDecoder();
const encoder = new TextEncoder();

export function emptyByteRow(cells: number): ByteRow {
  return { row: 0, bytes: new Uint8Array(0), count: 0, starts: new Int32Array(cells), ends: new Int32Array(cells) };
}

/** A row of texts as bytes. */
export function byteRowOf(cells: readonly string[], row: number): ByteRow {
  const into = emptyByteRow(cells.length);
  fillByteRow(into, cells, row);
  return into;
}

/** Overwrites a row with texts; cells beyond its room are counted and not kept. */
export function fillByteRow(into: ByteRow, cells: readonly string[], row: number): void {
  into.bytes = encoder.encode(cells.join(''));
  into.row = row;
  into.count = cells.length;
  let at = 0;
  for (let i = 0; i < cells.length && i < into.starts.length; i++) {
    into.starts[i] = at;
    at += isAscii(cells[i]) ? cells[i].length : encoder.encode(cells[i]).length;
    into.ends[i] = at;
  }
}

function isAscii(text: string): boolean {
  for (let i = 0; i < text.length; i++) if (text.charCodeAt(i) > 127) return false;
  return true;
}

/** Text of a cell, as written. */
export function cellText({ bytes, starts, ends }: ByteRow, cell: number): string {
  const [start, end] = [starts[cell], ends[cell]];
  if (end - start > 24) return decoder.decode(bytes.subarray(start, end));
  let text = '';
  for (let i = start; i < end; i++) {
    if (bytes[i] > 127) return decoder.decode(bytes.subarray(start, end));
    text += String.fromCharCode(bytes[i]);
  }
  return text;
}

/** Texts of all cells that are kept. */
export function cellTexts(row: ByteRow): string[] {
  return Array.from({ length: Math.min(row.count, row.starts.length) }, (_, cell) => cellText(row, cell));
}

/**
 * The number of a cell that is written plainly: an optional sign, at most 15 digits, one decimal mark, blanks around. −0 is 0.
 *
 * @param decimalMark byte of the decimal mark, `,` or `.`
 * @returns NaN for anything else, an empty cell included
 * @example cellNumber(byteRowOf([' -12.50'], 1), 0) // -12.5
 */
export function cellNumber({ bytes, starts, ends }: ByteRow, cell: number, decimalMark: number = POINT): number {
  let at = starts[cell];
  let end = ends[cell];
  while (at < end && (bytes[at] === BLANK || bytes[at] === TAB)) at++;
  while (end > at && (bytes[end - 1] === BLANK || bytes[end - 1] === TAB)) end--;
  if (at === end) return Number.NaN;
  const negative = bytes[at] === MINUS;
  if (negative || bytes[at] === PLUS) at++;
  const first = at;
  let mantissa = 0;
  let mark = -1;
  for (; at < end; at++) {
    const digit = bytes[at] - ZERO;
    if (digit >= 0 && digit <= 9) mantissa = mantissa * 10 + digit;
    else if (bytes[at] === decimalMark && mark < 0) mark = at;
    else return Number.NaN;
  }
  const digits = end - first - (mark < 0 ? 0 : 1);
  if (digits === 0 || digits > EXACT_DIGITS) return Number.NaN;
  const value = mark < 0 ? mantissa : mantissa / POWERS[end - mark - 1];
  return negative && value !== 0 ? -value : value;
}

/** Byte of the decimal mark. */
export function decimalMarkOf(decimalComma: boolean): number {
  return decimalComma ? COMMA : POINT;
}

function digitsAt(bytes: Uint8Array, at: number, count: number): number {
  let value = 0;
  for (let i = at; i < at + count; i++) {
    const digit = bytes[i] - ZERO;
    if (digit < 0 || digit > 9) return Number.NaN;
    value = value * 10 + digit;
  }
  return value;
}

function dayAt(bytes: Uint8Array, at: number, gap: number): DayNumber {
  const year = digitsAt(bytes, at, 4);
  const month = digitsAt(bytes, at + 4 + gap, 2);
  const day = digitsAt(bytes, at + 6 + 2 * gap, 2);
  if (!(year >= 1800 && year <= 2150 && month >= 1 && month <= 12 && day >= 1 && day <= daysInMonth(year, month))) return Number.NaN;
  return dayNumberOf(year, month, day);
}

/** Day of a cell written YYYY-MM-DD or YYYYMMDD; NaN for anything else. @example cellDay(byteRowOf(['1970-01-02'], 1), 0) // 1 */
export function cellDay({ bytes, starts, ends }: ByteRow, cell: number): DayNumber {
  const [start, end] = [starts[cell], ends[cell]];
  if (end - start === 8) return dayAt(bytes, start, 0);
  if (end - start !== 10 || bytes[start + 4] !== MINUS || bytes[start + 7] !== MINUS) return Number.NaN;
  return dayAt(bytes, start, 1);
}

/**
 * Minutes since 1970-01-01 00:00 of a cell written YYYY-MM-DD hh:mm (with a blank or T) or YYYYMMDDhhmm; NaN for anything else.
 *
 * @example cellMinute(byteRowOf(['1970-01-02T01:30'], 1), 0) // 1530
 */
export function cellMinute({ bytes, starts, ends }: ByteRow, cell: number): number {
  const [start, end] = [starts[cell], ends[cell]];
  let day = Number.NaN;
  let hour = Number.NaN;
  let minute = Number.NaN;
  if (end - start === 16 && bytes[start + 4] === MINUS && bytes[start + 7] === MINUS && bytes[start + 13] === COLON) {
    if (bytes[start + 10] !== BLANK && bytes[start + 10] !== 0x54) return Number.NaN;
    [day, hour, minute] = [dayAt(bytes, start, 1), digitsAt(bytes, start + 11, 2), digitsAt(bytes, start + 14, 2)];
  } else if (end - start === 12) {
    [day, hour, minute] = [dayAt(bytes, start, 0), digitsAt(bytes, start + 8, 2), digitsAt(bytes, start + 10, 2)];
  }
  return hour <= 23 && minute <= 59 ? day * 1440 + hour * 60 + minute : Number.NaN;
}
