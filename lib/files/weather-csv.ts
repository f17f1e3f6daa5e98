/**
 * Daily weather of stations, one row per site and day, in one or more delimited files → monthly blocks in the units of the product.
 */
import { type DayNumber, dayNumberOf, isLeapYear, isoDate } from '../base/civil-date.ts';
import { counted } from '../base/counted.ts';
import { openTable, readRows, type TableHead, type TableRow, understoodHead } from './csv.ts';
import { type DateReading, dayFromParts, parseDate, YEAR_LIMITS } from './date-cell.ts';
import { FindingList, shown } from './finding-list.ts';
import { numberReader } from './number-cell.ts';
import {
  type ImportContext,
  type ImportFile,
  type ImportOptions,
  type ImportReading,
  NOTHING_UNDERSTOOD,
  type Progress,
  type Understood,
} from './reading.ts';
import { siteFinder } from './site-finder.ts';
import { TablePreviewRows } from './table-preview.ts';
import { bindWeatherColumns, isWeatherHeader, type WeatherColumns } from './weather-columns.ts';
import { noteColumns, noteDays, noteMissing, noteUnknownSites } from './weather-notes.ts';
import { weatherRowReader } from './weather-row.ts';
import { WeatherStore } from './weather-store.ts';

const DATE_CACHE_LIMIT = 200_000;

interface Reading {
  readonly options: ImportOptions;
  readonly context: ImportContext;
  readonly findings: FindingList;
  readonly store: WeatherStore;
  readonly sites: ReturnType<typeof siteFinder>;
  readonly preview: TablePreviewRows;
  rows: number;
  /** line → file, where several files share the store */
  readonly lineFile: { readonly from: number; readonly file: string }[];
  outOfOrder: number;
}

/** Reads the weather of one or more files. */
export async function readWeather(
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
): Promise<ImportReading> {
  const findings = new FindingList();
  const sites = siteFinder(context.knownSites);
  const reading: Reading = {
    options,
    context,
    findings,
    store: new WeatherStore(),
    sites,
    preview: new TablePreviewRows(),
    rows: 0,
    lineFile: [],
    outOfOrder: 0,
  };
  let understood: Understood = NOTHING_UNDERSTOOD;
  let header: readonly string[] = [];
  for (const [index, file] of files.entries()) {
    const part = await readFile(file, reading, (fraction) => progress((index + fraction) / files.length));
    if (part && header.length === 0) [understood, header] = [part.understood, part.header];
  }
  if (reading.rows === 0 && !findings.fatal)
    findings.refuse({ code: 'no-rows', message: 'The file has a header and no rows of data.', file: files[0]?.name });
  finishNotes(reading);
  return result(files, reading, understood, header);
}

function result(files: readonly ImportFile[], reading: Reading, understood: Understood, header: readonly string[]): ImportReading {
  const { store, sites, findings, options } = reading;
  const codes = sites.codes();
  const extents = codes.map((_, site) => store.extent(site)).filter((extent) => extent !== null);
  const first = Math.min(...extents.map((extent) => extent.first));
  const last = Math.max(...extents.map((extent) => extent.last));
  const source = options.source?.trim() || (files[0]?.name ?? 'weather').replace(/\.[^.]*$/, '');
  const keep = !findings.fatal;
  return {
    understood: {
      ...understood,
      rowCount: reading.rows,
      usableRows: store.rows,
      siteCount: extents.length,
      dateRange: extents.length > 0 ? { start: isoDate(first), end: isoDate(last) } : null,
    },
    findings: findings.list(),
    findingCounts: findings.totals(),
    preview: reading.preview.preview(header),
    staged: {
      kind: 'weather',
      source,
      blocks: keep ? store.blocks(codes) : [],
      rows: keep ? store.rows : 0,
      sites: keep ? extents.length : 0,
    },
  };
}

function finishNotes(reading: Reading): void {
  const { findings, sites, context, store } = reading;
  noteUnknownSites(sites, context.knownSites.length, findings);
  if (reading.outOfOrder > 0) {
    findings.note({
      code: 'rows-not-in-order',
      message: `${counted(reading.outOfOrder, 'row steps', 'rows step')} back in time; rows may come in any order, each is stored under its own date.`,
    });
  }
  noteDays(store, sites.codes(), findings);
}

async function readFile(
  file: ImportFile,
  reading: Reading,
  progress: Progress,
): Promise<{ understood: Understood; header: readonly string[] } | null> {
  const { findings, options, context } = reading;
  const head = openTable({ file, plan: options.plan ?? {}, recognise: isWeatherHeader }, findings);
  if (!head) return null;
  const columns = bindWeatherColumns({ head, options, context, file: file.name }, findings);
  const understood = { ...understoodHead(head), columns: columns.columns, dateOrder: columns.dateOrder };
  if (columns.date === null || !checkSite(columns, file, reading)) return { understood, header: head.header };
  noteColumns(columns, file.name, findings);
  const rows = rowSink(file, head, columns, reading);
  const count = await readRows(
    file,
    head,
    { each: rows.each, bad: (row, reason) => reading.preview.addBad(row.row, row.cells, reason), progress },
    findings,
  );
  noteMissing(rows.counts, columns.values, file.name, findings);
  reading.rows += Math.max(0, count);
  return { understood, header: head.header };
}

