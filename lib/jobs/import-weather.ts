/** Applying and undoing stations and their weather. */
import type { Tx } from '../../db/connect.ts';
import { fileBlockImage, type ImportKey, listBlockImages, type RowChanges, replaceRows } from '../../db/queries/import-before.ts';
import { listSourceSites, listSources } from '../../db/queries/import-context.ts';
import { nextSiteOrdinal, nextSourceId } from '../../db/queries/import-land.ts';
import { type BlockKey, deleteBlock, findBlock, listBlocksBeyond, listSiteKeys, saveBlock } from '../../db/queries/import-weather.ts';
import { listObservedStations } from '../../db/queries/weather-sources.ts';
import { daysInMonth } from '../base/civil-date.ts';
import { Conflict, type Finding, Refused } from '../base/errors.ts';
import type { StagedBlock, StagedCell, StagedSite } from '../files/reading.ts';
import type { GridShape } from '../weather/variable.ts';
import { type BlockImage, type BlockRow, mergeBlock, restoreBlock } from './import-block.ts';
import {
  DEFAULT_SOURCE,
  type Place,
  refuseOtherRole,
  SitePlaces,
  type SourceRole,
  type SourceTarget,
  settledTarget,
} from './import-places.ts';

/**
 * Adds stations and changes those already known by their code. New ones are appended: a station's place in its source never changes.
 *
 * @param target source for new stations; without a name: the district's only source of its role, or "Stations" or "Forecast"
 */
export async function applySites(tx: Tx, own: ImportKey, sites: readonly StagedSite[], target: SourceTarget): Promise<RowChanges> {
  const { source, role } = await settledTarget(tx, own, target);
  const places = new SitePlaces(await listSourceSites(tx, own.districtId), source, role);
  const isNew = sites.some((site) => !places.find(site.code));
  const sourceId = isNew ? await ensureSource(tx, own, source, role) : 0;
  let next = isNew ? await nextSiteOrdinal(tx, own.districtId, sourceId) : 0;
  const rows = sites.map((site) => {
    const place = places.find(site.code) ?? { sourceId, ordinal: next++ };
    return {
      source_id: place.sourceId,
      ordinal: place.ordinal,
      code: site.code,
      name: site.name,
      longitude: site.longitude,
      latitude: site.latitude,
      elevation_m: site.elevation,
      wind_height_m: site.windHeight,
      zone: site.zone,
    };
  });
  return replaceRows(tx, own, 'site', rows);
}

async function ensureSource(tx: Tx, own: ImportKey, name: string | null, role: SourceRole): Promise<number> {
  const all = await listSources(tx, own.districtId);
  const sources = all.filter((source) => source.kind === 'stations' && source.role === role);
  if (name === null && sources.length === 1) return sources[0].sourceId;
  const grid = all.find((source) => source.name === name && source.kind === 'grid');
  if (grid) throw new Conflict(`"${name}" is the name of a grid: give the stations a source of another name.`);
  const wanted = name ?? DEFAULT_SOURCE;
  const found = sources.find((source) => source.name === wanted);
  if (found) return found.sourceId;
  const sourceId = await nextSourceId(tx, own.districtId);
  await replaceRows(tx, own, 'weather_source', [{ source_id: sourceId, name: wanted, kind: 'stations', role, rank: all.length + 1 }]);
  return sourceId;
}

/** A forecast for stations of the district that its source does not have yet: they are taken over with their place. */
async function copySites(tx: Tx, own: ImportKey, blocks: readonly StagedBlock[], target: { source: string | null; role: SourceRole }) {
  const places = new SitePlaces(await listSourceSites(tx, own.districtId), target.source, target.role);
  const absent = [...new Set(blocks.flatMap((block) => block.siteCodes))].filter((code) => !places.find(code));
  const known = await listObservedStations(tx, own.districtId, absent);
  return applySites(
    tx,
    own,
    known.map(({ code, name, longitude, latitude, elevation, windHeight, zone }) => ({
      ...{ code, name, longitude, latitude, elevation, windHeight, zone },
    })),
    target,
  );
}

