/**
 * The job that applies an import, and the one that undoes it: each one transaction, so that a process killed at any moment leaves the
 * district either as it was or with all of it, and doing either again changes nothing.
 */

import type { Tx } from '../../db/connect.ts';
import type { ImportKey, RowChanges } from '../../db/queries/import-before.ts';
import { countGeometryUp, listDangling } from '../../db/queries/import-land.ts';
import { changeImport, findImport, holdDistrict, type ImportRow, type ImportState, nextAppliedOrder } from '../../db/queries/import-row.ts';
import { markRunsStale } from '../../db/queries/stale-runs.ts';
import { database } from '../access/database.ts';
import { Refused, TillwaterError } from '../base/errors.ts';
import type { GridShape } from '../weather/variable.ts';
import { type ApplyCounts, countsChanged, RecordDays, type Touched } from './import-counts.ts';
import {
  applyAreas,
  applyCropMappings,
  applyImages,
  applyPlantings,
  applyReaches,
  applySoilAreas,
  applyTurnouts,
  checkTree,
  ParcelWriter,
  removeAbsentAreas,
  removeAbsentReaches,
} from './import-land.ts';
import { keepHistory } from './import-lineage.ts';
import type { SourceRole, SourceTarget } from './import-places.ts';
import { applyDeliveries, applyMeasurements, applySoils } from './import-records.ts';
import { refuseDangling } from './import-references.ts';
import { seasonsTouched, startImportRuns } from './import-runs.ts';
import { findStagedHead, type StagedHead, type StagedPart, stagedParts } from './import-staged.ts';
import { performUndo } from './import-undo.ts';
import { applyBlocks, applyCells, applySites } from './import-weather.ts';
import type { JobData } from './queue.ts';
import { updateSoilShares } from './soil-shares.ts';
import { requestWeatherCheck } from './weather-check.ts';

export interface ImportApplyData extends JobData {
  readonly importId: string;
  readonly act: 'apply' | 'undo';
}

/** Told the name of each step inside the transaction, after it is done. */
export type OnStep = (step: string) => void | Promise<void>;

const PROGRESS_MS = 250;

/** Applies or undoes, as the job says. */
export async function performAct(data: ImportApplyData): Promise<void> {
  if (data.act === 'undo') await performUndo(data);
  else await performApply(data);
}

/**
 * Applies what was staged. A refusal leaves the import "failed" with the reason and nothing changed; any other fault throws, and the
 * queue tries again.
 */
export async function performApply(own: ImportKey, onStep: OnStep = () => {}): Promise<void> {
  try {
    await database().inDistrict(own.districtId, (tx) => applyInside(tx, own, onStep));
  } catch (error) {
    if (!(error instanceof TillwaterError) || error.status >= 500) throw error;
    await settle(own, 'applying', { state: 'failed', error: error.message });
    return;
  }
  await startImportRuns(own);
}

async function settle(own: ImportKey, from: ImportState, change: { state: ImportState; error: string }): Promise<void> {
  await database().inDistrict(own.districtId, (tx) => changeImport(tx, { ...own, from: [from] }, change));
}

async function applyInside(tx: Tx, own: ImportKey, onStep: OnStep): Promise<void> {
  await holdDistrict(tx, own.districtId);
  const row = await findImport(tx, own.districtId, own.importId);
  if (row?.state !== 'applying') return;
  const head = await findStagedHead(tx, own.districtId, own.importId);
  if (!head) throw new Refused('There is nothing staged to apply: read the files again.');
  await onStep('opened');
  const danglingBefore = await listDangling(tx, own.districtId);
  const result = await new Applier(tx, own, row, head, onStep).apply();
  await refuseDangling(tx, own, { before: danglingBefore, doing: 'apply' });
  await onStep('checked');
  const touched = countsChanged(result.counts) ? await seasonsTouched(tx, own.districtId, result.touched, validFromOf(row)) : [];
  await markRunsStale(tx, own.districtId, touched, `import of ${row.kind} applied`);
  if (row.kind === 'weather' || row.kind === 'stations') await requestWeatherCheck(own.districtId, undefined, tx);
  const applied = { ...result.counts, seasons: touched, records: result.touched.records, runs: null };
  const done = await changeImport(
    tx,
    { ...own, from: ['applying'] },
    {
      state: 'applied',
      progress: 1,
      error: null,
      appliedAt: new Date(),
      appliedOrder: await nextAppliedOrder(tx, own.districtId),
      understood: { ...(row.understood as object), applied },
    },
  );
  if (!done) throw new Error(`import ${own.importId} was moved while it was applied`);
  await onStep('marked');
}

/** First day on which the parcels of an import stand, where it says. */
function validFromOf({ kind, options }: ImportRow): string | null {
  const { validFrom } = options as { validFrom?: unknown };
  return kind === 'parcels' && typeof validFrom === 'string' ? validFrom : null;
}

/** Writes the staged pieces of one import, one after the other. */
class Applier {
  private readonly counts: ApplyCounts = {};
  private readonly months = new Set<string>();
  private readonly seasons = new Set<string>();
  private readonly records = new RecordDays();
  private readonly reaches = new Set<string>();
  /** of service areas or soil polygons */
  private readonly areas = new Set<string>();
  private parcels: ParcelWriter | null = null;
  private lastProgress = 0;

  constructor(
    private readonly tx: Tx,
    private readonly own: ImportKey,
    private readonly row: ImportRow,
    private readonly head: StagedHead,
    private readonly onStep: OnStep,
  ) {}

