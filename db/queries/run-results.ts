/** What a finished run leaves behind: parcels' days, map arrays, canal days. */
import { and, asc, eq, gt } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { runParcel, runReach, runValue } from '../schema/run.ts';

/** A page of parcels with their stored days, after a position, in position order. */
export function listParcelDays(tx: Tx, key: { districtId: string; runId: string }, after: number, limit: number) {
  return tx
    .select({
      position: runParcel.position,
      area: runParcel.area,
      reachCode: runParcel.reachCode,
      daily: runParcel.daily,
      flags: runParcel.flags,
    })
    .from(runParcel)
    .where(and(eq(runParcel.districtId, key.districtId), eq(runParcel.runId, key.runId), gt(runParcel.position, after)))
    .orderBy(asc(runParcel.position))
    .limit(limit);
}

export async function saveRunValues(tx: Tx, rows: (typeof runValue.$inferInsert)[]): Promise<void> {
  for (const row of rows) {
    await tx
      .insert(runValue)
      .values(row)
      .onConflictDoUpdate({
        target: [runValue.districtId, runValue.runId, runValue.variable, runValue.period],
        set: { values: row.values, periodCount: row.periodCount, parcelCount: row.parcelCount },
      });
  }
}

export async function saveRunReaches(tx: Tx, rows: (typeof runReach.$inferInsert)[]): Promise<void> {
  for (const row of rows) {
    await tx
      .insert(runReach)
      .values(row)
      .onConflictDoUpdate({ target: [runReach.districtId, runReach.runId, runReach.ordinal], set: { daily: row.daily } });
  }
}
