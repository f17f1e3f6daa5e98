/**
 * Delimited bytes → rows of cells. Plain files (UTF-8 without a quote) are cut byte by byte; the others go through the CSV parser and come
 * out in the same form.
 */
import { type Options, parse } from 'csv-parse';
import { type ByteRow, emptyByteRow, fillByteRow } from './byte-row.ts';
import type { Delimiter } from './csv-dialect.ts';
import type { Progress } from './reading.ts';
import { type TextEncoding, utf8Pieces } from './text-encoding.ts';

/** Longest record [bytes]: an unclosed quote must not swallow the memory. */
export const RECORD_BYTE_LIMIT = 1024 * 1024;
const PIECE_BYTES = 256 * 1024;
/** Cells kept beyond those of the header, so that trailing delimiters can be told from cells too many. */
const SPARE_CELLS = 64;
const QUOTE = 0x22;
const LINE_FEED = 0x0a;
const CARRIAGE_RETURN = 0x0d;

/** How the file is written. */
export interface ScanRequest {
  readonly bytes: Uint8Array;
  readonly encoding: TextEncoding;
  readonly delimiter: Delimiter;
  /** cells of the header; a few more are kept of a row, further ones are counted only */
  readonly width: number;
  readonly progress: Progress;
}

export function csvOptions(delimiter: Delimiter): Options {
  return {
    delimiter,
    record_delimiter: ['\r\n', '\n', '\r'],
    relax_column_count: true,
    relax_quotes: true,
    max_record_size: RECORD_BYTE_LIMIT,
  };
}

/** A record of a file without quotes is longer than `RECORD_BYTE_LIMIT`. */
export class LongRecord extends Error {
  constructor(readonly line: number) {
    super(`line ${line} is longer than ${RECORD_BYTE_LIMIT} bytes`);
  }
}

/**
 * Calls `take` for every record, blank ones included. The row handed over is used again.
 *
 * @throws {CsvError} for a quote that is never closed; {LongRecord}
 */
export function scanRecords(request: ScanRequest, take: (row: ByteRow) => void): Promise<void> {
  const plain = request.encoding.name === 'utf-8' && !request.bytes.includes(QUOTE);
  return plain ? scanPlain(request, take) : scanQuoted(request, take);
}

async function scanPlain({ bytes, encoding, delimiter, width, progress }: ScanRequest, take: (row: ByteRow) => void): Promise<void> {
  const row = emptyByteRow(width + SPARE_CELLS);
  row.bytes = bytes;
  const separator = delimiter.charCodeAt(0);
  const end = bytes.length;
  let at = encoding.skip;
  let line = 1;
  let reported = at;
  while (at < end) {
    at = cutRecord(row, bytes, at, end, separator);
    row.row = line++;
    take(row);
    if (at - reported < PIECE_BYTES) continue;
    if (at - row.starts[0] > RECORD_BYTE_LIMIT) throw new LongRecord(row.row);
    reported = at;
    await progress(at / end);
  }
}

/** Cuts the record that begins at `from`; gives the beginning of the next. */
function cutRecord(row: ByteRow, bytes: Uint8Array, from: number, end: number, separator: number): number {
  const { starts, ends } = row;
  const room = starts.length;
  let count = 0;
  let start = from;
  let at = from;
  for (; at < end; at++) {
    const byte = bytes[at];
    if (byte !== separator && byte !== LINE_FEED && byte !== CARRIAGE_RETURN) continue;
    if (count < room) {
      starts[count] = start;
      ends[count] = at;
    }
    count++;
    start = at + 1;
    if (byte === separator) continue;
    row.count = count;
    return byte === CARRIAGE_RETURN && bytes[at + 1] === LINE_FEED ? at + 2 : at + 1;
  }
  if (count < room) {
    starts[count] = start;
    ends[count] = end;
  }
  row.count = count + 1;
  return end;
}

async function scanQuoted({ bytes, encoding, delimiter, width, progress }: ScanRequest, take: (row: ByteRow) => void): Promise<void> {
  const row = emptyByteRow(width + SPARE_CELLS);
  const quoted = bytes.includes(QUOTE);
  let line = 1;
  const parser = parse(csvOptions(delimiter));
  const ended = new Promise<void>((resolve, reject) => {
    parser.on('data', (cells: string[]) => {
      fillByteRow(row, cells, line);
      line += quoted ? linesOf([cells]) : 1;
      take(row);
    });
    parser.once('end', resolve);
    parser.once('error', reject);
  });
  ended.catch(() => undefined);
  let done = 0;
  for (const piece of utf8Pieces(bytes, encoding, PIECE_BYTES)) {
    await new Promise<void>((resolve, reject) => parser.write(piece, (error) => (error ? reject(error) : resolve())));
    done += PIECE_BYTES;
    await progress(Math.min(1, done / bytes.length));
  }
  parser.end();
  await ended;
}

/** Lines of the file that records take up, line ends within quoted cells included. */
export function linesOf(records: readonly (readonly string[])[]): number {
  let lines = records.length;
  for (const cells of records) for (const cell of cells) lines += cell.match(/\r\n|\n|\r/g)?.length ?? 0;
  return lines;
}
