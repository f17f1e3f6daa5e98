/** The land of a run page by page, so that a million parcels never stand in memory at once. */
import { and, asc, eq, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { parcel, planting } from '../schema/land.ts';
import { textArray } from './district-read.ts';
import { PARCEL_JOINS_AND_PLACE } from './land-read.ts';

/** Where every parcel lies, in the order of `listRunParcelPage`. */
export function listRunPlaces(tx: Tx, districtId: string) {
  return tx
    .select({ longitude: parcel.longitude, latitude: parcel.latitude })
    .from(parcel)
    .where(eq(parcel.districtId, districtId))
    .orderBy(asc(parcel.ordinal), asc(parcel.code));
}

/** A page of parcels in map order, without their shapes, after a parcel of the page before. */
export function listRunParcelPage(
  tx: Tx,
  districtId: string,
  after: { readonly ordinal: number; readonly code: string } | null,
  limit: number,
) {
  const rest = after ? sql`(${parcel.ordinal}, ${parcel.code}) > (${after.ordinal}::int, ${after.code})` : undefined;
  return tx
    .select({ code: parcel.code, ordinal: parcel.ordinal, ...PARCEL_JOINS_AND_PLACE })
    .from(parcel)
    .where(and(eq(parcel.districtId, districtId), rest))
    .orderBy(asc(parcel.ordinal), asc(parcel.code))
    .limit(limit);
}

/** Plantings of a season on some parcels. */
export function listPlantingsOf(tx: Tx, districtId: string, seasonCode: string, codes: readonly string[]) {
  return tx
    .select()
    .from(planting)
    .where(
      and(eq(planting.districtId, districtId), eq(planting.seasonCode, seasonCode), sql`${planting.parcelCode} = any(${textArray(codes)})`),
    )
    .orderBy(asc(planting.parcelCode), asc(planting.sequence));
}

export async function hasPlantings(tx: Tx, districtId: string, seasonCode: string): Promise<boolean> {
  const rows = await tx
    .select({ code: planting.parcelCode })
    .from(planting)
    .where(and(eq(planting.districtId, districtId), eq(planting.seasonCode, seasonCode)))
    .limit(1);
  return rows.length > 0;
}
