/**
 * Gridded weather: files of labelled arrays → monthly blocks of the cells around the district, in the units of the product.
 *
 * The cells' day is the district's local day. Daily values of a file keep the day that the file gives them.
 */
import { TillwaterError } from '../base/errors.ts';
import { FindingList } from './finding-list.ts';
import { type Field, type FoundFields, findFields } from './grid-fields.ts';
import { type GridFile, type OpenArray, openGridFiles, stemOf } from './grid-files.ts';
import { type CellGroup, type GroupResult, readGroup } from './grid-group.ts';
import { type GridPlaces, gridGroup, type StationPlaces, stationGroups } from './grid-places.ts';
import { GridPreview } from './grid-preview.ts';
import { daysOfStores, fieldColumns, reportCalendars } from './grid-report.ts';
import { isWeatherRole } from './grid-roles.ts';
import { zoneOffsetOf } from './grid-zone.ts';
import {
  type BlockSink,
  type ImportContext,
  type ImportFile,
  type ImportOptions,
  type ImportReading,
  NOTHING_UNDERSTOOD,
  type Progress,
  type StagedBlock,
  type Understood,
} from './reading.ts';

/**
 * Reads the gridded weather of one import. Never throws for what is in a file: every fault is a finding.
 *
 * @param sink takes each block as soon as it is complete; without it the blocks are in the staged import
 * @param open in place of the reader of all array formats
 */
export async function readGridWeather(
  files: readonly ImportFile[],
  options: ImportOptions,
  context: ImportContext,
  progress: Progress,
  sink?: BlockSink,
  open?: OpenArray,
): Promise<ImportReading> {
  const findings = new FindingList();
  const source = options.source?.trim() || stemOf(files[0]?.name ?? 'weather');
  const reading: Reading = { options, context, findings, progress, source, blocks: [], preview: new GridPreview(), sink: sink ?? null };
  const opened = await openGridFiles(files, findings, open);
  try {
    return await readOpened(opened.files, reading);
  } catch (error) {
    if (!(error instanceof TillwaterError) || error.status >= 500) throw error;
    refuse(error, findings);
    return nothing(reading, opened.files);
  } finally {
    await opened.close();
  }
}

interface Reading {
  readonly options: ImportOptions;
  readonly context: ImportContext;
  readonly findings: FindingList;
  readonly progress: Progress;
  readonly source: string;
  readonly blocks: StagedBlock[];
  readonly preview: GridPreview;
  readonly sink: BlockSink | null;
}

function refuse(error: TillwaterError, findings: FindingList): void {
  const found = 'findings' in error && Array.isArray(error.findings) ? error.findings : [];
  if (found.length === 0) findings.refuse({ code: 'unreadable-grid', message: error.message });
  for (const finding of found) findings.add(finding);
  findings.fatal = true;
}

function nothing({ findings, source, preview }: Reading, files: readonly GridFile[]): ImportReading {
  return {
    understood: { ...NOTHING_UNDERSTOOD, format: files[0]?.arrays.format ?? 'unknown' },
    findings: findings.list(),
    findingCounts: findings.totals(),
    preview: preview.preview(),
    staged: { kind: 'weather', source, blocks: [], rows: 0, sites: 0 },
  };
}

/** No file could be opened: the findings say why, each for its file. */
function nothingOpened(reading: Reading): ImportReading {
  const { findings } = reading;
  if (findings.counts.error === 0)
    findings.refuse({ code: 'no-file', message: 'The import has no file.', advice: 'Choose at least one file.' });
  findings.fatal = true;
  return nothing(reading, []);
}

async function readOpened(files: readonly GridFile[], reading: Reading): Promise<ImportReading> {
  const { options, findings, context } = reading;
  if (files.length === 0) return nothingOpened(reading);
  const found = await findFields(files, options, findings);
  const weather = found.fields.filter(({ role }) => role.role !== null && role.role !== 'elevation_m');
  const grid = await gridGroup(weather, found.fields.filter(isElevation), { options, context, findings, source: reading.source });
  const stations = await stationGroups(weather, { options, context, findings, source: reading.source, besideGrid: grid !== null });
  const groups: CellGroup[] = [...(grid ? [grid.group] : []), ...stations.map(({ group }) => group)];
  reportCalendars(weather, findings);
  const results: GroupResult[] = [];
  for (const [i, group] of groups.entries())
    results.push(
      await readGroup(
        group,
        groupReading(reading, (share) => (i + share) / groups.length),
      ),
    );
  return compose(files, found, { grid, stations, results }, reading);
}

function isElevation({ role }: Field): boolean {
  return role.role === 'elevation_m' && role.taken;
}

