/** The life of a run: asked for, cut into slices, sliced through, finished, swapped in. */
import { and, eq, getTableColumns, inArray, isNull, ne, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { run, runParcel, runSlice } from '../schema/run.ts';
import { deleteRunParts } from './run-results.ts';

export type RunRow = typeof run.$inferSelect;
type NewRun = typeof run.$inferInsert;

/** Frozen inputs are large and read only by the slices. */
const { frozen: _frozen, ...withoutFrozen } = getTableColumns(run);

const one = (districtId: string, runId: string) => and(eq(run.districtId, districtId), eq(run.runId, runId));

export async function insertRun(tx: Tx, values: NewRun): Promise<string> {
  const [row] = await tx.insert(run).values(values).returning({ runId: run.runId });
  return row.runId;
}

/** A run without its frozen inputs. */
export async function findRun(tx: Tx, districtId: string, runId: string): Promise<Omit<RunRow, 'frozen'> | null> {
  const [row] = await tx.select(withoutFrozen).from(run).where(one(districtId, runId));
  return row ?? null;
}

export async function findFrozen(tx: Tx, districtId: string, runId: string): Promise<Uint8Array | null> {
  const [row] = await tx.select({ frozen: run.frozen }).from(run).where(one(districtId, runId));
  return row?.frozen ?? null;
}

/** Changes a run and tells listeners; one that ends without results leaves no parts. Only a run that is still going is changed; answers whether it was. */
export async function updateGoingRun(tx: Tx, districtId: string, runId: string, values: Partial<NewRun>): Promise<boolean> {
  const rows = await tx
    .update(run)
    .set(values)
    .where(and(one(districtId, runId), inArray(run.state, ['queued', 'running'])))
    .returning({ runId: run.runId });
  if (rows.length === 0) return false;
  if (values.state === 'failed' || values.state === 'cancelled') await deleteRunParts(tx, { districtId, runId });
  await notifyRun(tx, districtId, runId);
  return true;
}

export async function notifyRun(tx: Tx, districtId: string, runId: string): Promise<void> {
  await tx.execute(sql`select pg_notify('run_progress', ${JSON.stringify({ district: districtId, run: runId })})`);
}

/** Cuts a run anew: nothing of its slices of before is left. */
export async function replaceSlices(tx: Tx, districtId: string, runId: string, count: number): Promise<void> {
  await deleteRunParts(tx, { districtId, runId });
  await tx.delete(runSlice).where(and(eq(runSlice.districtId, districtId), eq(runSlice.runId, runId)));
  await tx.delete(runParcel).where(and(eq(runParcel.districtId, districtId), eq(runParcel.runId, runId)));
  const rows = Array.from({ length: count }, (_, slice) => ({ districtId, runId, slice }));
  if (rows.length > 0) await tx.insert(runSlice).values(rows);
}

export function listParcelInputs(tx: Tx, districtId: string, runId: string, positions: readonly number[]) {
  return tx
    .select({ position: runParcel.position, parcelCode: runParcel.parcelCode, input: runParcel.input })
    .from(runParcel)
    .where(and(eq(runParcel.districtId, districtId), eq(runParcel.runId, runId), inArray(runParcel.position, [...positions])))
    .orderBy(runParcel.position);
}

export async function countSlices(tx: Tx, districtId: string, runId: string): Promise<{ done: number; all: number; maxResidual: number }> {
  const [row] = await tx
    .select({
      done: sql<number>`count(*) filter (where ${runSlice.done})::int`,
      all: sql<number>`count(*)::int`,
      maxResidual: sql<number>`coalesce(max(${runSlice.maxResidual}), 0)::float8`,
    })
    .from(runSlice)
    .where(and(eq(runSlice.districtId, districtId), eq(runSlice.runId, runId)));
  return row;
}

/** Whether a slice is stored; null when the run has no such slice. */
export async function isSliceDone(tx: Tx, districtId: string, runId: string, slice: number): Promise<boolean | null> {
  const [row] = await tx
    .select({ done: runSlice.done })
    .from(runSlice)
    .where(sliceOf(districtId, runId, slice));
  return row?.done ?? null;
}

/** As `isSliceDone`, and no other transaction stores the slice until this one ends. */
export async function lockSlice(tx: Tx, districtId: string, runId: string, slice: number): Promise<boolean | null> {
  const [row] = await tx
    .select({ done: runSlice.done })
    .from(runSlice)
    .where(sliceOf(districtId, runId, slice))
    .for('update');
  return row?.done ?? null;
}

function sliceOf(districtId: string, runId: string, slice: number) {
  return and(eq(runSlice.districtId, districtId), eq(runSlice.runId, runId), eq(runSlice.slice, slice));
}

/** Makes a finished run the one readers see; the run it replaces stays readable by its id. */
export async function makeStanding(tx: Tx, districtId: string, seasonCode: string, runId: string): Promise<void> {
  await tx
    .update(run)
    .set({ standing: false })
    .where(and(eq(run.districtId, districtId), eq(run.seasonCode, seasonCode), eq(run.standing, true)));
  await tx.update(run).set({ standing: true }).where(one(districtId, runId));
}

/** Runs of a season that wait and have not begun: a newer request replaces them. */
export async function cancelWaitingRuns(tx: Tx, districtId: string, seasonCode: string, byRunId: string): Promise<void> {
  await tx
    .update(run)
    .set({
      state: 'cancelled',
      stage: 'replaced by a newer request',
      error: `Replaced by run ${byRunId} before it began.`,
      finishedAt: new Date(),
    })
    .where(
      and(
        eq(run.districtId, districtId),
        eq(run.seasonCode, seasonCode),
        eq(run.state, 'queued'),
        isNull(run.startedAt),
        ne(run.runId, byRunId),
      ),
    );
}

/** Settings of the run a season's readers see; null where none stands. */
export async function findStandingSettings(tx: Tx, districtId: string, seasonCode: string): Promise<unknown> {
  const [row] = await tx
    .select({ settings: run.settings })
    .from(run)
    .where(and(eq(run.districtId, districtId), eq(run.seasonCode, seasonCode), eq(run.standing, true)));
  return row?.settings ?? null;
}