function checkSite(columns: WeatherColumns, file: ImportFile, { options, context, findings }: Reading): boolean {
  if (columns.site >= 0 || options.site) return true;
  if (context.knownSites.length === 1) {
    findings.note({
      code: 'site-assumed',
      message: `The file has no site column; its rows go to the only known site, ${context.knownSites[0].code}.`,
      file: file.name,
    });
    return true;
  }
  findings.refuse({
    code: 'missing-column',
    message: `The file has no site column, and ${counted(context.knownSites.length, 'site is', 'sites are')} known.`,
    file: file.name,
    column: 'site',
    advice: context.knownSites.length === 0 ? 'Import stations first.' : 'Add a site column, or name the site in the options.',
  });
  return false;
}

function rowSink(file: ImportFile, head: TableHead, columns: WeatherColumns, reading: Reading) {
  const { findings, store, sites, options, context, preview } = reading;
  const rowReader = weatherRowReader(columns.values, numberReader(head.decimalComma, options.missingCodes), file.name, findings);
  const dateOf = dateReader(columns);
  const fixedSite = columns.site < 0 ? (options.site ?? context.knownSites[0]?.code ?? '') : null;
  const offset = reading.lineFile.length * LINE_STRIDE;
  reading.lineFile.push({ from: offset, file: file.name });
  const lastDay: DayNumber[] = [];

  function each({ row, cells }: TableRow) {
    const site = sites.find(fixedSite ?? cells[columns.site], row, file.name);
    if (site < 0) return preview.addBad(row, cells, 'The site is not known.');
    const date = dateOf(cells);
    if (!date) return badDate(row, cells);
    const { values, problem, count } = rowReader.read(row, cells);
    if (problem) preview.addBad(row, cells, problem);
    else preview.addGood(row, cells);
    if (lastDay[site] > date.day) reading.outOfOrder++;
    lastDay[site] = date.day;
    const earlier = store.find(site, date.day);
    if (earlier >= 0) return duplicate(earlier, { row, cells }, site, date.day, values);
    if (count > 0 || !problem) store.add(site, date.day, offset + row, values);
  }

  function badDate(row: number, cells: readonly string[]): void {
    const text = dateText(columns, cells);
    const message = `"${shown(text)}" is not a date.`;
    const limit = `a day of the calendar, years ${YEAR_LIMITS.low} to ${YEAR_LIMITS.high}`;
    findings.error({
      code: 'not-a-date',
      message,
      file: file.name,
      row,
      value: shown(text),
      limit,
      advice: 'Write dates as YYYY-MM-DD, or choose the date order in the column plan.',
    });
    preview.addBad(row, cells, message);
  }

  function duplicate(earlier: number, { row, cells }: TableRow, site: number, day: DayNumber, values: Float64Array): void {
    const where = lineOf(reading, store.line(earlier), file.name);
    if (store.equals(earlier, values)) {
      findings.note({
        code: 'duplicate-row',
        message: `Row ${row} repeats ${where} (site ${sites.codes()[site]}, ${isoDate(day)}) with the same values.`,
        file: file.name,
        row,
      });
      return;
    }
    const message = `Row ${row} and ${where} give different values for site ${sites.codes()[site]} on ${isoDate(day)}; the first is kept.`;
    findings.error({
      code: 'duplicate-differs',
      message,
      file: file.name,
      row,
      value: isoDate(day),
      limit: 'one row per site and day',
      advice: 'Delete the wrong row.',
    });
    preview.addBad(row, cells, message);
  }

  return { each, counts: rowReader.counts };
}

/** Lines of different files are kept apart in the store by this stride. */
const LINE_STRIDE = 100_000_000;

function lineOf({ lineFile }: Reading, line: number, current: string): string {
  const index = Math.floor(line / LINE_STRIDE);
  const row = line - index * LINE_STRIDE;
  const name = lineFile[index]?.file ?? current;
  return name === current ? `row ${row}` : `row ${row} of ${name}`;
}

function dateText({ date }: WeatherColumns, cells: readonly string[]): string {
  if (date.kind === 'date') return cells[date.index];
  if (date.kind === 'parts') return `${cells[date.year]}-${cells[date.month]}-${cells[date.day]}`;
  return `${cells[date.year]} day ${cells[date.dayOfYear]}`;
}

/** Reader of the date of a row; texts are remembered, since every site repeats the same days. */
function dateReader(columns: WeatherColumns): (cells: readonly string[]) => DateReading | null {
  const known = new Map<string, DateReading | null>();
  return (cells) => {
    const text = dateText(columns, cells);
    const found = known.get(text);
    if (found !== undefined) return found;
    const date = readDate(columns, cells);
    if (known.size < DATE_CACHE_LIMIT) known.set(text, date);
    return date;
  };
}

function readDate({ date, dateOrder }: WeatherColumns, cells: readonly string[]): DateReading | null {
  if (date.kind === 'date') return parseDate(cells[date.index], dateOrder);
  const number = (index: number) => (cells[index].trim() === '' ? Number.NaN : Number(cells[index]));
  if (date.kind === 'parts') return timeless(dayFromParts(number(date.year), number(date.month), number(date.day)));
  const [year, dayOfYear] = [number(date.year), number(date.dayOfYear)];
  const length = isLeapYear(year) ? 366 : 365;
  const valid =
    Number.isInteger(year) &&
    Number.isInteger(dayOfYear) &&
    year >= YEAR_LIMITS.low &&
    year <= YEAR_LIMITS.high &&
    dayOfYear >= 1 &&
    dayOfYear <= length;
  return timeless(valid ? dayNumberOf(year, 1, 1) + dayOfYear - 1 : null);
}

function timeless(day: DayNumber | null): DateReading | null {
  return day === null ? null : { day, minute: -1 };
}