function groupReading({ options, context, findings, progress, blocks, preview, sink }: Reading, overall: (share: number) => number) {
  const name = context.timeZone ?? 'UTC';
  const offset = zoneOffsetOf(name) ?? (() => 0);
  const stampZone = options.stampZone ? zoneOffsetOf(options.stampZone) : null;
  if (options.stampZone && !stampZone) {
    findings.warn({
      code: 'unknown-zone',
      message: `"${options.stampZone}" is not a zone; stamps are read as UTC.`,
      value: options.stampZone,
      advice: 'Write an IANA name such as America/Denver, or an offset such as UTC-07:00.',
    });
  }
  return {
    ...{ options, findings, stampZone, zone: { name, offset } },
    emit: async (block: StagedBlock) => {
      preview.take(block);
      if (sink) await sink(block);
      else blocks.push(block);
    },
    progress: async (share: number) => {
      await progress(overall(share));
    },
  };
}

interface Outcome {
  readonly grid: GridPlaces | null;
  readonly stations: readonly StationPlaces[];
  readonly results: readonly GroupResult[];
}

function compose(files: readonly GridFile[], found: FoundFields, { grid, stations, results }: Outcome, reading: Reading): ImportReading {
  const { findings, source, context } = reading;
  const stores = results.flatMap((result) => result.stores);
  const planned = results.flatMap((result) => result.planned);
  const rows = results.reduce((sum, result) => sum + Math.max(0, ...result.stores.map(({ counts }) => counts.values)), 0);
  if (rows === 0) refuseEmpty(found, findings);
  const gridResult = grid ? results[0] : null;
  const windHeight =
    planned
      .flatMap(({ parts }) => parts.flatMap(({ fields }) => fields.map((field) => field.windHeight)))
      .find((height) => height !== null) ?? null;
  const cells = grid && gridResult ? grid.cells.filter((_, i) => gridResult.seen[i] === 1).map((cell) => ({ ...cell, windHeight })) : [];
  const placed = stations
    .flatMap((place, i) => place.sites.filter((_, k) => results[i + (grid ? 1 : 0)].seen[k] === 1))
    .map((site) => ({ ...site, windHeight }));
  const newStations = [...new Map(placed.map((site) => [site.code, site])).values()].filter(
    ({ code }) => !context.knownSites.some((known) => known.code === code),
  );
  noteEmpty(
    grid ? grid.cells.length - cells.length : 0,
    stations.reduce((sum, { sites }) => sum + sites.length, 0) - placed.length,
    findings,
  );
  const keep = !findings.fatal;
  const sites = cells.length + new Set(placed.map(({ code }) => code)).size;
  const understood: Understood = {
    ...NOTHING_UNDERSTOOD,
    ...{
      format: files[0]?.arrays.format ?? 'unknown',
      columns: fieldColumns(found, planned),
      rowCount: rows,
      usableRows: rows,
      siteCount: sites,
    },
    dateRange: daysOfStores(stores.map(({ counts }) => counts)),
    boundingBox: grid?.window.box ?? null,
    crs: grid?.lattice.crs ?? null,
    grid: grid
      ? { shape: grid.shape, cells: cells.length, box: grid.window.box, stepMinutes: stepMinutes(planned), calendar: calendarOf(planned) }
      : null,
    ...{ stamp: planned.find(({ series }) => series.steps.stamp)?.series.steps.stamp ?? null, stepMinutes: stepMinutes(planned) },
    stampZone: planned.some(({ series }) => !series.steps.daily) ? (reading.options.stampZone ?? 'UTC') : null,
  };
  return {
    understood,
    findings: findings.list(),
    findingCounts: findings.totals(),
    preview: reading.preview.preview(),
    staged: {
      ...{ kind: 'weather', source, blocks: keep ? reading.blocks : [], rows: keep ? rows : 0, sites: keep ? sites : 0 },
      ...(grid && keep ? { cells, grid: grid.shape } : {}),
      ...(newStations.length > 0 && keep ? { stations: newStations } : {}),
    },
  };
}

function stepMinutes(planned: GroupResult['planned']): number | null {
  const seconds = planned[0]?.series.steps.seconds;
  return seconds === undefined ? null : seconds / 60;
}

function calendarOf(planned: GroupResult['planned']): string | null {
  return planned[0]?.series.inputs[0].fields[0].time?.calendar ?? null;
}

function refuseEmpty({ notes }: FoundFields, findings: FindingList): void {
  const named = notes.filter(({ role }) => role.role !== null && isWeatherRole(role.role));
  const list = notes.slice(0, 10).map(({ label, role }) => `${label} (${role.reason})`);
  findings.refuse({
    code: named.length === 0 ? 'no-weather-field' : 'no-rows',
    message:
      named.length === 0
        ? `No field of the files is weather that is used here${list.length > 0 ? `: ${list.join('; ')}` : ''}.`
        : 'No day of the files has a value that can be used in the cells around the district.',
    advice:
      named.length === 0 ? 'Give the fields their roles in the plan, or bring another file.' : 'See the other findings for the reason.',
  });
}

function noteEmpty(cells: number, stations: number, findings: FindingList): void {
  if (cells > 0) findings.note({ code: 'empty-cells', message: `${cells} of the cells have no value at all and are left out.` });
  if (stations > 0)
    findings.note({ code: 'empty-stations', message: `${stations} of the stations have no value at all and are left out.` });
}
