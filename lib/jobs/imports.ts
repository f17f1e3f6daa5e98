/** The acts on an import: make it, change its plan, call it off, apply it, undo it. Each may be done twice. */
import { createHash } from 'node:crypto';
import type { Tx } from '../../db/connect.ts';
import { changeImport, dropStaged, findImport, type ImportRow, type ImportState, insertImport } from '../../db/queries/import-row.ts';
import { database } from '../access/database.ts';
import { environment } from '../access/environment.ts';
import { Conflict, type Finding, Malformed, NotFound, Refused } from '../base/errors.ts';
import { HEAD_BYTES } from '../files/content-kind.ts';
import type { ImportFile, ImportKind, ImportOptions } from '../files/reading.ts';
import { checkContent } from './import-content.ts';
import { findStagedHead } from './import-staged.ts';
import { refuseLaterImport } from './import-undo.ts';
import { enqueue } from './queue.ts';

/** Who does it: the part of a caller that matters here. */
interface ImportActor {
  readonly districtId: string;
  readonly name: string;
}

export type PipelineOptions = ImportOptions & {
  /** false: no run is started when the import is applied */
  readonly recompute?: boolean;
  /** applied without a hand when it was read without errors: what feeds ask for */
  readonly apply?: 'when-clean';
};

/** A file as it came in: known by its head, size and hash, its bytes wherever they lie. */
export interface UploadedFile {
  readonly name: string;
  readonly size: number;
  readonly sha256: string;
  /** first bytes, as many as tell what it is */
  readonly head: Uint8Array;
  readonly content: AsyncIterable<Uint8Array> | Iterable<Uint8Array>;
}

/** A file held in memory, as an upload. */
export function uploadOf(file: Pick<ImportFile, 'name' | 'bytes'>): UploadedFile {
  const { name, bytes } = file;
  const sha256 = createHash('sha256').update(bytes).digest('hex');
  return { name, size: bytes.length, sha256, head: bytes.subarray(0, HEAD_BYTES), content: [bytes] };
}

interface NewImport {
  readonly kind: ImportKind;
  readonly files: readonly UploadedFile[];
  readonly options: PipelineOptions;
}

const LONGEST_NAME = 200;

/**
 * Takes the files in and has them read.
 *
 * @returns the import's id
 * @throws Malformed without a file; TooLarge, UnknownKind by their content
 */
export async function createImport(who: ImportActor, wanted: NewImport): Promise<string> {
  if (wanted.files.length === 0) throw new Malformed('No file was sent: send at least one part named "file".');
  checkContent(wanted.kind, wanted.files, environment().TILLWATER_UPLOAD_LIMIT_MB);
  const files = wanted.files.map(({ sha256, content, name }) => ({ name: shortName(name), sha256, content }));
  return database().inDistrict(who.districtId, async (tx) => {
    const values = { districtId: who.districtId, kind: wanted.kind, options: wanted.options, createdBy: who.name };
    const importId = await insertImport(tx, values, files);
    await enqueue('import-read', { districtId: who.districtId, importId, revision: 1 }, { tx });
    return importId;
  });
}

/** The last part of a path, not longer than a line. */
function shortName(name: string): string {
  const last = name.split(/[\\/]/).at(-1)?.trim() || 'file';
  return last.length > LONGEST_NAME ? `…${last.slice(1 - LONGEST_NAME)}` : last;
}

/** Reads the files again with other options. Members given replace those of the same name; null takes one away. */
export async function patchImport(who: ImportActor, importId: string, changes: Readonly<Record<string, unknown>>): Promise<void> {
  await database().inDistrict(who.districtId, async (tx) => {
    const row = await importOf(tx, who, importId);
    const merged = Object.entries({ ...(row.options as object), ...changes }).filter(([, value]) => value !== null && value !== undefined);
    const revision = row.revision + 1;
    const change = { state: 'reading', progress: 0, options: Object.fromEntries(merged), revision, error: null } as const;
    const changed = await changeImport(tx, { ...keyOf(who, importId), from: ['ready', 'failed'], revision: row.revision }, change);
    if (!changed) throw stateConflict(row, 'read again', 'ready or failed');
    await dropStaged(tx, who.districtId, importId);
    await enqueue('import-read', { districtId: who.districtId, importId, revision }, { tx });
  });
}

