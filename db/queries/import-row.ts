/** An import's own row, its files and what was staged from them. */
import { and, desc, eq, getTableColumns, inArray, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { type ImportState, importBefore, importFile, importJob, importStaged } from '../schema/import.ts';
import { storable, storableText } from './json-text.ts';

export type { ImportState };
export type ImportRow = typeof importJob.$inferSelect;
type ImportChange = Partial<typeof importJob.$inferInsert>;

export interface ImportFileLine {
  readonly name: string;
  readonly sizeBytes: number;
  readonly sha256: string;
}

const { preview: _preview, findings: _findings, ...listed } = getTableColumns(importJob);
const { preview: _large, ...withoutPreview } = getTableColumns(importJob);
const one = (districtId: string, importId: string) => and(eq(importJob.districtId, districtId), eq(importJob.importId, importId));
const isUuid = (text: string) => /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/i.test(text);

/** A file is stored in pieces: `ordinal` is its place among the files times this, plus the place of the piece. */
const PIECES_OF_FILE = 1000;
const PIECE_BYTES = 8 * 1024 * 1024;

/** A file on its way into the store: whole, or as the pieces that arrive. */
export interface StoredFile {
  readonly name: string;
  readonly sha256: string;
  /** bytes in pieces of any size */
  readonly content: AsyncIterable<Uint8Array> | Iterable<Uint8Array>;
}

async function insertFile(tx: Tx, key: { districtId: string; importId: string }, place: number, file: StoredFile): Promise<void> {
  const fixed = { ...key, name: storableText(file.name), sha256: file.sha256 };
  let piece = 0;
  for await (const bytes of inPieces(file.content))
    await tx.insert(importFile).values({ ...fixed, ordinal: place * PIECES_OF_FILE + piece++, bytes });
  if (piece === 0) await tx.insert(importFile).values({ ...fixed, ordinal: place * PIECES_OF_FILE, bytes: new Uint8Array() });
}

async function* inPieces(content: StoredFile['content']): AsyncGenerator<Uint8Array> {
  let held: Uint8Array[] = [];
  let size = 0;
  for await (const part of content) {
    for (let at = 0; at < part.length; ) {
      const take = part.subarray(at, at + PIECE_BYTES - size);
      held.push(take);
      size += take.length;
      at += take.length;
      if (size < PIECE_BYTES) continue;
      yield Buffer.concat(held);
      [held, size] = [[], 0];
    }
  }
  if (size > 0) yield Buffer.concat(held);
}

export async function insertImport(
  tx: Tx,
  values: { districtId: string; kind: string; options: unknown; createdBy: string | null },
  files: readonly StoredFile[],
): Promise<string> {
  const [row] = await tx
    .insert(importJob)
    .values({ ...values, options: storable(values.options) })
    .returning({ importId: importJob.importId });
  const key = { districtId: values.districtId, importId: row.importId };
  for (const [place, file] of files.entries()) await insertFile(tx, key, place, file);
  return row.importId;
}

/** The row, or null when it is not this district's. */
export async function findImport(tx: Tx, districtId: string, importId: string): Promise<ImportRow | null> {
  if (!isUuid(importId)) return null;
  const [row] = await tx.select().from(importJob).where(one(districtId, importId));
  return row ?? null;
}

/** The row without its sample, which may be large. */
export async function findImportBrief(tx: Tx, districtId: string, importId: string): Promise<Omit<ImportRow, 'preview'> | null> {
  if (!isUuid(importId)) return null;
  const [row] = await tx.select(withoutPreview).from(importJob).where(one(districtId, importId));
  return row ?? null;
}

/** Newest first, without previews and findings. */
export function listImports(tx: Tx, districtId: string, limit: number) {
  return tx.select(listed).from(importJob).where(eq(importJob.districtId, districtId)).orderBy(desc(importJob.createdAt)).limit(limit);
}

/** Names, sizes and hashes of the files of some imports, keyed by import. */
export async function listFileLines(tx: Tx, districtId: string, importIds: readonly string[]): Promise<Map<string, ImportFileLine[]>> {
  const lines = new Map<string, ImportFileLine[]>(importIds.map((id) => [id, []]));
  if (importIds.length === 0) return lines;
  const place = sql<number>`${importFile.ordinal} / ${sql.raw(String(PIECES_OF_FILE))}`;
  const rows = await tx
    .select({
      importId: importFile.importId,
      name: importFile.name,
      sizeBytes: sql<number>`sum(octet_length(${importFile.bytes}))::float8`,
      sha256: importFile.sha256,
    })
    .from(importFile)
    .where(and(eq(importFile.districtId, districtId), inArray(importFile.importId, [...importIds])))
    .groupBy(importFile.importId, place, importFile.name, importFile.sha256)
    .orderBy(importFile.importId, place);
  for (const { importId, ...line } of rows) lines.get(importId)?.push(line);
  return lines;
}

/** The pieces of the files of an import in order, one in memory at a time. */
export async function* eachFilePiece(
  tx: Tx,
  districtId: string,
  importId: string,
): AsyncGenerator<{ place: number; name: string; bytes: Uint8Array }> {
  const own = and(eq(importFile.districtId, districtId), eq(importFile.importId, importId));
  const lines = await tx
    .select({ ordinal: importFile.ordinal, name: importFile.name })
    .from(importFile)
    .where(own)
    .orderBy(importFile.ordinal);
  for (const { ordinal, name } of lines) {
    const [piece] = await tx
      .select({ bytes: importFile.bytes })
      .from(importFile)
      .where(and(own, eq(importFile.ordinal, ordinal)));
    yield { place: Math.floor(ordinal / PIECES_OF_FILE), name, bytes: piece.bytes };
  }
}

/** The files of an import, each put together from its pieces. */
export async function listImportFiles(tx: Tx, districtId: string, importId: string): Promise<{ name: string; bytes: Uint8Array }[]> {
  const files: { name: string; pieces: Uint8Array[] }[] = [];
  for await (const { place, name, bytes } of eachFilePiece(tx, districtId, importId)) {
    files[place] ??= { name, pieces: [] };
    files[place].pieces.push(bytes);
  }
  return files.map(({ name, pieces }) => ({ name, bytes: Buffer.concat(pieces) }));
}

/**
 * Changes a row only while it is in one of the given states (and at a given revision), so that two hands cannot both move it.
 *
 * @returns true when the row was changed
 */
export async function changeImport(
  tx: Tx,
  key: { districtId: string; importId: string; from: readonly ImportState[]; revision?: number },
  change: ImportChange,
): Promise<boolean> {
  const rows = await tx
    .update(importJob)
    .set(storableChange(change))
    .where(
      and(
        one(key.districtId, key.importId),
        inArray(importJob.state, [...key.from]),
        key.revision === undefined ? undefined : eq(importJob.revision, key.revision),
      ),
    )
    .returning({ importId: importJob.importId });
  return rows.length > 0;
}

function storableChange(change: ImportChange): ImportChange {
  const { understood, findings, preview, options, error } = change;
  return {
    ...change,
    ...(understood === undefined ? {} : { understood: storable(understood) }),
    ...(findings === undefined ? {} : { findings: storable(findings) }),
    ...(preview === undefined ? {} : { preview: storable(preview) }),
    ...(options === undefined ? {} : { options: storable(options) }),
    ...(typeof error === 'string' ? { error: storableText(error) } : {}),
  };
}

export async function saveStaged(tx: Tx, districtId: string, importId: string, pieces: readonly Uint8Array[]): Promise<void> {
  await dropStaged(tx, districtId, importId);
  for (const [ordinal, payload] of pieces.entries()) await tx.insert(importStaged).values({ districtId, importId, ordinal, payload });
}

/** Stores one staged piece of an import. */
export async function saveStagedPiece(
  tx: Tx,
  key: { districtId: string; importId: string; ordinal: number },
  payload: Uint8Array,
): Promise<void> {
  await tx.insert(importStaged).values({ ...key, payload });
}

export async function dropStaged(tx: Tx, districtId: string, importId: string): Promise<void> {
  await tx.delete(importStaged).where(and(eq(importStaged.districtId, districtId), eq(importStaged.importId, importId)));
}

/** One staged piece after the other, so that a large import is never whole in memory. */
export async function findStagedPiece(tx: Tx, districtId: string, importId: string, ordinal: number): Promise<Uint8Array | null> {
  const [row] = await tx
    .select({ payload: importStaged.payload })
    .from(importStaged)
    .where(and(eq(importStaged.districtId, districtId), eq(importStaged.importId, importId), eq(importStaged.ordinal, ordinal)));
  return row?.payload ?? null;
}

/** Lets one apply or undo of a district run at a time; held to the end of the transaction. */
export async function holdDistrict(tx: Tx, districtId: string): Promise<void> {
  await tx.execute(sql`select pg_advisory_xact_lock(hashtextextended(${`import ${districtId}`}, 7240112))`);
}

export async function nextAppliedOrder(tx: Tx, districtId: string): Promise<number> {
  const [row] = await tx
    .select({ next: sql<number>`(coalesce(max(${importJob.appliedOrder}), 0) + 1)::int` })
    .from(importJob)
    .where(eq(importJob.districtId, districtId));
  return row.next;
}

export async function dropBefore(tx: Tx, districtId: string, importId: string): Promise<void> {
  await tx.delete(importBefore).where(and(eq(importBefore.districtId, districtId), eq(importBefore.importId, importId)));
}
