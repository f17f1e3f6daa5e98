/**
 * Delimited text → header and rows. Rows come in batches, so that a million of them never stand in memory as text at once.
 */
import type { CsvError, Options } from 'csv-parse';
import { parse as parseAll } from 'csv-parse/sync';
import { counted } from '../base/counted.ts';
import { type ByteRow, cellTexts } from './byte-row.ts';
import { type Delimiter, findHeader, isCommentRecord, sniffDecimalComma, sniffDelimiter } from './csv-dialect.ts';
import { csvOptions, LongRecord, linesOf, scanRecords } from './csv-scan.ts';
import { type FindingList, shown } from './finding-list.ts';
import { type ColumnPlan, type ImportFile, NOTHING_UNDERSTOOD, type Progress, type Understood } from './reading.ts';
import { decodeText, detectEncoding, isKnownEncoding, looksBinary, type TextEncoding } from './text-encoding.ts';
import { isUnitText } from './unit.ts';

/** Most bytes of one table. */
const TABLE_BYTE_LIMIT = 512 * 1024 * 1024;
/** Most columns of one table. */
const COLUMN_LIMIT = 2000;
const HEAD_BYTES = 256 * 1024;
const HEADER_SEARCH = 60;
const SAMPLE_ROWS = 1000;

/** The start of a table: how it is written, its header, and a sample of its rows. */
export interface TableHead {
  readonly encoding: TextEncoding;
  readonly delimiter: Delimiter;
  readonly decimalComma: boolean;
  readonly header: readonly string[];
  /** line of the header, from 1 */
  readonly headerRow: number;
  /** units row under the header, or null */
  readonly units: readonly string[] | null;
  /** records before the first row of data */
  readonly skip: number;
  readonly sample: readonly (readonly string[])[];
  /** lines above the header, as written */
  readonly preamble: readonly string[];
}

export interface TableRow {
  /** line in the file, from 1 */
  readonly row: number;
  readonly cells: readonly string[];
}

interface TableRequest {
  readonly file: ImportFile;
  readonly plan: ColumnPlan;
  /** does this header cell belong to the kind of table wanted? */
  readonly recognise: (header: string) => boolean;
}

/** Reads the start of a table; null after a file-level finding. */
export function openTable({ file, plan, recognise }: TableRequest, findings: FindingList): TableHead | null {
  const encoding = tableEncoding(file, plan, findings);
  if (!encoding) return null;
  const text = decodeText(file.bytes.subarray(0, HEAD_BYTES), encoding);
  const delimiter = plan.delimiter ?? sniffDelimiter(text);
  if (!delimiter && hasBlankColumns(text)) {
    return refuse(
      findings,
      file,
      'no-delimiter',
      'The columns of the file are divided by blanks, in a layout that is not known, and nothing names them.',
      'Write it as CSV with a row of column names on top.',
    );
  }
  if (!delimiter)
    return refuse(findings, file, 'no-delimiter', 'The file has no columns: no comma, semicolon, tab or bar divides its lines.');
  const records = headRecords(file, text, { encoding, delimiter }, findings);
  if (!records) return null;
  const at = headerIndex(records, plan, recognise);
  if (at < 0) {
    return refuse(
      findings,
      file,
      'no-header',
      'The file has no header row: its first row is data or it is empty.',
      'Put one row of column names on top.',
    );
  }
  const header = records[at].map((cell) => cell.replace(/^\uFEFF/, '').trim());
  if (header.length > COLUMN_LIMIT)
    return refuse(findings, file, 'too-many-columns', `The header has ${header.length} columns; the limit is ${COLUMN_LIMIT}.`);
  const units = unitsRow(records[at + 1]);
  const skip = at + (units ? 2 : 1);
  const sample = records.slice(skip, skip + SAMPLE_ROWS).filter((cells) => cells.length === header.length && !isCommentRecord(cells));
  const decimalComma = plan.decimalComma ?? sniffDecimalComma(sample);
  const headerRow = 1 + linesOf(records.slice(0, at));
  const preamble = text.split(/\r\n|\n|\r/, headerRow - 1);
  return { encoding, delimiter, decimalComma, header, headerRow, units, skip, sample, preamble };
}

/** True when most lines have as many words as the first and at least four. */
function hasBlankColumns(text: string): boolean {
  const words = text.split(/\r\n|\n|\r/, 21).map((line) => line.trim().split(/\s+/).length);
  const alike = words.filter((count) => count === words[0]).length;
  return words[0] >= 4 && alike * 2 > words.length;
}

