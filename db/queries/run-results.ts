/** What a run leaves behind: parcels with their days, map arrays, canal days; and the parts of its slices while it is under way. */
import { and, asc, eq, gte, like, not, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { runParcel, runReach, runSlice, runValue } from '../schema/run.ts';

interface RunKey {
  readonly districtId: string;
  readonly runId: string;
}

/** Rows of `run_value` that a slice keeps until the run is finished: their period is this and the slice's number, so they sort as the numbers do. */
const PART = 'part/';
/** Rows of `run_value` that an array too large for one statement goes through. */
const PIECE = 'piece/';
/** Larger arrays go to the database in pieces: a statement holds its bytes three times over. */
const MOST_AT_ONCE = 16 * 1024 * 1024;

type PeriodName = (typeof runValue.$inferInsert)['period'];
const numbered = (prefix: string, number: number) => `${prefix}${String(number).padStart(6, '0')}` as PeriodName;
const valuesOf = ({ districtId, runId }: RunKey) => and(eq(runValue.districtId, districtId), eq(runValue.runId, runId));
/** Map arrays of a run, parts left out. */
export const isMapArray = not(like(runValue.period, '%/%'));

export interface RunPart {
  readonly variable: string;
  readonly values: Uint8Array;
  readonly periodCount: number;
  readonly parcelCount: number;
}

/** Keeps parts of a slice; doing it twice keeps the same. */
export async function saveRunParts(tx: Tx, key: RunKey, slice: number, parts: readonly RunPart[]): Promise<void> {
  for (const part of parts) await saveValues(tx, { ...key, ...part, period: numbered(PART, slice) });
}

export async function findRunPart(tx: Tx, key: RunKey, slice: number, variable: string): Promise<Uint8Array | null> {
  const [row] = await tx
    .select({ values: runValue.values })
    .from(runValue)
    .where(and(valuesOf(key), eq(runValue.variable, variable), eq(runValue.period, numbered(PART, slice))));
  return row?.values ?? null;
}

/** A page of the parts of one variable, in the order of the slices, from a slice on. */
export function listRunParts(tx: Tx, key: RunKey, variable: string, fromSlice: number, limit: number) {
  return tx
    .select({ values: runValue.values, parcelCount: runValue.parcelCount, periodCount: runValue.periodCount })
    .from(runValue)
    .where(
      and(
        valuesOf(key),
        eq(runValue.variable, variable),
        like(runValue.period, `${PART}%`),
        gte(runValue.period, numbered(PART, fromSlice)),
      ),
    )
    .orderBy(asc(runValue.period))
    .limit(limit);
}

/** Parts of every slice, or those of one variable of one slice. */
export async function deleteRunParts(tx: Tx, key: RunKey, only?: { slice: number; variable: string }): Promise<void> {
  const which = only
    ? and(eq(runValue.variable, only.variable), eq(runValue.period, numbered(PART, only.slice)))
    : like(runValue.period, '%/%');
  await tx.delete(runValue).where(and(valuesOf(key), which));
}

/** Parcels of a slice with everything of theirs: `rows` as JSON, places in `bytes`. */
export interface StoredRows {
  readonly rows: string;
  readonly bytes: Uint8Array;
}

/**
 * Stores the parcels of a slice. Each statement carries one block of bytes that the database cuts, because a parameter for each array of each parcel
 * costs more than the arrays.
 */
export async function saveSliceParcels(tx: Tx, key: RunKey, slice: number, blocks: readonly StoredRows[]): Promise<void> {
  const { districtId, runId } = key;
  await tx.delete(runParcel).where(and(eq(runParcel.districtId, districtId), eq(runParcel.runId, runId), eq(runParcel.slice, slice)));
  for (const { rows, bytes } of blocks) {
    await tx.execute(sql`insert into run_parcel (district_id, run_id, position, slice, parcel_code, turnout_code, reach_code, crop_codes,
        method_code, soil_code, area_m2, input, daily, flags, stage_et, stage_days, closing)
      select ${districtId}::uuid, ${runId}::uuid, r.position, ${slice}::int, r.code, r.turnout, r.reach, r.crops, r.method, r.soil, r.area, r.input,
        substring(b.bytes from r.at + 1 for r.daily), substring(b.bytes from r.at + r.daily + 1 for r.flags),
        substring(b.bytes from r.at + r.daily + r.flags + 1 for r.et), substring(b.bytes from r.at + r.daily + r.flags + r.et + 1 for r.days),
        r.closing
      from (select ${bytes}::bytea as bytes) b, json_to_recordset(${rows}::text::json) as r(position int, code text, turnout text, reach text,
        crops jsonb, method text, soil text, area float8, input jsonb, closing jsonb, at int, daily int, flags int, et int, days int)`);
  }
}

/** Marks a slice as stored. */
export async function closeSlice(tx: Tx, key: RunKey, slice: number, maxResidual: number): Promise<void> {
  await tx
    .update(runSlice)
    .set({ done: true, maxResidual })
    .where(and(eq(runSlice.districtId, key.districtId), eq(runSlice.runId, key.runId), eq(runSlice.slice, slice)));
}

/** True when a run has the array already. */
export async function hasRunValue(tx: Tx, key: RunKey, variable: string, period: 'week' | 'month' | 'season'): Promise<boolean> {
  const rows = await tx
    .select({ period: runValue.period })
    .from(runValue)
    .where(and(valuesOf(key), eq(runValue.variable, variable), eq(runValue.period, period)));
  return rows.length > 0;
}

/** Stores a map array, whatever its size. */
export async function saveRunValue(tx: Tx, row: typeof runValue.$inferInsert): Promise<void> {
  if (row.values.byteLength <= MOST_AT_ONCE) return saveValues(tx, row);
  for (let from = 0, piece = 0; from < row.values.byteLength; from += MOST_AT_ONCE, piece++)
    await saveValues(tx, { ...row, period: numbered(PIECE, piece), values: row.values.subarray(from, from + MOST_AT_ONCE) });
  await tx.execute(sql`insert into run_value (district_id, run_id, variable, period, period_count, parcel_count, "values")
    select ${row.districtId}::uuid, ${row.runId}::uuid, ${row.variable}, ${row.period}, ${row.periodCount}::int, ${row.parcelCount}::int,
      string_agg("values", ''::bytea order by period)
    from run_value where district_id = ${row.districtId} and run_id = ${row.runId} and variable = ${row.variable} and period like ${`${PIECE}%`}
    on conflict (district_id, run_id, variable, period) do update set "values" = excluded."values", period_count = excluded.period_count,
      parcel_count = excluded.parcel_count`);
  await tx
    .delete(runValue)
    .where(
      and(
        valuesOf({ districtId: row.districtId, runId: row.runId as string }),
        eq(runValue.variable, row.variable),
        like(runValue.period, `${PIECE}%`),
      ),
    );
}

async function saveValues(tx: Tx, row: typeof runValue.$inferInsert): Promise<void> {
  await tx
    .insert(runValue)
    .values(row)
    .onConflictDoUpdate({
      target: [runValue.districtId, runValue.runId, runValue.variable, runValue.period],
      set: { values: row.values, periodCount: row.periodCount, parcelCount: row.parcelCount },
    });
}

export async function saveRunReaches(tx: Tx, rows: (typeof runReach.$inferInsert)[]): Promise<void> {
  for (const row of rows) {
    await tx
      .insert(runReach)
      .values(row)
      .onConflictDoUpdate({ target: [runReach.districtId, runReach.runId, runReach.ordinal], set: { daily: row.daily } });
  }
}
