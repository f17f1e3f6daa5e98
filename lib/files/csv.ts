/**
 * Delimited text → header and rows. Rows come in batches, so that a million of them never stand in memory as text at once.
 */
import { type CsvError, type Options, parse } from 'csv-parse';
import { parse as parseAll } from 'csv-parse/sync';
import { counted } from '../base/counted.ts';
import { type Delimiter, findHeader, isBlankRecord, isCommentRecord, sniffDecimalComma, sniffDelimiter } from './csv-dialect.ts';
import { type FindingList, shown } from './finding-list.ts';
import { type ColumnPlan, type ImportFile, NOTHING_UNDERSTOOD, type Progress, type Understood } from './reading.ts';
import { decodeText, detectEncoding, isKnownEncoding, looksBinary, type TextEncoding, utf8Pieces } from './text-encoding.ts';
import { isUnitText } from './unit.ts';

/** Most bytes of one table. */
const TABLE_BYTE_LIMIT = 512 * 1024 * 1024;
/** Most columns of one table. */
const COLUMN_LIMIT = 2000;
/** Longest record, bytes: an unclosed quote must not swallow the memory. */
const RECORD_BYTE_LIMIT = 1024 * 1024;
const HEAD_BYTES = 256 * 1024;
const PIECE_BYTES = 256 * 1024;
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
  return { encoding, delimiter, decimalComma, header, headerRow: 1 + linesOf(records.slice(0, at)), units, skip, sample };
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

function csvOptions(delimiter: Delimiter): Options {
  return {
    delimiter,
    record_delimiter: ['\r\n', '\n', '\r'],
    relax_column_count: true,
    relax_quotes: true,
    max_record_size: RECORD_BYTE_LIMIT,
  };
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

function refuseBroken(file: ImportFile, error: CsvError, findings: FindingList): null {
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

function linesOf(records: readonly (readonly string[])[]): number {
  let lines = records.length;
  for (const cells of records) for (const cell of cells) lines += newlines(cell);
  return lines;
}

function newlines(cell: string): number {
  return cell.match(/\r\n|\n|\r/g)?.length ?? 0;
}

/**
 * Calls `each` for every row of data. Rows with a wrong number of cells become findings and go to `bad`; blank rows and comment rows are passed over.
 *
 * @returns number of rows of data, the bad ones included, or −1 after a file-level finding
 */
export async function readRows(
  file: ImportFile,
  head: TableHead,
  sink: { each(row: TableRow): void; bad(row: TableRow, reason: string): void; progress: Progress },
  findings: FindingList,
): Promise<number> {
  const counter = rowCounter(file, head, sink, findings);
  try {
    await parsePieces(file, head, counter.take, sink.progress);
  } catch (error) {
    refuseBroken(file, error as CsvError, findings);
    return -1;
  }
  return counter.rows();
}

function rowCounter(
  file: ImportFile,
  head: TableHead,
  sink: { each(row: TableRow): void; bad(row: TableRow, reason: string): void },
  findings: FindingList,
): { take(cells: string[]): void; rows(): number } {
  const quoted = file.bytes.includes(0x22);
  const width = head.header.length;
  let line = 1;
  let record = 0;
  let rows = 0;
  const take = (cells: string[]) => {
    const row = line;
    line += quoted ? linesOf([cells]) : 1;
    if (record++ < head.skip || isCommentRecord(cells) || isBlankRecord(cells)) return;
    rows++;
    while (cells.length > width && cells[cells.length - 1].trim() === '') cells.pop();
    if (cells.length === width) return sink.each({ row, cells });
    const message = `The row has ${counted(cells.length, 'cell', 'cells')}; the header has ${width}.`;
    findings.error({
      code: 'row-cell-count',
      message,
      file: file.name,
      row,
      value: String(cells.length),
      limit: String(width),
      advice: 'Check for a missing or extra delimiter or quote.',
    });
    sink.bad({ row, cells }, message);
  };
  return { take, rows: () => rows };
}

async function parsePieces(file: ImportFile, head: TableHead, take: (cells: string[]) => void, progress: Progress): Promise<void> {
  const parser = parse(csvOptions(head.delimiter));
  const ended = new Promise<void>((resolve, reject) => {
    parser.on('data', take);
    parser.once('end', resolve);
    parser.once('error', reject);
  });
  ended.catch(() => undefined);
  let done = 0;
  for (const piece of utf8Pieces(file.bytes, head.encoding, PIECE_BYTES)) {
    await new Promise<void>((resolve, reject) => parser.write(piece, (error) => (error ? reject(error) : resolve())));
    done += PIECE_BYTES;
    await progress(Math.min(1, done / file.bytes.length));
  }
  parser.end();
  await ended;
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
