/** Runs and what they left behind, as readers see them. */
import { and, asc, desc, eq, getTableColumns, gte, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { parcel } from '../schema/land.ts';
import { run, runParcel, runReach, runValue } from '../schema/run.ts';
import { textArray } from './district-read.ts';
import { isMapArray } from './run-results.ts';

const { frozen: _frozen, ...columns } = getTableColumns(run);
export type RunHead = Omit<typeof run.$inferSelect, 'frozen'>;

interface RunKey {
  readonly districtId: string;
  readonly runId: string;
}

/** Runs without their frozen inputs, newest first. */
export function listRuns(tx: Tx, districtId: string, season?: string): Promise<RunHead[]> {
  return tx
    .select(columns)
    .from(run)
    .where(and(eq(run.districtId, districtId), season ? eq(run.seasonCode, season) : undefined))
    .orderBy(desc(run.createdAt))
    .limit(500);
}

/** The run readers see: of one season, or of the latest season that has one. */
export async function findStandingRun(tx: Tx, districtId: string, season?: string): Promise<RunHead | null> {
  const [row] = await tx
    .select(columns)
    .from(run)
    .where(and(eq(run.districtId, districtId), eq(run.standing, true), season ? eq(run.seasonCode, season) : undefined))
    .orderBy(desc(run.startDate))
    .limit(1);
  return row ?? null;
}

export interface RunParcelFilter extends RunKey {
  readonly codes: readonly string[] | null;
  readonly parcel?: string;
  readonly reach?: string;
  readonly crop?: string;
}

function matching({ districtId, runId, codes, parcel: code, reach, crop }: RunParcelFilter) {
  return and(
    eq(runParcel.districtId, districtId),
    eq(runParcel.runId, runId),
    code ? eq(runParcel.parcelCode, code) : undefined,
    reach ? eq(runParcel.reachCode, reach) : undefined,
    crop ? sql`${runParcel.cropCodes} @> ${JSON.stringify([crop])}::jsonb` : undefined,
    codes ? sql`${runParcel.parcelCode} = any(${textArray(codes)})` : undefined,
  );
}

export async function countRunParcels(tx: Tx, filter: RunParcelFilter): Promise<number> {
  const [row] = await tx.select({ count: sql<number>`count(*)::int` }).from(runParcel).where(matching(filter));
  return row.count;
}

/** A page of parcels with their stored days, from a position on, in position order. */
export function listRunParcelDays(tx: Tx, filter: RunParcelFilter, fromPosition: number, limit: number) {
  return tx
    .select({
      position: runParcel.position,
      parcelCode: runParcel.parcelCode,
      turnoutCode: runParcel.turnoutCode,
      reachCode: runParcel.reachCode,
      cropCodes: runParcel.cropCodes,
      area: runParcel.area,
      daily: runParcel.daily,
      flags: runParcel.flags,
    })
    .from(runParcel)
    .where(and(matching(filter), gte(runParcel.position, fromPosition)))
    .orderBy(asc(runParcel.position))
    .limit(limit);
}

export type RunParcelDays = Awaited<ReturnType<typeof listRunParcelDays>>[number];

/** Every parcel of a run without its days, in position order; `ordinal` and `name` as the land stands now, null for a parcel that is gone. */
export function listRunParcelHeads(tx: Tx, { districtId, runId }: RunKey) {
  return tx
    .select({
      position: runParcel.position,
      code: runParcel.parcelCode,
      reachCode: runParcel.reachCode,
      cropCodes: runParcel.cropCodes,
      methodCode: runParcel.methodCode,
      soilCode: runParcel.soilCode,
      area: runParcel.area,
      ordinal: parcel.ordinal,
      name: parcel.name,
    })
    .from(runParcel)
    .leftJoin(parcel, and(eq(parcel.districtId, runParcel.districtId), eq(parcel.code, runParcel.parcelCode)))
    .where(and(eq(runParcel.districtId, districtId), eq(runParcel.runId, runId)))
    .orderBy(asc(runParcel.position));
}

export function listRunReaches(tx: Tx, { districtId, runId }: RunKey) {
  return tx
    .select()
    .from(runReach)
    .where(and(eq(runReach.districtId, districtId), eq(runReach.runId, runId)))
    .orderBy(asc(runReach.ordinal));
}

/** Parcels and area on each reach of a run. */
export function listReachAreas(tx: Tx, { districtId, runId }: RunKey) {
  return tx
    .select({ reachCode: runParcel.reachCode, count: sql<number>`count(*)::int`, area: sql<number>`sum(${runParcel.area})::float8` })
    .from(runParcel)
    .where(and(eq(runParcel.districtId, districtId), eq(runParcel.runId, runId)))
    .groupBy(runParcel.reachCode);
}

/** The variables a run keeps map arrays of; a run of an earlier version may lack some. */
export async function listRunVariables(tx: Tx, { districtId, runId }: RunKey): Promise<string[]> {
  const rows = await tx
    .selectDistinct({ variable: runValue.variable })
    .from(runValue)
    .where(and(eq(runValue.districtId, districtId), eq(runValue.runId, runId), isMapArray));
  return rows.map(({ variable }) => variable);
}

/** A map array, whole or one period of it, cut in the database. Null when the run has no such array. */
export async function findRunValues(
  tx: Tx,
  key: RunKey,
  wanted: { variable: string; period: 'week' | 'month' | 'season'; index: number | null },
): Promise<{ values: Uint8Array; periodCount: number; parcelCount: number } | null> {
  const length = sql`${runValue.parcelCount} * 4`;
  const values =
    wanted.index === null
      ? runValue.values
      : sql<Uint8Array>`substring(${runValue.values} from ${wanted.index}::int * ${length} + 1 for ${length})`.mapWith(runValue.values);
  const [row] = await tx
    .select({ values, periodCount: runValue.periodCount, parcelCount: runValue.parcelCount })
    .from(runValue)
    .where(
      and(
        eq(runValue.districtId, key.districtId),
        eq(runValue.runId, key.runId),
        eq(runValue.variable, wanted.variable),
        eq(runValue.period, wanted.period),
      ),
    );
  return row ?? null;
}
