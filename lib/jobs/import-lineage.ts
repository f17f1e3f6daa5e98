/** What an import of parcels does to the ground: told when it is read, kept when it is applied. */
import type { Tx } from '../../db/connect.ts';
import type { ImportKey } from '../../db/queries/import-before.ts';
import { changeImport } from '../../db/queries/import-row.ts';
import { isIsoDate } from '../base/civil-date.ts';
import { FINDING_LIMIT } from '../files/finding-list.ts';
import type { ImportReading, StagedParcel } from '../files/reading.ts';
import { findStagedHead, type StagedHead, stagedParts } from './import-staged.ts';
import { describeLineage, recordHistory } from './parcel-lineage.ts';

type Told = Pick<ImportReading, 'understood' | 'findings' | 'findingCounts'>;

/** Adds to a parcel import that was just read what becomes of the parcels that stand. Other kinds are left as they are. */
export async function tellLineage(tx: Tx, own: ImportKey, row: { kind: string; options: unknown }, told: Told): Promise<void> {
  if (row.kind !== 'parcels') return;
  const head = await findStagedHead(tx, own.districtId, own.importId);
  const found = head && (await describeLineage(tx, own.districtId, parcelPieces(tx, own, head), optionsOf(row.options)));
  if (!found) return;
  const { lineage, findings } = found;
  const { findingCounts: counts } = told;
  await changeImport(
    tx,
    { ...own, from: ['ready'] },
    {
      understood: { ...told.understood, lineage },
      findings: [...findings, ...told.findings].slice(0, FINDING_LIMIT),
      findingCounts: { ...counts, warning: counts.warning + findings.length },
    },
  );
}

/** Keeps the parcels that an import is about to change, and answers how many. Must run before the first of its parcels is written. */
export async function keepHistory(tx: Tx, own: ImportKey, head: StagedHead, options: unknown): Promise<number> {
  return recordHistory(tx, own, parcelPieces(tx, own, head), optionsOf(options));
}

async function* parcelPieces(tx: Tx, own: ImportKey, head: StagedHead): AsyncGenerator<readonly StagedParcel[]> {
  for await (const part of stagedParts(tx, own, head)) if (part.part === 'parcels') yield part.items;
}

function optionsOf(options: unknown): { replace: boolean; validFrom: string | undefined } {
  const { replace, validFrom } = options as { replace?: unknown; validFrom?: unknown };
  return { replace: replace === true, validFrom: typeof validFrom === 'string' && isIsoDate(validFrom) ? validFrom : undefined };
}
