/**
 * Tables as CSV.
 *
 * Source: RFC 4180 (comma, CRLF, double quotes); UTF-8 without byte order mark; one header row.
 */
type CsvCell = string | number | boolean | null | undefined;

/** First characters that make a spreadsheet run a cell as a formula. Source: OWASP, CSV Injection. */
const FORMULA = /^[=+\-@\t\r]/;
const NEEDS_QUOTES = /[",\r\n]/;

/**
 * One cell. null, undefined, NaN and ±Infinity are empty; numbers are written as they are; text that a spreadsheet would run gets an apostrophe
 * in front.
 *
 * @example csvCell('=1+1') // "'=1+1"
 */
export function csvCell(value: CsvCell): string {
  if (value === null || value === undefined) return '';
  if (typeof value === 'number') return Number.isFinite(value) ? String(value) : '';
  const text = typeof value === 'string' && FORMULA.test(value) ? `'${value}` : String(value);
  return NEEDS_QUOTES.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}

/** One line with its ending. @example csvLine(['a', 1, null]) // 'a,1,\r\n' */
function csvLine(cells: readonly CsvCell[]): string {
  return `${cells.map(csvCell).join(',')}\r\n`;
}

/** A whole table: header from the column keys, then the rows. */
export function csvText(table: {
  readonly columns: readonly { readonly key: string }[];
  readonly rows: Iterable<readonly CsvCell[]>;
}): string {
  return [table.columns.map((column) => column.key), ...table.rows].map(csvLine).join('');
}
