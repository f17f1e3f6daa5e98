/**
 * A cell of a table → a number, NaN for missing, or "not a number".
 */

/** Texts that mean missing in any column, lower case. */
const MISSING_TEXT = new Set(['', 'na', 'n/a', '#n/a', 'nan', 'null', 'none', 'nil', '-', '--', 'missing']);
/** Texts that mean missing where a number should stand; elsewhere they may be codes. */
const MISSING_NUMBER_TEXT = new Set([...MISSING_TEXT, '.', '*', 'm', '-inf', 'inf']);
/** Numbers that stand for missing when they are outside the range of the column. */
const MISSING_NUMBER = new Set([
  -9999, -9999.9, -9999.99, -999, -999.9, -999.99, -99, -99.9, -99.99, -6999, -7999, -3276.7, 999, 999.9, 9999, 9999.9, 99999, 32767,
]);
const PLAIN = /^[-+]?(\d+\.?\d*|\.\d+)(e[-+]?\d+)?$/i;
const GROUPED = /^[-+]?\d{1,3}(,\d{3})+(\.\d+)?$/;

/** Returned for a text that is neither missing nor a number. */
export const NOT_A_NUMBER = Symbol('not a number');

export interface NumberReader {
  /** number, NaN when the text says missing, or NOT_A_NUMBER */
  read(text: string): number | typeof NOT_A_NUMBER;
  /** the text that made the last NaN, for counting */
  readonly lastMissing: string;
}

/** True when a number out of range is one of the customary codes for missing. */
export function isMissingNumber(value: number): boolean {
  return MISSING_NUMBER.has(value);
}

/** @example isMissingText(' N/A ') // true */
export function isMissingText(text: string): boolean {
  return MISSING_TEXT.has(text.trim().toLowerCase());
}

/**
 * Reader of number cells. Padded cells are trimmed; a decimal comma and grouped thousands are understood; -0 becomes 0.
 *
 * @param missingCodes further texts that mean missing; numbers among them match by value
 */
export function numberReader(decimalComma: boolean, missingCodes: readonly string[] = []): NumberReader {
  const codes = new Set(missingCodes.map((code) => code.trim().toLowerCase()));
  const codeNumbers = new Set(missingCodes.map(Number).filter((code) => Number.isFinite(code)));
  const reader = {
    lastMissing: '',
    read(text: string): number | typeof NOT_A_NUMBER {
      const cell = text.trim();
      const value = cell === '' ? Number.NaN : plainNumber(cell, decimalComma);
      if (Number.isFinite(value) && !codeNumbers.has(value)) return value === 0 ? 0 : value;
      const key = cell.toLowerCase();
      if (!Number.isFinite(value) && !MISSING_NUMBER_TEXT.has(key) && !codes.has(key)) return NOT_A_NUMBER;
      reader.lastMissing = cell;
      return Number.NaN;
    },
  };
  return reader;
}

function plainNumber(cell: string, decimalComma: boolean): number {
  if (decimalComma && cell.includes(',')) {
    const text = cell.replace(/\./g, '').replace(',', '.');
    return PLAIN.test(text) ? Number(text) : Number.NaN;
  }
  const value = Number(cell);
  if (Number.isFinite(value) && (cell.length < 3 || !/[xob]/i.test(cell[1]))) return value;
  return GROUPED.test(cell) ? Number(cell.replace(/,/g, '')) : Number.NaN;
}