/**
 * Makes the source of a grid and those of its cells that are not there yet. The lattice of a source never changes.
 *
 * @throws Conflict when the name is that of stations, of a grid on another lattice, or of the other role
 */
export async function applyCells(
  tx: Tx,
  own: ImportKey,
  cells: readonly StagedCell[],
  grid: { name: string; shape: GridShape; role: SourceRole | null },
) {
  const sources = await listSources(tx, own.districtId);
  const found = sources.find((source) => source.name === grid.name);
  refuseOtherRole(found, grid.role);
  if (found && found.kind !== 'grid')
    throw new Conflict(`"${grid.name}" is the name of a source of stations: give the grid another name in the options.`);
  if (found && !sameLattice(found.grid as GridShape, grid.shape))
    throw new Conflict(
      `The cells of "${grid.name}" lie elsewhere than those stored under this name: give this grid another name in the options.`,
    );
  const sourceId = found?.sourceId ?? (await nextSourceId(tx, own.districtId));
  if (!found) {
    const role = grid.role ?? 'observed';
    const row = { source_id: sourceId, name: grid.name, kind: 'grid', role, grid: grid.shape, rank: sources.length + 1 };
    await replaceRows(tx, own, 'weather_source', [row]);
  }
  const known = new Map(
    (await listSourceSites(tx, own.districtId)).filter((site) => site.sourceId === sourceId).map((site) => [site.code, site.ordinal]),
  );
  let next = await nextSiteOrdinal(tx, own.districtId, sourceId);
  const rows = cells.map((cell) => ({
    source_id: sourceId,
    ordinal: known.get(cell.code) ?? next++,
    code: cell.code,
    name: '',
    longitude: cell.longitude,
    latitude: cell.latitude,
    elevation_m: cell.elevation,
    wind_height_m: cell.windHeight ?? null,
    zone: null,
    grid_row: cell.row,
    grid_column: cell.column,
  }));
  return replaceRows(tx, own, 'site', rows);
}

/** Largest difference of two places that count as one, as a share of a cell. */
const SAME_PLACE = 1e-3;

function sameLattice(a: GridShape, b: GridShape): boolean {
  if (a.kind !== b.kind || a.rows !== b.rows || a.columns !== b.columns) return false;
  const near = (one: readonly number[] | null, other: readonly number[] | null) => {
    if (!one || !other) return one === other;
    const step = Math.abs((one[one.length - 1] - one[0]) / Math.max(1, one.length - 1)) || 1;
    return one.every((value, i) => Math.abs(value - other[i]) <= SAME_PLACE * step);
  };
  return near(a.x, b.x) && near(a.y, b.y);
}

interface BlockChanges {
  /** blocks made or changed */
  readonly blocks: number;
  readonly months: readonly string[];
  /** stations that a forecast took over */
  readonly sites: RowChanges;
}

/**
 * Merges staged months into the stored blocks, day by day: of a forecast the newest issue stands.
 *
 * @throws Refused naming the stations that are not in the district
 */
export async function applyBlocks(tx: Tx, own: ImportKey, blocks: readonly StagedBlock[], wanted: SourceTarget): Promise<BlockChanges> {
  const target = await settledTarget(tx, own, wanted);
  const sites = target.role === 'forecast' ? await copySites(tx, own, blocks, target) : { added: 0, changed: 0 };
  const places = new SitePlaces(await listSourceSites(tx, own.districtId), target.source, target.role);
  refuseUnknown(blocks, places);
  const months = new Set<string>();
  let count = 0;
  for (const block of blocks) {
    for (const [sourceId, rows] of rowsBySource(block, places)) {
      const key = { sourceId, variable: block.variable, month: block.month };
      const merged = mergeBlock(await findBlock(tx, own.districtId, key), { dayCount: daysOf(block.month), steps: block.steps }, rows);
      if (!merged) continue;
      await saveBlock(tx, own.districtId, key, merged.block);
      await fileBlockImage(tx, own, { ...key }, merged.image);
      months.add(block.month);
      count++;
    }
  }
  return { blocks: count, months: [...months], sites };
}