  async apply(): Promise<{ counts: ApplyCounts; touched: Touched }> {
    let done = 0;
    for await (const part of stagedParts(this.tx, this.own, this.head)) {
      await this.write(part);
      await this.onStep(`${part.part} ${++done}`);
      await this.tell(done / Math.max(1, this.head.pieces));
    }
    this.count('crop_mappings', await applyCropMappings(this.tx, this.own, this.head.cropMappings));
    await this.finish();
    const everything = !['weather', 'plantings', 'areas', 'images', 'deliveries', 'measurements'].includes(this.head.kind);
    const touched = { everything, months: [...this.months], seasons: [...this.seasons], records: this.records.touched() };
    return { counts: this.counts, touched };
  }

  private async write(part: StagedPart): Promise<void> {
    const { tx, own } = this;
    switch (part.part) {
      case 'sites':
        return this.count('sites', await applySites(tx, own, part.items, this.target()));
      case 'cells':
        return this.count('cells', await applyCells(tx, own, part.items, this.gridOfHead()));
      case 'blocks': {
        const { blocks, months, sites } = await applyBlocks(tx, own, part.items, this.target());
        if (sites.added > 0) this.count('sites', sites);
        this.counts.weather_blocks_changed = (this.counts.weather_blocks_changed ?? 0) + blocks;
        for (const month of months) this.months.add(month);
        return;
      }
      case 'turnouts':
        return this.count('turnouts', await applyTurnouts(tx, own, part.items));
      case 'parcels':
        this.parcels ??= await this.openParcels();
        return this.count('parcels', await this.parcels.write(tx, own, part.items));
      case 'plantings':
        for (const planting of part.items) this.seasons.add(planting.seasonCode);
        return this.count('plantings', await applyPlantings(tx, own, part.items));
      case 'reaches':
        for (const reach of part.items) this.reaches.add(reach.code);
        return this.count('reaches', await applyReaches(tx, own, part.items));
      case 'areas':
        for (const area of part.items) this.areas.add(area.code);
        return this.count('areas', await applyAreas(tx, own, part.items));
      case 'soilAreas':
        for (const area of part.items) this.areas.add(area.code);
        return this.count('soil_areas', await applySoilAreas(tx, own, part.items));
      case 'soils':
        return this.count('soils', await applySoils(tx, own, part.items));
      case 'images':
        for (const { date } of part.items) this.months.add(`${date.slice(0, 7)}-01`);
        return this.count('images', await applyImages(tx, own, part.items));
      case 'deliveries':
        for (const { date } of part.items) this.records.add('deliveries', date);
        return this.count('deliveries', await applyDeliveries(tx, own, part.items));
      case 'measurements':
        for (const { quantity, date } of part.items) this.records.add(quantity, date);
        return this.count('measurements', await applyMeasurements(tx, own, part.items));
    }
  }

  private async openParcels(): Promise<ParcelWriter> {
    this.counts.parcel_history_added = await keepHistory(this.tx, this.own, this.head, this.row.options);
    return ParcelWriter.open(this.tx, this.own.districtId);
  }

  private gridOfHead(): { name: string; shape: GridShape; role: SourceRole | null } {
    const { source, grid } = this.head;
    if (!grid) throw new Refused('The cells of this grid came without their lattice: read the files again.');
    return { name: this.sourceOption() ?? source ?? 'Grid', shape: grid, role: this.roleOption() };
  }

  private async finish(): Promise<void> {
    const { tx, own } = this;
    const replace = (this.row.options as { replace?: unknown }).replace === true;
    if (replace && this.parcels) this.counts.parcels_removed = await this.parcels.removeAbsent(tx, own);
    if (replace && this.reaches.size > 0) this.counts.reaches_removed = await removeAbsentReaches(tx, own, this.reaches);
    const { kind } = this.head;
    if (replace && this.areas.size > 0) {
      const table = kind === 'areas' ? 'service_area' : 'soil_area';
      this.counts[kind === 'areas' ? 'areas_removed' : 'soil_areas_removed'] = await removeAbsentAreas(tx, own, table, this.areas);
    }
    if (kind === 'soil-areas') this.counts.parcels_changed = await updateSoilShares(tx, own);
    if (kind === 'canals') await checkTree(tx, own.districtId);
    const land = kind === 'parcels' || kind === 'canals' || kind === 'areas';
    if (land && countsChanged(this.counts)) await countGeometryUp(tx, own.districtId);
    await this.onStep('finished');
  }

  /** The files' own name for a source serves observations; issues of a forecast, each with a name of its own, belong together. */
  private target(): SourceTarget {
    const role = this.roleOption();
    if (this.head.grid) return { source: this.gridOfHead().name, role };
    return { source: this.sourceOption() ?? (role === 'forecast' ? null : this.head.source), role };
  }

  private roleOption(): SourceRole | null {
    const { role } = this.row.options as { role?: unknown };
    return role === 'forecast' || role === 'observed' ? role : null;
  }

  private sourceOption(): string | null {
    const { source } = this.row.options as { source?: unknown };
    return typeof source === 'string' && source.trim() ? source.trim() : null;
  }

  private count(thing: string, changes: RowChanges): void {
    this.counts[`${thing}_added`] = (this.counts[`${thing}_added`] ?? 0) + changes.added;
    this.counts[`${thing}_changed`] = (this.counts[`${thing}_changed`] ?? 0) + changes.changed;
  }

  /** Progress is written beside the transaction, so that it can be seen before the end. */
  private async tell(progress: number): Promise<void> {
    const now = Date.now();
    if (now - this.lastProgress < PROGRESS_MS) return;
    this.lastProgress = now;
    await database().inDistrict(this.own.districtId, (tx) =>
      changeImport(tx, { ...this.own, from: ['applying'] }, { progress: Math.min(0.99, progress) }),
    );
  }
}