function refuse(findings: FindingList, file: ImportFile, code: string, message: string, advice?: string): null {
  findings.refuse({ code, message, file: file.name, advice });
  return null;
}

function tableEncoding(file: ImportFile, plan: ColumnPlan, findings: FindingList): TextEncoding | null {
  const { bytes } = file;
  if (bytes.length === 0) return refuse(findings, file, 'empty-file', 'The file is empty.', 'Choose a file with a header row and data.');
  if (bytes.length > TABLE_BYTE_LIMIT) {
    return refuse(
      findings,
      file,
      'file-too-large',
      `The file has ${bytes.length} bytes; the limit is ${TABLE_BYTE_LIMIT}.`,
      'Cut it into several files.',
    );
  }
  const detected = detectEncoding(bytes);
  const encoding = plan.encoding ? { name: plan.encoding, skip: detected.skip } : detected;
  if (!isKnownEncoding(encoding.name))
    return refuse(findings, file, 'unknown-encoding', `The encoding "${shown(encoding.name)}" is not known.`);
  if (looksBinary(bytes, encoding))
    return refuse(findings, file, 'binary-file', 'The file is not text: it holds zero bytes.', 'Export the table as CSV.');
  return encoding;
}

/** Records of the first bytes; the last one is dropped when the text was cut. */
function headRecords(
  file: ImportFile,
  text: string,
  dialect: { encoding: TextEncoding; delimiter: Delimiter },
  findings: FindingList,
): string[][] | null {
  const cut = file.bytes.length > HEAD_BYTES;
  const collected: string[][] = [];
  const collect = (record: string[]) => {
    collected.push(record);
    return null;
  };
  const options: Options = { ...csvOptions(dialect.delimiter), on_record: collect };
  try {
    parseAll(text, options);
    if (cut) collected.pop();
  } catch (error) {
    if (!cut || collected.length < 2) return refuseBroken(file, error as CsvError, findings);
  }
  return collected;
}

function refuseBroken(file: ImportFile, error: CsvError | LongRecord, findings: FindingList): null {
  if (error instanceof LongRecord) {
    return refuse(findings, file, 'unreadable-table', `The table cannot be read: ${error.message}.`, 'Check the line ends of the file.');
  }
  const line = typeof error.lines === 'number' ? error.lines : undefined;
  const unclosed = error.code === 'CSV_QUOTE_NOT_CLOSED' || error.code === 'CSV_MAX_RECORD_SIZE';
  findings.refuse({
    code: unclosed ? 'unclosed-quote' : 'unreadable-table',
    message: unclosed ? 'A quoted cell is opened and never closed.' : `The table cannot be read: ${shown(error.message)}`,
    file: file.name,
    row: line,
    advice: 'Close the quote, or write a quote inside a quoted cell twice.',
  });
  return null;
}

function headerIndex(records: readonly string[][], plan: ColumnPlan, recognise: (header: string) => boolean): number {
  if (plan.headerRow === undefined) return findHeader(records.slice(0, HEADER_SEARCH), recognise);
  let line = 1;
  for (const [index, cells] of records.entries()) {
    if (line >= plan.headerRow) return index;
    line += linesOf([cells]);
  }
  return -1;
}

/** A units row has a unit in at least half of its filled cells and no number anywhere. */
function unitsRow(cells: readonly string[] | undefined): string[] | null {
  const filled = cells?.map((cell) => cell.trim()).filter((cell) => cell !== '') ?? [];
  if (!cells || filled.length === 0) return null;
  if (filled.some((cell) => /^[-+]?\d/.test(cell))) return null;
  const units = filled.filter((cell) => isUnitText(cell)).length;
  return units >= 1 && units * 2 >= filled.length ? cells.map((cell) => cell.trim()) : null;
}

interface RowSink {
  /** takes a row of data; the object is used again for the next */
  each(row: ByteRow): void;
  bad(row: TableRow, reason: string): void;
  readonly progress: Progress;
}

/**
 * Calls `each` for every row of data, as texts. Rows with a wrong number of cells become findings and go to `bad`; blank rows and comment
 * rows are passed over, and so are lines of text that follow the table after a blank line.
 *
 * @returns number of rows of data, the bad ones included, or −1 after a file-level finding
 */