/** Calls an import off before it is applied. */
export async function cancelImport(who: ImportActor, importId: string): Promise<void> {
  await database().inDistrict(who.districtId, async (tx) => {
    const row = await importOf(tx, who, importId);
    if (row.state === 'cancelled') return;
    const changed = await changeImport(tx, { ...keyOf(who, importId), from: ['reading', 'ready', 'failed'] }, { state: 'cancelled' });
    if (!changed) throw stateConflict(row, 'cancelled', 'being read, ready or failed', row.state === 'applied' ? ' Undo it instead.' : '');
    await dropStaged(tx, who.districtId, importId);
  });
}

/**
 * Has what was read applied. Asking again while it is applied, or afterwards, changes nothing.
 *
 * @returns false when it is applied already
 * @throws Refused when nothing usable was read; Conflict in any other state
 */
export async function applyImport(who: ImportActor, importId: string): Promise<boolean> {
  return database().inDistrict(who.districtId, async (tx) => {
    const row = await importOf(tx, who, importId);
    if (row.state === 'applying' || row.state === 'applied') return row.state === 'applying';
    if (row.state === 'ready') await refuseEmpty(tx, who, row);
    const changed = await changeImport(tx, { ...keyOf(who, importId), from: ['ready'] }, { state: 'applying', progress: 0, error: null });
    if (!changed)
      throw stateConflict(row, 'applied', 'ready', row.state === 'failed' ? ' Correct what it says and have it read again.' : '');
    await enqueue('import-apply', { districtId: who.districtId, importId, act: 'apply' }, { tx });
    return true;
  });
}

async function refuseEmpty(tx: Tx, who: ImportActor, row: ImportRow): Promise<void> {
  const head = await findStagedHead(tx, who.districtId, row.importId);
  if (head && Object.values(head.counts).some((count) => count > 0)) return;
  const findings = (row.findings as Finding[]).filter((finding) => finding.severity === 'error').slice(0, 100);
  throw new Refused(
    'Nothing in these files can be applied: every row is at fault, or the columns were not understood. See the findings.',
    findings,
  );
}

/**
 * Has an applied import undone. Asking again changes nothing.
 *
 * @returns false when it is undone already
 * @throws Conflict naming the later import that must be undone first, or the state
 */
export async function undoImport(who: ImportActor, importId: string): Promise<boolean> {
  return database().inDistrict(who.districtId, async (tx) => {
    const row = await importOf(tx, who, importId);
    if (row.state === 'undoing' || row.state === 'undone') return row.state === 'undoing';
    if (row.state !== 'applied') throw stateConflict(row, 'undone', 'applied');
    await refuseLaterImport(tx, keyOf(who, importId));
    const changed = await changeImport(tx, { ...keyOf(who, importId), from: ['applied'] }, { state: 'undoing', progress: 0, error: null });
    if (!changed) throw stateConflict(row, 'undone', 'applied');
    await enqueue('import-apply', { districtId: who.districtId, importId, act: 'undo' }, { tx });
    return true;
  });
}

async function importOf(tx: Tx, who: ImportActor, importId: string): Promise<ImportRow> {
  const row = await findImport(tx, who.districtId, importId);
  if (!row) throw new NotFound(`There is no import ${importId} in this district.`);
  return row;
}

function keyOf(who: ImportActor, importId: string) {
  return { districtId: who.districtId, importId };
}

const STATE_WORDS: Record<ImportState, string> = {
  reading: 'being read',
  ready: 'ready',
  applying: 'being applied',
  applied: 'applied',
  undoing: 'being undone',
  undone: 'undone',
  cancelled: 'cancelled',
  failed: 'failed',
};

function stateConflict(row: ImportRow, act: string, allowed: string, advice = ''): Conflict {
  return new Conflict(`This import is ${STATE_WORDS[row.state]}; it can be ${act} only while it is ${allowed}.${advice}`);
}
