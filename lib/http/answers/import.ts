/** Imports as the API and the pages show them. */
import {
  findImport,
  findImportBrief,
  type ImportFileLine,
  type ImportRow,
  listFileLines,
  listImports,
} from '../../../db/queries/import-row.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { type Finding, Forbidden, NotFound } from '../../base/errors.ts';
import type { ImportAnswer } from '../contract/rest.ts';

/** Most imports in the list. */
const LISTED = 200;

/** The newest imports, without findings and previews. */
export async function answerImports(caller: Caller): Promise<ImportAnswer[]> {
  refuseGrower(caller);
  return database().inDistrict(caller.districtId, async (tx) => {
    const rows = await listImports(tx, caller.districtId, LISTED);
    const files = await listFileLines(
      tx,
      caller.districtId,
      rows.map((row) => row.importId),
    );
    return rows.map((row) => answerOf({ ...row, findings: [] }, files.get(row.importId) ?? []));
  });
}

/**
 * One import.
 *
 * @param options `preview`: with the sample of rows or features, default true
 * @throws NotFound when the district has no such import
 */
export async function answerImport(caller: Caller, importId: string, options: { readonly preview?: boolean } = {}): Promise<ImportAnswer> {
  refuseGrower(caller);
  return database().inDistrict(caller.districtId, async (tx) => {
    const brief = options.preview === false;
    const row = brief ? await findImportBrief(tx, caller.districtId, importId) : await findImport(tx, caller.districtId, importId);
    if (!row) throw new NotFound(`There is no import ${importId} in this district.`);
    const files = await listFileLines(tx, caller.districtId, [importId]);
    const answer = answerOf(row, files.get(row.importId) ?? []);
    return brief ? answer : { ...answer, preview: (row as ImportRow).preview ?? null };
  });
}

/** The findings that were kept: errors first. At most a thousand; the true totals are in `finding_counts`. */
export async function answerFindings(caller: Caller, importId: string): Promise<Finding[]> {
  return (await answerImport(caller, importId, { preview: false })).findings as Finding[];
}

function refuseGrower(caller: Caller): void {
  if (caller.parcels !== null) throw new Forbidden('Imports show the land of the whole district: the role "grower" may not see them.');
}

function answerOf(row: Omit<ImportRow, 'preview'>, files: readonly ImportFileLine[]): ImportAnswer {
  const counts = row.findingCounts as Partial<ImportAnswer['finding_counts']>;
  return {
    id: row.importId,
    kind: row.kind as ImportAnswer['kind'],
    state: row.state,
    progress: row.progress,
    files: files.map((file) => ({ name: file.name, size_bytes: file.sizeBytes, sha256: file.sha256 })),
    options: row.options as Record<string, unknown>,
    understood: row.understood as Record<string, unknown> | null,
    findings: row.findings as ImportAnswer['findings'],
    finding_counts: { error: counts.error ?? 0, warning: counts.warning ?? 0, note: counts.note ?? 0 },
    error: row.error,
    created_at: row.createdAt.toISOString(),
    applied_at: row.appliedAt?.toISOString() ?? null,
    undone_at: row.undoneAt?.toISOString() ?? null,
    created_by: row.createdBy,
  };
}