export function readRows(
  file: ImportFile,
  head: TableHead,
  sink: { each(row: TableRow): void; bad(row: TableRow, reason: string): void; progress: Progress },
  findings: FindingList,
): Promise<number> {
  const each = (row: ByteRow) => sink.each({ row: row.row, cells: cellTexts(row) });
  return readByteRows(file, head, { each, bad: sink.bad, progress: sink.progress }, findings);
}

/** As `readRows`, with each row as bytes: for tables of millions of rows. */
export async function readByteRows(file: ImportFile, head: TableHead, sink: RowSink, findings: FindingList): Promise<number> {
  const counter = rowCounter(file, head, sink, findings);
  const { bytes } = file;
  try {
    await scanRecords(
      { bytes, encoding: head.encoding, delimiter: head.delimiter, width: head.header.length, progress: sink.progress },
      counter.take,
    );
  } catch (error) {
    if (!(error instanceof LongRecord) && !(error as CsvError).code?.startsWith('CSV_')) throw error;
    refuseBroken(file, error as CsvError | LongRecord, findings);
    return -1;
  }
  counter.end();
  return counter.rows();
}

/** Rows of a wrong width that are held back until it is known whether the table goes on after them. */
const HELD_ROWS = 200;

function rowCounter(file: ImportFile, head: TableHead, sink: RowSink, findings: FindingList) {
  const width = head.header.length;
  let record = 0;
  let rows = 0;
  let blankBefore = false;
  let held: { row: TableRow; afterBlank: boolean }[] = [];

  const take = (row: ByteRow) => {
    if (record++ < head.skip) return;
    if (isBlankRow(row)) {
      blankBefore = true;
      return;
    }
    if (isCommentRow(row)) return;
    while (row.count > width && row.count <= row.starts.length && isBlankCell(row, row.count - 1)) row.count--;
    if (row.count !== width) return hold(row);
    if (held.length > 0) release();
    blankBefore = false;
    rows++;
    sink.each(row);
  };

  function hold(row: ByteRow): void {
    held.push({ row: { row: row.row, cells: cellTexts(row) }, afterBlank: blankBefore || (held[0]?.afterBlank ?? false) });
    counts.set(row.row, row.count);
    if (held.length >= HELD_ROWS) release();
  }

  function release(): void {
    for (const { row } of held) fault(row, counts.get(row.row) ?? row.cells.length);
    rows += held.length;
    counts.clear();
    held = [];
  }

  function fault(row: TableRow, cells: number): void {
    const message = `The row has ${counted(cells, 'cell', 'cells')}; the header has ${width}.`;
    findings.error({
      code: 'row-cell-count',
      message,
      file: file.name,
      row: row.row,
      value: String(cells),
      limit: String(width),
      advice: 'Check for a missing or extra delimiter or quote.',
    });
    sink.bad(row, message);
  }

  /** What stands after the table behind a blank line is a legend, not rows at fault. */
  function end(): void {
    if (held.length === 0) return;
    const legend = held.every(({ afterBlank, row }) => afterBlank && !/^\s*[-+]?\d/.test(row.cells[0] ?? ''));
    if (rows === 0 || !legend) {
      release();
      return;
    }
    findings.note({
      code: 'text-after-table',
      message: `${counted(held.length, 'line', 'lines')} of text after the table ${held.length === 1 ? 'is' : 'are'} passed over: "${shown(held[0].row.cells.join(head.delimiter))}"${held.length > 1 ? ' …' : ''}.`,
      file: file.name,
      row: held[0].row.row,
    });
    held = [];
  }

  const counts = new Map<number, number>();
  return { take, end, rows: () => rows };
}

function isBlankCell({ bytes, starts, ends }: ByteRow, cell: number): boolean {
  for (let at = starts[cell]; at < ends[cell]; at++) if (bytes[at] > 0x20) return false;
  return true;
}

function isBlankRow(row: ByteRow): boolean {
  const kept = Math.min(row.count, row.starts.length);
  for (let cell = 0; cell < kept; cell++) if (!isBlankCell(row, cell)) return false;
  return row.count <= row.starts.length;
}

function isCommentRow({ bytes, starts, ends }: ByteRow): boolean {
  let at = starts[0];
  while (at < ends[0] && bytes[at] <= 0x20) at++;
  return at < ends[0] && bytes[at] === 0x23;
}

/** What a table's start says, the rest still unknown. */
export function understoodHead(head: TableHead): Understood {
  return {
    ...NOTHING_UNDERSTOOD,
    format: 'csv',
    encoding: head.encoding.name,
    delimiter: head.delimiter,
    decimalComma: head.decimalComma,
    headerRow: head.headerRow,
  };
}
