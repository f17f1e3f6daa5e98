/** The band of a run: where it stands, the parts it is computed in, and what it leaves behind. */
import { and, eq, gte, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { run, runBand, runParcel } from '../schema/run.ts';
import { textArray } from './district-read.ts';
import { notifyRun } from './run-state.ts';

interface RunKey {
  readonly districtId: string;
  readonly runId: string;
}

const PART = 'part';

const one = ({ districtId, runId }: RunKey) => and(eq(run.districtId, districtId), eq(run.runId, runId));
const bandsOf = ({ districtId, runId }: RunKey) => and(eq(runBand.districtId, districtId), eq(runBand.runId, runId));
const parts = (key: RunKey) => and(bandsOf(key), eq(runBand.level, PART));

/** Where the band of a run stands, as it was saved; null when none was asked for. */
export async function findBandState(tx: Tx, key: RunKey): Promise<unknown> {
  const [row] = await tx.select({ band: run.band }).from(run).where(one(key));
  return row?.band ?? null;
}

/** As `findBandState`, and no other transaction changes it until this one ends. */
export async function lockBandState(tx: Tx, key: RunKey): Promise<unknown> {
  const [row] = await tx.select({ band: run.band }).from(run).where(one(key)).for('update');
  return row?.band ?? null;
}

/** Saves where the band stands and tells listeners. */
export async function saveBandState(tx: Tx, key: RunKey, band: object): Promise<void> {
  await tx.update(run).set({ band }).where(one(key));
  await notifyRun(tx, key.districtId, key.runId);
}

/**
 * The parcels of one part, parcels of a reach beside one another, so that a part touches few reaches.
 *
 * @param from first place in the order by reach and position
 */
export async function listBandParcels(tx: Tx, key: RunKey, from: number, count: number) {
  return tx
    .select({ position: runParcel.position, reachCode: runParcel.reachCode })
    .from(runParcel)
    .where(and(eq(runParcel.districtId, key.districtId), eq(runParcel.runId, key.runId)))
    .orderBy(sql`${runParcel.reachCode} nulls last`, runParcel.position)
    .offset(from)
    .limit(count);
}

/** Keeps what one part came to; doing it twice keeps the same. */
export async function saveBandPart(tx: Tx, key: RunKey, part: number, values: Uint8Array): Promise<void> {
  const row = { ...key, level: PART, variable: partName(part), period: 'season', periodCount: 1, placeCount: 1, values } as const;
  await saveBandRow(tx, row);
}

/** Names sort as the numbers do. */
function partName(part: number): string {
  return String(part).padStart(6, '0');
}

export async function isBandPartDone(tx: Tx, key: RunKey, part: number): Promise<boolean> {
  const rows = await tx
    .select({ variable: runBand.variable })
    .from(runBand)
    .where(and(parts(key), eq(runBand.variable, partName(part))));
  return rows.length > 0;
}

export async function countBandParts(tx: Tx, key: RunKey): Promise<number> {
  const [row] = await tx.select({ count: sql<number>`count(*)::int` }).from(runBand).where(parts(key));
  return row.count;
}

export async function findBandPart(tx: Tx, key: RunKey, part: number): Promise<Uint8Array | null> {
  const [row] = await tx
    .select({ values: runBand.values })
    .from(runBand)
    .where(and(parts(key), eq(runBand.variable, partName(part))));
  return row?.values ?? null;
}

export async function deleteBandParts(tx: Tx, key: RunKey): Promise<void> {
  await tx.delete(runBand).where(parts(key));
}

/** Everything of a band, finished or not. */
export async function deleteBand(tx: Tx, key: RunKey): Promise<void> {
  await tx.delete(runBand).where(bandsOf(key));
}

export async function saveBandRow(tx: Tx, row: typeof runBand.$inferInsert): Promise<void> {
  await tx
    .insert(runBand)
    .values(row)
    .onConflictDoUpdate({
      target: [runBand.districtId, runBand.runId, runBand.level, runBand.variable, runBand.period],
      set: { values: row.values, periodCount: row.periodCount, placeCount: row.placeCount },
    });
}

export interface BandWanted {
  readonly level: 'parcel' | 'reach' | 'district';
  readonly variable: string;
  readonly period: 'week' | 'month' | 'season';
}

/**
 * The band of some places in a row, Float32 LE [quantile × period × place asked for]; null when the run has none. The array is taken out of its
 * storage once and cut there.
 */
export async function findBandValues(
  tx: Tx,
  key: RunKey,
  { level, variable, period }: BandWanted,
  places: { readonly from: number; readonly count: number } | null,
): Promise<{ values: Uint8Array; periodCount: number; placeCount: number } | null> {
  const kept = and(bandsOf(key), eq(runBand.level, level), eq(runBand.variable, variable), eq(runBand.period, period));
  if (!places) {
    const [row] = await tx
      .select({ values: runBand.values, periodCount: runBand.periodCount, placeCount: runBand.placeCount })
      .from(runBand)
      .where(kept);
    return row ?? null;
  }
  const rows = (await tx.execute(sql`
    with kept as materialized (
      select values || ''::bytea as bytes, period_count, place_count from run_band
      where district_id = ${key.districtId} and run_id = ${key.runId} and level = ${level} and variable = ${variable} and period = ${period}
    )
    select period_count, place_count, (
      select string_agg(substring(bytes from 4 * (k * place_count + ${places.from}::int) + 1 for 4 * ${places.count}::int), ''::bytea order by k)
      from generate_series(0, 3 * period_count - 1) k
    ) as values
    from kept`)) as unknown as { period_count: number; place_count: number; values: Uint8Array }[];
  const [row] = rows;
  return row ? { values: row.values, periodCount: row.period_count, placeCount: row.place_count } : null;
}

/** Areas of the parcels of a run [m²], by position. */
export async function listBandAreas(tx: Tx, key: RunKey): Promise<number[]> {
  const rows = await tx
    .select({ area: runParcel.area })
    .from(runParcel)
    .where(and(eq(runParcel.districtId, key.districtId), eq(runParcel.runId, key.runId)))
    .orderBy(runParcel.position);
  return rows.map(({ area }) => area);
}

/** Parcels of a run from a position on, in position order. @param codes those wanted; null for all */
export async function findBandPlaces(tx: Tx, key: RunKey, codes: readonly string[] | null, from: number, limit: number) {
  return tx
    .select({ position: runParcel.position, code: runParcel.parcelCode, area: runParcel.area })
    .from(runParcel)
    .where(
      and(
        eq(runParcel.districtId, key.districtId),
        eq(runParcel.runId, key.runId),
        gte(runParcel.position, from),
        codes ? sql`${runParcel.parcelCode} = any(${textArray(codes)})` : undefined,
      ),
    )
    .orderBy(runParcel.position)
    .limit(limit);
}
