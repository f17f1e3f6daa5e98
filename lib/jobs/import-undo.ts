/** Undoing an import: every row it changed is put back as it was, in one transaction. */

import type { Tx } from '../../db/connect.ts';
import { findLaterImport, type ImportKey, restoreRows } from '../../db/queries/import-before.ts';
import { countGeometryUp, listDangling } from '../../db/queries/import-land.ts';
import { changeImport, dropBefore, findImport, holdDistrict } from '../../db/queries/import-row.ts';
import { listSiteKeys } from '../../db/queries/import-weather.ts';
import { listSeasonsOnRecords, markRunsStale } from '../../db/queries/stale-runs.ts';
import { database } from '../access/database.ts';
import { Conflict, TillwaterError, TreeError } from '../base/errors.ts';
import type { OnStep } from './import-apply.ts';
import type { RecordsTouched } from './import-counts.ts';
import { checkTree } from './import-land.ts';
import { laterText, refuseDangling } from './import-references.ts';
import { startImportRuns } from './import-runs.ts';
import { refuseLostWeather, restoreBlocks } from './import-weather.ts';
import { updateSoilShares } from './soil-shares.ts';
import { requestWeatherCheck } from './weather-check.ts';

/** @throws Conflict naming the import that must be undone first */
export async function refuseLaterImport(tx: Tx, own: ImportKey): Promise<void> {
  const later = await findLaterImport(tx, own);
  if (later) throw new Conflict(`${later.example} was changed again by ${laterText(later)}. Undo that import first, then this one.`);
}

/** Undoes an applied import. A refusal leaves it applied, with the reason. */
export async function performUndo(own: ImportKey, onStep: OnStep = () => {}): Promise<void> {
  try {
    await database().inDistrict(own.districtId, (tx) => undoInside(tx, own, onStep));
  } catch (error) {
    if (!(error instanceof TillwaterError) || error.status >= 500) throw error;
    await database().inDistrict(own.districtId, (tx) =>
      changeImport(tx, { ...own, from: ['undoing'] }, { state: 'applied', progress: 1, error: error.message }),
    );
    return;
  }
  await startImportRuns(own);
}

async function undoInside(tx: Tx, own: ImportKey, onStep: OnStep): Promise<void> {
  await holdDistrict(tx, own.districtId);
  const row = await findImport(tx, own.districtId, own.importId);
  if (row?.state !== 'undoing') return;
  await refuseLaterImport(tx, own);
  await restoreAll(tx, own, onStep);
  await dropBefore(tx, own.districtId, own.importId);
  const understood = row.understood as { applied?: { seasons?: string[]; records?: RecordsTouched } };
  const seasons = await seasonsUndone(tx, own.districtId, understood.applied ?? {});
  if (row.kind === 'weather' || row.kind === 'stations') await requestWeatherCheck(own.districtId, undefined, tx);
  await markRunsStale(tx, own.districtId, seasons, `import of ${row.kind} undone`);
  const done = await changeImport(
    tx,
    { ...own, from: ['undoing'] },
    {
      state: 'undone',
      progress: 1,
      error: null,
      undoneAt: new Date(),
      understood: { ...understood, undone: { seasons, runs: null } },
    },
  );
  if (!done) throw new Error(`import ${own.importId} was moved while it was undone`);
  await onStep('marked');
}

/** The seasons it bore on when it was applied, and those whose runs have come to rest on its records since. */
async function seasonsUndone(tx: Tx, districtId: string, applied: { seasons?: string[]; records?: RecordsTouched }): Promise<string[]> {
  const since = applied.records ? await listSeasonsOnRecords(tx, districtId, applied.records) : [];
  return [...new Set([...(applied.seasons ?? []), ...since])];
}

async function restoreAll(tx: Tx, own: ImportKey, onStep: OnStep): Promise<void> {
  const danglingBefore = await listDangling(tx, own.districtId);
  const sites = await listSiteKeys(tx, own.districtId);
  await restoreBlocks(tx, own);
  await onStep('blocks');
  const tables = await restoreRows(tx, own);
  await onStep('rows');
  await refuseDangling(tx, own, { before: danglingBefore, doing: 'undo' });
  if (tables.includes('soil_area')) await updateSoilShares(tx, own);
  if (tables.includes('site')) await refuseLostWeather(tx, own.districtId, sites);
  if (tables.includes('reach')) await checkTreeLeft(tx, own.districtId);
  if (tables.some((table) => ['reach', 'parcel', 'service_area'].includes(table))) await countGeometryUp(tx, own.districtId);
  await onStep('checked');
}

async function checkTreeLeft(tx: Tx, districtId: string): Promise<void> {
  try {
    await checkTree(tx, districtId);
  } catch (error) {
    if (!(error instanceof TreeError)) throw error;
    throw new Conflict(`Undoing this would break the conveyance tree: ${error.message}. Undo the later canal imports first.`, {
      cause: error,
    });
  }
}
