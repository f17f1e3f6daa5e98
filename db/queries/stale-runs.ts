/** Runs whose inputs have changed under them. */
import { and, eq, inArray, or, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { run } from '../schema/run.ts';

/**
 * Marks the standing runs of some seasons, and those that are being computed from what was, as stale. Called in the transaction of the change, so that
 * readers are never shown old numbers as new. The first reason stays.
 *
 * @param reason in a few words, as a reader is told: "import of weather applied"
 */
export async function markRunsStale(tx: Tx, districtId: string, seasons: readonly string[], reason: string): Promise<void> {
  if (seasons.length === 0) return;
  await tx
    .update(run)
    .set({ staleSince: sql`coalesce(${run.staleSince}, now())`, staleReason: sql`coalesce(${run.staleReason}, ${reason})` })
    .where(
      and(eq(run.districtId, districtId), inArray(run.seasonCode, [...seasons]), or(eq(run.standing, true), eq(run.state, 'running'))),
    );
}
