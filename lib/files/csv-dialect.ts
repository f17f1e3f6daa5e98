/**
 * How a delimited text is written: delimiter, decimal mark, where the header is.
 */

export type Delimiter = ',' | ';' | '\t' | '|';

const DELIMITERS: readonly Delimiter[] = [',', ';', '\t', '|'];
/** Lines looked at when the dialect is sniffed. */
const SNIFF_LINES = 60;

const COMMA_DECIMAL = /^\s*[-+]?(\d+|\d{1,3}(\.\d{3})+),\d+\s*$/;
const POINT_DECIMAL = /^\s*[-+]?\d*\.\d+(e[-+]?\d+)?\s*$/i;
const NUMBER_LIKE = /^\s*[-+]?[\d.,]*\d[\d.,]*(e[-+]?\d+)?\s*$/i;
const DATE_LIKE = /^\s*\d{1,4}[-/.]\d{1,2}[-/.]\d{1,4}/;

/**
 * The delimiter that cuts most lines into the same number of cells; on a tie the one that cuts more.
 *
 * @example sniffDelimiter('a;b\n1,5;2\n') // ';'
 */
export function sniffDelimiter(text: string): Delimiter | null {
  const lines = linesOutsideQuotes(text);
  let best: { delimiter: Delimiter; lines: number; cells: number } | null = null;
  for (const delimiter of DELIMITERS) {
    const mode = modalCount(lines.map((line) => line.split(delimiter).length - 1));
    if (mode.value === 0) continue;
    const better = !best || mode.lines > best.lines || (mode.lines === best.lines && mode.value > best.cells);
    if (better) best = { delimiter, lines: mode.lines, cells: mode.value };
  }
  return best?.delimiter ?? null;
}

/** Lines with quoted parts removed, comment lines and blank ones left out. */
function linesOutsideQuotes(text: string): string[] {
  return text
    .replace(/"[^"]*"/g, '')
    .split(/\r\n|\n|\r/)
    .filter((line) => line.trim() !== '' && !line.startsWith('#'))
    .slice(0, SNIFF_LINES);
}

function modalCount(counts: readonly number[]): { value: number; lines: number } {
  const tally = new Map<number, number>();
  for (const count of counts) if (count > 0) tally.set(count, (tally.get(count) ?? 0) + 1);
  let mode = { value: 0, lines: 0 };
  for (const [value, lines] of tally) if (lines > mode.lines || (lines === mode.lines && value > mode.value)) mode = { value, lines };
  return mode;
}

/** True when more cells are written 12,5 than 12.5. */
export function sniffDecimalComma(records: readonly (readonly string[])[]): boolean {
  let commas = 0;
  let points = 0;
  for (const cells of records) {
    for (const cell of cells) {
      if (COMMA_DECIMAL.test(cell)) commas++;
      else if (POINT_DECIMAL.test(cell)) points++;
    }
  }
  return commas > points;
}

export function isCommentRecord(cells: readonly string[]): boolean {
  return /^\s*#/.test(cells[0] ?? '');
}

export function isBlankRecord(cells: readonly string[]): boolean {
  return cells.every((cell) => cell.trim() === '');
}

/** True for a row of which every filled cell is a number or a date: data, not a header. */
function looksLikeData(cells: readonly string[]): boolean {
  const filled = cells.filter((cell) => cell.trim() !== '');
  return (
    filled.length > 0 && filled.every((cell) => NUMBER_LIKE.test(cell) || DATE_LIKE.test(cell) || /^(na|nan|null|-)$/i.test(cell.trim()))
  );
}

/**
 * Index of the header among the first records: the one with most cells that `recognise` knows (at least two; of two alike the wider), else the first that is
 * neither blank nor a comment. −1 when there is none, or when that row is data.
 */
export function findHeader(records: readonly (readonly string[])[], recognise: (header: string) => boolean): number {
  let best = { index: -1, score: 1 };
  let first = -1;
  for (const [index, cells] of records.entries()) {
    if (isBlankRecord(cells) || isCommentRecord(cells)) continue;
    if (first < 0) first = index;
    if (looksLikeData(cells)) continue;
    const score = cells.filter((cell) => cell.trim() !== '' && recognise(cell)).length;
    const wider = score === best.score && best.index >= 0 && cells.length > records[best.index].length;
    if (score > best.score || wider) best = { index, score };
  }
  if (best.index >= 0) return best.index;
  return first >= 0 && !looksLikeData(records[first]) ? first : -1;
}
