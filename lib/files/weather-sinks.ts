/**
 * Where the rows of a weather table go: days into the store at once, readings into columns of their own until their stamps are understood.
 */
import { type DayNumber, isoDate } from '../base/civil-date.ts';
import { type ByteRow, cellText, cellTexts } from './byte-row.ts';
import type { TableHead } from './csv.ts';
import { YEAR_LIMITS } from './date-cell.ts';
import { shown } from './finding-list.ts';
import type { ImportFile } from './reading.ts';
import type { WeatherColumns } from './weather-columns.ts';
import type { WeatherReading } from './weather-csv.ts';
import { ReadingStore } from './weather-readings.ts';
import { type RowCounts, type RowReading, weatherRowReader } from './weather-row.ts';
import { dayReader, stampReader } from './weather-stamp.ts';
import type { SiteChoice } from './weather-table-site.ts';

/** Lines of different files are kept apart in the store by this stride. */
const LINE_STRIDE = 100_000_000;

interface SinkRequest {
  readonly file: ImportFile;
  readonly head: TableHead;
  readonly columns: WeatherColumns;
  readonly site: SiteChoice;
}

export interface WeatherSink {
  each(row: ByteRow): void;
  readonly counts: RowCounts;
  /** of tables with several readings a day */
  readonly readings: ReadingStore | null;
}

function rowReaderOf({ file, head, columns }: SinkRequest, { options, findings }: WeatherReading) {
  const writing = { decimalComma: head.decimalComma, missingCodes: options.missingCodes };
  return weatherRowReader(columns.values, writing, file.name, findings);
}

/** Finds the site of a row; −1 when it is not known. Codes are remembered by their bytes, so that no text is made of those seen before. */
function siteReader({ file, columns, site }: SinkRequest, { sites }: WeatherReading): (row: ByteRow) => number {
  if (site.kind === 'fixed') return () => site.index;
  const seen = new Map<number, { bytes: Uint8Array; index: number }>();
  const cell = columns.site;
  return (row) => {
    const [start, end] = [row.starts[cell], row.ends[cell]];
    const key = hashOf(row.bytes, start, end);
    const known = seen.get(key);
    if (known !== undefined && sameBytes(known.bytes, row.bytes, start, end)) return known.index;
    const index = sites.find(cellText(row, cell), row.row, file.name);
    if (index >= 0 && known === undefined) seen.set(key, { bytes: row.bytes.slice(start, end), index });
    return index;
  };
}

/** FNV-1a over the bytes of a cell. Source: Fowler, Noll and Vo; draft-eastlake-fnv. */
function hashOf(bytes: Uint8Array, start: number, end: number): number {
  let hash = 0x811c9dc5;
  for (let at = start; at < end; at++) hash = Math.imul(hash ^ bytes[at], 0x01000193);
  return hash;
}

function sameBytes(known: Uint8Array, bytes: Uint8Array, start: number, end: number): boolean {
  if (known.length !== end - start) return false;
  for (let i = 0; i < known.length; i++) if (known[i] !== bytes[start + i]) return false;
  return true;
}

function showRow({ preview }: WeatherReading, row: ByteRow, problem: string | null): void {
  if (problem) preview.addBad(row.row, cellTexts(row), problem);
  else if (preview.wantsGood) preview.addGood(row.row, cellTexts(row));
}

function refuseRow(request: SinkRequest, reading: WeatherReading, row: ByteRow, site: number): void {
  if (site < 0) reading.preview.addBad(row.row, cellTexts(row), 'The site is not known.');
  else badDate(request, reading, row);
}

function badDate(request: SinkRequest, reading: WeatherReading, row: ByteRow): void {
  const text = shown(dateText(request.columns, row));
  const message = `"${text}" is not a ${request.columns.time ? 'time' : 'date'}.`;
  const how = request.columns.time ? 'YYYY-MM-DD hh:mm' : 'YYYY-MM-DD';
  reading.findings.error({
    code: 'not-a-date',
    message,
    file: request.file.name,
    row: row.row,
    value: text,
    limit: `a day of the calendar, years ${YEAR_LIMITS.low} to ${YEAR_LIMITS.high}`,
    advice: `Write dates as ${how}, or choose the date order in the column plan.`,
  });
  reading.preview.addBad(row.row, cellTexts(row), message);
}

