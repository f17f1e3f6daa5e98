/** What a check found, as rows, and what becomes of the decisions that readers had already taken on them. */
import type { FlagRow, NewFlagRow } from '../../db/queries/quality.ts';
import { addDays } from '../base/civil-date.ts';
import { nullFromNaN } from '../base/missing.ts';
import type { Flag } from '../weather/quality/flag.ts';

const SEVERITY_RANK = { impossible: 0, suspect: 1, note: 2 } as const;
/** Two values are the same when they agree in so many digits: what single precision holds for certain. */
const SAME_DIGITS = 6;

/** Flags as rows of their source; of two with one key the graver stays. */
export function flagRows(
  flags: readonly Flag[],
  of: { districtId: string; sourceId: number; ordinals: readonly number[]; startDate: string },
): NewFlagRow[] {
  const rows = new Map<string, NewFlagRow>();
  for (const flag of flags) {
    const row: NewFlagRow = {
      districtId: of.districtId,
      sourceId: of.sourceId,
      ordinal: of.ordinals[flag.site],
      variable: flag.variable,
      rule: flag.rule,
      firstDay: addDays(of.startDate, flag.firstDay),
      lastDay: addDays(of.startDate, flag.lastDay),
      severity: flag.severity,
      value: nullFromNaN(flag.value),
      limit: nullFromNaN(flag.limit),
      detail: flag.detail,
      figures: flag.figures ?? {},
    };
    const other = rows.get(keyOf(row));
    if (!other || SEVERITY_RANK[row.severity] < SEVERITY_RANK[other.severity]) rows.set(keyOf(row), row);
  }
  return [...rows.values()];
}

function keyOf({ ordinal, variable, rule, firstDay }: NewFlagRow): string {
  return `${ordinal}/${variable}/${rule}/${firstDay}`;
}

/**
 * Carries decisions over to the flags of a new check, which looked at the record as decided:
 * - found again as it was: its state stays, and with it the decision that settled it;
 * - found again with another value: it is open, for the decision did not cure it or the record has changed;
 * - not found again: it is kept while the decision that settled it stands, so that it can be seen and undone; otherwise it is gone.
 *
 * @param standing ids of the decisions that have not been undone
 */
export function carryStates(before: readonly FlagRow[], found: readonly NewFlagRow[], standing: ReadonlySet<string>): NewFlagRow[] {
  const settled = before.filter(({ state, correctionId }) => state !== 'open' && correctionId !== null && standing.has(correctionId));
  const old = new Map(settled.map((row) => [keyOf(row), row]));
  const carried = found.map((row): NewFlagRow => {
    const known = old.get(keyOf(row));
    if (!known) return row;
    old.delete(keyOf(row));
    const same = isSame(known.value, row.value ?? null) && known.lastDay === row.lastDay;
    return same ? { ...row, state: known.state, correctionId: known.correctionId } : row;
  });
  return [...carried, ...old.values()];
}

function isSame(a: number | null, b: number | null): boolean {
  return a === b || (a !== null && b !== null && a.toPrecision(SAME_DIGITS) === b.toPrecision(SAME_DIGITS));
}
