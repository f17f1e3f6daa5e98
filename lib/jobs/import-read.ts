/** The job that reads an import's files: what was understood, what is at fault, a sample for the eye, and what is ready to apply. */
import type { Tx } from '../../db/connect.ts';
import { findImportContext } from '../../db/queries/import-context.ts';
import { changeImport, dropStaged, findImport, type ImportRow, listImportFiles, saveStagedPiece } from '../../db/queries/import-row.ts';
import { database } from '../access/database.ts';
import { log } from '../access/log.ts';
import { TillwaterError } from '../base/errors.ts';
import type { readImport } from '../files/read-import.ts';
import type { ImportContext, ImportKind, ImportOptions, Progress } from '../files/reading.ts';
import { tellLineage } from './import-lineage.ts';
import { PieceWriter } from './import-staged.ts';
import { applyImport } from './imports.ts';
import type { JobData } from './queue.ts';
import { type ReadHooks, type ReadOutcome, readInChild } from './reader-child.ts';
import { layOutFiles } from './reading-folder.ts';

export interface ImportReadData extends JobData {
  readonly importId: string;
  /** of the plan to read with; an older one is dropped */
  readonly revision: number;
}

export type Reader = typeof readImport;

const PROGRESS_MS = 250;

/** The plan was changed or the import cancelled while it was read. */
class Superseded extends Error {}

/** What is to be read. */
interface Given {
  readonly row: ImportRow;
  readonly context: ImportContext;
}

/**
 * Reads the files of an import and stores what came of it, unless the plan has changed meanwhile. A reader that fails leaves the import
 * "failed" with the reason; a database that fails throws, and the queue tries again.
 *
 * @param reader reads in this process instead of one of its own
 */
export async function performRead(data: ImportReadData, reader?: Reader): Promise<void> {
  const given = await database().inDistrict(data.districtId, async (tx): Promise<Given | null> => {
    const row = await findImport(tx, data.districtId, data.importId);
    if (row?.state !== 'reading' || row.revision !== data.revision) return null;
    await dropStaged(tx, data.districtId, data.importId);
    return { row, context: await findImportContext(tx, data.districtId, row.kind as ImportKind) };
  });
  if (!given) return;
  const hooks = { progress: progressOf(data), piece: pieceTaker(data) };
  let outcome: ReadOutcome;
  try {
    outcome = reader ? await readHere(data, given, reader, hooks) : await readApart(data, given, hooks);
  } catch (error) {
    if (error instanceof Superseded) return;
    await markFailed(data, error);
    return;
  }
  if (await saveReading(data, given.row, outcome)) await applyWhenClean(data, given.row, outcome);
}

/** A feed's file without errors is applied at once; one with errors waits for a person. */
async function applyWhenClean(data: ImportReadData, row: ImportRow, { reading }: ReadOutcome): Promise<void> {
  if ((row.options as { apply?: unknown }).apply !== 'when-clean') return;
  if (reading.findingCounts.error > 0 || reading.understood.usableRows === 0) return;
  await applyImport({ districtId: data.districtId, name: row.createdBy ?? 'feed' }, data.importId);
}

/** Reads in a process of its own, which gets the files as files. */
function readApart(data: ImportReadData, { row, context }: Given, hooks: ReadHooks): Promise<ReadOutcome> {
  const layOut = (folder: string) => database().inDistrict(data.districtId, (tx) => layOutFiles(tx, data, folder));
  return readInChild({ kind: row.kind as ImportKind, options: readerOptions(row.options), context, layOut }, hooks);
}

async function readHere(data: ImportReadData, { row, context }: Given, reader: Reader, hooks: ReadHooks): Promise<ReadOutcome> {
  const files = await database().inDistrict(data.districtId, (tx) => listImportFiles(tx, data.districtId, data.importId));
  const writer = new PieceWriter(hooks.piece);
  const told = await reader(row.kind as ImportKind, files, readerOptions(row.options), context, hooks.progress, writer.block);
  const { staged, ...reading } = told;
  return { reading, head: await writer.finish(staged) };
}

/** The reader's options: without what only the pipeline knows. */
function readerOptions(options: unknown): ImportOptions {
  const { recompute: _recompute, apply: _apply, ...rest } = options as ImportOptions & Record<string, unknown>;
  return rest;
}

/** Stores pieces in the order in which they come, while the reading is wanted. */
function pieceTaker(data: ImportReadData): ReadHooks['piece'] {
  let ordinal = 0;
  return async (bytes) => {
    ordinal++;
    await database().inDistrict(data.districtId, async (tx) => {
      await refuseSuperseded(tx, data);
      await saveStagedPiece(tx, { districtId: data.districtId, importId: data.importId, ordinal }, bytes);
    });
  };
}

async function refuseSuperseded(tx: Tx, data: ImportReadData): Promise<void> {
  const wanted = await changeImport(tx, { ...data, from: ['reading'], revision: data.revision }, { state: 'reading' });
  if (!wanted) throw new Superseded();
}

/** True when it was saved: false when the plan had changed meanwhile. */
async function saveReading(data: ImportReadData, row: ImportRow, { reading, head }: ReadOutcome): Promise<boolean> {
  return database().inDistrict(data.districtId, async (tx) => {
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
    if (!saved) return false;
    await saveStagedPiece(tx, { districtId: data.districtId, importId: data.importId, ordinal: 0 }, head);
    await tellLineage(tx, data, row, reading);
    return true;
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
  await database().inDistrict(data.districtId, async (tx) => {
    const marked = await changeImport(
      tx,
      { ...data, from: ['reading'], revision: data.revision },
      { state: 'failed', error: reason, findings, findingCounts: countOf(findings) },
    );
    if (marked) await dropStaged(tx, data.districtId, data.importId);
  });
}

function countOf(findings: readonly { severity: string }[]) {
  const count = (severity: string) => findings.filter((finding) => finding.severity === severity).length;
  return { error: count('error'), warning: count('warning'), note: count('note') };
}