function rowsBySource(block: StagedBlock, places: SitePlaces) {
  const bySource = new Map<number, BlockRow[]>();
  const length = block.values.length / Math.max(1, block.siteCodes.length);
  block.siteCodes.forEach((code, i) => {
    const place = places.find(code) as Place;
    const rows = bySource.get(place.sourceId) ?? [];
    rows.push({ ordinal: place.ordinal, values: block.values.subarray(i * length, (i + 1) * length) });
    bySource.set(place.sourceId, rows);
  });
  return bySource;
}

function refuseUnknown(blocks: readonly StagedBlock[], places: SitePlaces): void {
  const unknown = new Set(blocks.flatMap((block) => block.siteCodes.filter((code) => !places.find(code))));
  if (unknown.size === 0) return;
  const findings: Finding[] = [...unknown].slice(0, 100).map((code) => ({
    severity: 'error',
    code: 'unknown-site',
    message: `Station "${code}" is not in this district`,
    column: 'site',
    value: code,
    advice: 'Import it as a station first, with its longitude and latitude.',
  }));
  const some = [...unknown].slice(0, 5).join(', ');
  throw new Refused(
    `The weather is of ${unknown.size} station${unknown.size === 1 ? '' : 's'} that this district does not have (${some}${unknown.size > 5 ? ' …' : ''}). Import the stations first, then read this file again.`,
    findings,
  );
}

function daysOf(month: string): number {
  return daysInMonth(Number(month.slice(0, 4)), Number(month.slice(5, 7)));
}

/** Puts the blocks an import changed back. */
export async function restoreBlocks(tx: Tx, own: ImportKey): Promise<boolean> {
  const images = (await listBlockImages(tx, own)) as { key: BlockKey; before: BlockImage }[];
  for (const { key, before } of images) {
    const now = await findBlock(tx, own.districtId, key);
    if (!now) continue;
    const restored = restoreBlock(now, before);
    if (restored) await saveBlock(tx, own.districtId, key, restored);
    else await deleteBlock(tx, own.districtId, key);
  }
  return images.length > 0;
}

/**
 * Refuses to leave weather behind without its station.
 *
 * @param before the stations as they were before the undo
 * @throws Conflict naming the first station that still has weather
 */
export async function refuseLostWeather(tx: Tx, districtId: string, before: Awaited<ReturnType<typeof listSiteKeys>>): Promise<void> {
  const now = new Set((await listSiteKeys(tx, districtId)).map((site) => `${site.sourceId} ${site.ordinal}`));
  const lost = before.filter((site) => !now.has(`${site.sourceId} ${site.ordinal}`));
  for (const sourceId of new Set(lost.map((site) => site.sourceId))) {
    const own = lost.filter((site) => site.sourceId === sourceId);
    const lowest = own.reduce((least, { ordinal }) => Math.min(least, ordinal), Number.POSITIVE_INFINITY);
    const blocks = await listBlocksBeyond(tx, districtId, sourceId, lowest);
    const left = own.find(({ ordinal }) => blocks.some((block) => holdsWeather(block, ordinal)));
    if (!left) continue;
    throw new Conflict(`Station "${left.code}" has weather that was imported after it. Undo the weather import first, then this one.`);
  }
}

/** True where a block has a value of a site. */
function holdsWeather({ dayCount, steps, quality }: { dayCount: number; steps: number; quality: Uint8Array }, ordinal: number): boolean {
  const length = dayCount * steps;
  return quality.subarray(ordinal * length, (ordinal + 1) * length).some((code) => code !== 0);
}
