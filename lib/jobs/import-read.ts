/** The job that reads an import's files: what was understood, what is at fault, a sample for the eye, and what is ready to apply. */
import { findImportContext } from '../../db/queries/import-context.ts';
import { changeImport, findImport, type ImportRow, listImportFiles, saveStaged } from '../../db/queries/import-row.ts';
import { database } from '../access/database.ts';
import { log } from '../access/log.ts';
import { TillwaterError } from '../base/errors.ts';
import { readImport } from '../files/read-import.ts';
import type { ImportKind, ImportOptions, ImportReading, Progress } from '../files/reading.ts';
import { stagedPieces } from './import-staged.ts';
import type { JobData } from './queue.ts';

export interface ImportReadData extends JobData {
  readonly importId: string;
  /** of the plan to read with; an older one is dropped */
  readonly revision: number;
}

export type Reader = typeof readImport;

const PROGRESS_MS = 250;

/** The plan was changed or the import cancelled while it was read. */
class Superseded extends Error {}

/**
 * Reads the files of an import and stores what came of it, unless the plan has changed meanwhile. A reader that fails leaves the import
 * "failed" with the reason; a database that fails throws, and the queue tries again.
 */
export async function performRead(data: ImportReadData, reader: Reader = readImport): Promise<void> {
  const given = await database().inDistrict(data.districtId, async (tx) => {
    const row = await findImport(tx, data.districtId, data.importId);
    if (row?.state !== 'reading' || row.revision !== data.revision) return null;
    const context = await findImportContext(tx, data.districtId);
    return { row, context, files: await listImportFiles(tx, data.districtId, data.importId) };
  });
  if (!given) return;
  const { row, files, context } = given;
  let reading: ImportReading;
  try {
    reading = await reader(row.kind as ImportKind, files, readerOptions(row.options), context, progressOf(data));
  } catch (error) {
    if (error instanceof Superseded) return;
    await markFailed(data, error);
    return;
  }
  await saveReading(data, row, reading);
}

/** The reader's options: without what only the pipeline knows. */
function readerOptions(options: unknown): ImportOptions {
  const { recompute: _recompute, ...rest } = options as ImportOptions & { recompute?: boolean };
  return rest;
}

async function saveReading(data: ImportReadData, row: ImportRow, reading: ImportReading): Promise<void> {
  const pieces = await stagedPieces(reading.staged);
  await database().inDistrict(data.districtId, async (tx) => {
    const saved = await changeImport(
      tx,
      { ...data, from: ['reading'], revision: row.revision },
      {
        state: 'ready',
        progress: 1,
        understood: reading.understood,
        findings: reading.findings,
        findingCounts: reading.findingCounts,
        preview: reading.preview,
        error: null,
      },
    );
    if (saved) await saveStaged(tx, data.districtId, data.importId, pieces);
  });
}

/** Writes how far the reading is, at most four times a second, and ends it when nobody wants it any more. */
function progressOf(data: ImportReadData): Progress {
  let last = 0;
  return async (fraction) => {
    const now = Date.now();
    if (now - last < PROGRESS_MS) return;
    last = now;
    const wanted = await database().inDistrict(data.districtId, (tx) =>
      changeImport(tx, { ...data, from: ['reading'], revision: data.revision }, { progress: Math.min(0.99, Math.max(0, fraction)) }),
    );
    if (!wanted) throw new Superseded();
  };
}

async function markFailed(data: ImportReadData, error: unknown): Promise<void> {
  const known = error instanceof TillwaterError && error.status < 500;
  if (!known) log().error({ err: error, import: data.importId, district: data.districtId }, 'import not read');
  const reason = known
    ? error.message
    : `The reader failed on this file (${error instanceof Error ? error.message : String(error)}). Check that the file opens in another program and is of the kind chosen; then read it again or upload it anew.`;
  const findings = known && 'findings' in error && Array.isArray(error.findings) ? error.findings : [];
  await database().inDistrict(data.districtId, (tx) =>
    changeImport(
      tx,
      { ...data, from: ['reading'], revision: data.revision },
      { state: 'failed', error: reason, findings, findingCounts: countOf(findings) },
    ),
  );
}

function countOf(findings: readonly { severity: string }[]) {
  const count = (severity: string) => findings.filter((finding) => finding.severity === severity).length;
  return { error: count('error'), warning: count('warning'), note: count('note') };
}