function dateText({ date, hour }: WeatherColumns, row: ByteRow): string {
  const clock = hour >= 0 ? ` ${cellText(row, hour)}` : '';
  if (date.kind === 'date') return `${cellText(row, date.index)}${clock}`;
  if (date.kind === 'parts') return `${cellText(row, date.year)}-${cellText(row, date.month)}-${cellText(row, date.day)}${clock}`;
  return `${cellText(row, date.year)} day ${cellText(row, date.dayOfYear)}${clock}`;
}

/** A daily table: every row is a day of a site. */
export function dailySink(request: SinkRequest, reading: WeatherReading): WeatherSink {
  const { findings, store, sites, preview } = reading;
  const { file } = request;
  const rowReader = rowReaderOf(request, reading);
  const siteOf = siteReader(request, reading);
  const dayOf = dayReader(request.columns);
  const offset = reading.lineFile.length * LINE_STRIDE;
  reading.lineFile.push({ from: offset, file: file.name });
  const lastDay: DayNumber[] = [];

  function each(row: ByteRow): void {
    const site = siteOf(row);
    const day = site < 0 ? Number.NaN : dayOf(row);
    if (Number.isNaN(day)) {
      refuseRow(request, reading, row, site);
      return;
    }
    const read = rowReader.read(row);
    showRow(reading, row, read.problem);
    if (lastDay[site] > day) reading.outOfOrder++;
    lastDay[site] = day;
    const earlier = store.find(site, day);
    if (earlier >= 0) duplicate(earlier, row, { site, day }, read);
    else if (read.count > 0 || !read.problem) store.add(site, day, offset + row.row, read.values);
  }

  function duplicate(earlier: number, row: ByteRow, { site, day }: { site: number; day: DayNumber }, { values }: RowReading): void {
    const where = lineOf(reading, store.line(earlier), file.name);
    if (store.equals(earlier, values)) {
      findings.note({
        code: 'duplicate-row',
        message: `Row ${row.row} repeats ${where} (site ${sites.codes()[site]}, ${isoDate(day)}) with the same values.`,
        file: file.name,
        row: row.row,
      });
      return;
    }
    const message = `Row ${row.row} and ${where} give different values for site ${sites.codes()[site]} on ${isoDate(day)}; the first is kept.`;
    findings.error({
      code: 'duplicate-differs',
      message,
      file: file.name,
      row: row.row,
      value: isoDate(day),
      limit: 'one row per site and day',
      advice: 'Delete the wrong row.',
    });
    preview.addBad(row.row, cellTexts(row), message);
  }

  return { each, counts: rowReader.counts, readings: null };
}

function lineOf({ lineFile }: WeatherReading, line: number, current: string): string {
  const index = Math.floor(line / LINE_STRIDE);
  const row = line - index * LINE_STRIDE;
  const name = lineFile[index]?.file ?? current;
  return name === current ? `row ${row}` : `row ${row} of ${name}`;
}

/** A table with several readings a day. */
export function readingSink(request: SinkRequest, reading: WeatherReading): WeatherSink {
  const { columns, file, head } = request;
  const rowReader = rowReaderOf(request, reading);
  const siteOf = siteReader(request, reading);
  const stampOf = stampReader(columns, head);
  const readings = new ReadingStore(file.name, columns.time?.step ?? 60);
  const each = (row: ByteRow): void => {
    const site = siteOf(row);
    const stamp = site < 0 ? Number.NaN : stampOf(row);
    if (Number.isNaN(stamp)) {
      refuseRow(request, reading, row, site);
      return;
    }
    const { values, problem } = rowReader.read(row);
    showRow(reading, row, problem);
    readings.add(site, stamp, row.row, values);
  };
  return { each, counts: rowReader.counts, readings };
}
