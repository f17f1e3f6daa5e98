/** An import, or its undoing, must not leave anything naming what is not there. */
import type { Tx } from '../../db/connect.ts';
import { findLaterImportOf, type ImportKey, type LaterImport } from '../../db/queries/import-before.ts';
import { type Dangling, listDangling } from '../../db/queries/import-land.ts';
import { Conflict, Refused } from '../base/errors.ts';

/**
 * Compares the references that lead nowhere with those that did before. Reach codes are taken on trust while the district has no canals.
 *
 * @throws Refused when applying, Conflict when undoing, saying what would be left and what to do
 */
export async function refuseDangling(
  tx: Tx,
  own: ImportKey,
  given: { before: readonly Dangling[]; doing: 'apply' | 'undo' },
): Promise<void> {
  const was = new Map(given.before.map((one) => [one.words, one.count]));
  for (const one of await listDangling(tx, own.districtId)) {
    if (one.count <= (was.get(one.words) ?? 0)) continue;
    const onTrust = one.to === 'reach' && one.nothingThere;
    const later = given.doing === 'undo' ? await findLaterImportOf(tx, own, one.table) : null;
    if (onTrust && !later) continue;
    refuse(one, given.doing, later);
  }
}

function refuse(worse: Dangling, doing: 'apply' | 'undo', later: LaterImport | null): never {
  const what = `${worse.count} ${worse.words} (for example "${worse.example}")`;
  if (doing === 'apply')
    throw new Refused(`Applying this would leave ${what}. Import what they name first, or correct the file; then read it again.`);
  const how = later ? `Undo ${laterText(later)} first.` : 'They were not imported with this file: change or remove them first.';
  throw new Conflict(`Undoing this would leave ${what}. ${how}`);
}

/** An import in words. */
export function laterText(later: LaterImport): string {
  return `the ${later.kind} import "${later.file}" applied ${later.appliedAt}`;
}
