/**
 * Weather of stations in one or more delimited files, one row per site and day or per site and reading → monthly blocks in the units of the
 * product.
 */
import { isoDate } from '../base/civil-date.ts';
import { counted } from '../base/counted.ts';
import { Refused } from '../base/errors.ts';
import { openTable, readByteRows, type TableHead, understoodHead } from './csv.ts';
import { FindingList } from './finding-list.ts';
import {
  type ImportContext,
  type ImportFile,
  type ImportOptions,
  type ImportReading,
  NOTHING_UNDERSTOOD,
  type Progress,
  type StagedSite,
  type Understood,
} from './reading.ts';
import { siteFinder } from './site-finder.ts';
import { TablePreviewRows } from './table-preview.ts';
import { bindWeatherColumns, isWeatherHeader, type WeatherColumns } from './weather-columns.ts';
import { addReadings, type ReadingBatch } from './weather-days.ts';
import { legendOf, placeOfPreamble, type WeatherTable, weatherTables } from './weather-file.ts';
import { noteColumns, noteDays, noteMissing, noteRowCounts, noteUnknownSites } from './weather-notes.ts';
import { dailySink, readingSink, type WeatherSink } from './weather-sinks.ts';
import { clockOfTable, stampOfTable } from './weather-stamp-meaning.ts';
import { HourStore, WeatherStore } from './weather-store.ts';
import { contextOf, type SiteChoice, siteOfTable } from './weather-table-site.ts';

/** What the files of one import share while they are read. */
export interface WeatherReading {
  readonly options: ImportOptions;
  readonly context: ImportContext;
  readonly findings: FindingList;
  readonly store: WeatherStore;
  readonly hours: HourStore;
  readonly sites: ReturnType<typeof siteFinder>;
  readonly preview: TablePreviewRows;
  /** stations that files place themselves */
  readonly stations: StagedSite[];
  readonly batches: Map<string, ReadingBatch>;
  rows: number;
  usableReadings: number;
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
  const reading: WeatherReading = {
    options,
    context,
    findings,
    store: new WeatherStore(),
    hours: new HourStore(),
    sites: siteFinder(context.knownSites),
    preview: new TablePreviewRows(),
    stations: [],
    batches: new Map(),
    rows: 0,
    usableReadings: 0,
    lineFile: [],
    outOfOrder: 0,
  };
  const tables = await tablesOf(files, findings);
  let understood: Understood = NOTHING_UNDERSTOOD;
  let header: readonly string[] = [];
  for (const [index, table] of tables.entries()) {
    const part = await readTable(table, reading, (fraction) => progress((index + fraction) / tables.length));
    if (part && header.length === 0) [understood, header] = [part.understood, part.header];
  }
  for (const batch of reading.batches.values()) addReadings(batch, reading.sites.codes(), { ...reading, context: contextOf(reading) });
  if (reading.rows === 0 && !findings.fatal)
    findings.refuse({ code: 'no-rows', message: 'The file has a header and no rows of data.', file: files[0]?.name });
  finishNotes(reading);
  return result(files, reading, understood, header);
}

async function tablesOf(files: readonly ImportFile[], findings: FindingList): Promise<WeatherTable[]> {
  const tables: WeatherTable[] = [];
  for (const { name, bytes } of files) {
    try {
      tables.push(...(await weatherTables({ name, bytes }, findings)));
    } catch (error) {
      if (!(error instanceof Refused)) throw error;
      const [first] = error.findings;
      findings.refuse({ ...(first ?? { code: 'archive-unreadable', message: error.message }), file: name });
    }
  }
  return tables;
}

function result(files: readonly ImportFile[], reading: WeatherReading, understood: Understood, header: readonly string[]): ImportReading {
  const { store, hours, sites, findings, options, stations } = reading;
  const codes = sites.codes();
  const extents = codes.map((_, site) => store.extent(site) ?? hours.extent(site)).filter((extent) => extent !== null);
  const first = Math.min(...extents.map((extent) => extent.first));
  const last = Math.max(...extents.map((extent) => extent.last));
  const source = options.source?.trim() || (files[0]?.name ?? 'weather').replace(/\.[^.]*$/, '');
  const keep = !findings.fatal;
  return {
    understood: {
      ...understood,
      rowCount: reading.rows,
      usableRows: reading.batches.size > 0 ? reading.usableReadings : store.rows,
      siteCount: extents.length,
      dateRange: extents.length > 0 ? { start: isoDate(first), end: isoDate(last) } : null,
    },
    findings: findings.list(),
    findingCounts: findings.totals(),
    preview: reading.preview.preview(header),
    staged: {
      kind: 'weather',
      source,
      blocks: keep ? [...store.blocks(codes), ...hours.blocks(codes)] : [],
      ...(keep && stations.length > 0 ? { stations } : {}),
      rows: keep ? store.rows : 0,
      sites: keep ? extents.length : 0,
    },
  };
}

function finishNotes(reading: WeatherReading): void {
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

async function readTable(
  table: WeatherTable,
  reading: WeatherReading,
  progress: Progress,
): Promise<{ understood: Understood; header: readonly string[] } | null> {
  const { findings, options, context } = reading;
  const { file } = table;
  const head = openTable({ file, plan: options.plan ?? {}, recognise: isWeatherHeader }, findings);
  if (!head) return null;
  const legend = legendOf(file, head.preamble);
  const columns = bindWeatherColumns({ head, options, context, file: file.name, legend }, findings);
  const understood = { ...understoodHead(head), columns: columns.columns, dateOrder: columns.dateOrder };
  if (columns.date === null) return { understood, header: head.header };
  const site = siteOfTable({ columns, file, headers: head.header, place: table.place ?? placeOfPreamble(head.preamble) }, reading);
  if (!site) return { understood, header: head.header };
  noteColumns(columns, file.name, findings);
  const time = await readRowsOf({ table, head, columns, site }, reading, progress);
  return { understood: { ...understood, ...time }, header: head.header };
}

interface OpenedTable {
  readonly table: WeatherTable;
  readonly head: TableHead;
  readonly columns: WeatherColumns;
  readonly site: SiteChoice;
}

async function readRowsOf(opened: OpenedTable, reading: WeatherReading, progress: Progress): Promise<Partial<Understood>> {
  const { table, head, columns, site } = opened;
  const { findings } = reading;
  const { file } = table;
  const sink: WeatherSink = (columns.time ? readingSink : dailySink)({ file, head, columns, site }, reading);
  const bad = (row: { row: number; cells: readonly string[] }, reason: string) => reading.preview.addBad(row.row, row.cells, reason);
  const count = await readByteRows(file, head, { each: sink.each, bad, progress }, findings);
  noteMissing(sink.counts, columns.values, file.name, findings);
  noteRowCounts(sink.counts, columns.values, file.name, findings);
  reading.rows += Math.max(0, count);
  if (!columns.time || !sink.readings) return {};
  const { readings } = sink;
  reading.usableReadings += readings.count;
  const clock = clockOfTable({ head, columns, offset: table.offset }, reading.options);
  const stamp = stampOfTable({ head, columns, readings, file: file.name, clock }, reading);
  const key = JSON.stringify([columns.time.step, stamp, clock]);
  const batch = reading.batches.get(key);
  reading.batches.set(key, { step: columns.time.step, stamp, clock, stores: [...(batch?.stores ?? []), readings] });
  const zone = clock.kind === 'fixed' ? clock.name : clock.kind === 'wall' ? clock.zone : null;
  return { stamp, stampZone: zone, stepMinutes: columns.time.step };
}
