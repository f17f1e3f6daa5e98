/** A changed input makes the runs that rest on it stale, in the transaction of the change: readers are never shown old numbers as new. */
import type { Tx } from '../../db/connect.ts';
import { markRunsStale } from '../../db/queries/stale-runs.ts';

/**
 * Marks the standing runs of seasons, and runs at work from what was, as stale.
 *
 * @param reason in a few words, as a reader is told: "weather import north.csv"
 */
export function markStale(tx: Tx, districtId: string, seasons: readonly string[], reason: string): Promise<void> {
  return markRunsStale(tx, districtId, seasons, reason);
}
