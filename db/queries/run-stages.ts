/** ET of the plantings of a run by growth stage, as the kernel summed it. */
import { and, asc, eq, gte, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { runParcel } from '../schema/run.ts';
import { textArray } from './district-read.ts';

export interface RunStagesFilter {
  readonly districtId: string;
  readonly runId: string;
  /** only these; null for all */
  readonly codes: readonly string[] | null;
  readonly parcel?: string;
}

/** A page of parcels from a position on, in position order; `stageEt` and `stageDays` are null in runs of earlier kernels. */
export function listRunStages(tx: Tx, { districtId, runId, codes, parcel }: RunStagesFilter, fromPosition: number, limit: number) {
  return tx
    .select({
      position: runParcel.position,
      parcelCode: runParcel.parcelCode,
      area: runParcel.area,
      stageEt: runParcel.stageEt,
      stageDays: runParcel.stageDays,
    })
    .from(runParcel)
    .where(
      and(
        eq(runParcel.districtId, districtId),
        eq(runParcel.runId, runId),
        parcel ? eq(runParcel.parcelCode, parcel) : undefined,
        codes ? sql`${runParcel.parcelCode} = any(${textArray(codes)})` : undefined,
        gte(runParcel.position, fromPosition),
      ),
    )
    .orderBy(asc(runParcel.position))
    .limit(limit);
}

export type RunStages = Awaited<ReturnType<typeof listRunStages>>[number];
