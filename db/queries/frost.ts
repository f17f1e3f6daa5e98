/** Plantings whose buds or leaves a frost can hurt. */
import { and, asc, eq, type SQL, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { crop, parcel, planting } from '../schema/land.ts';
import { textArray } from './district-read.ts';

export interface FrostPlantingFilter {
  readonly districtId: string;
  readonly seasons: readonly string[];
  /** parcels that the reader may see; null: all */
  readonly codes: readonly string[] | null;
  /** crops that count although their library names no table of critical temperatures */
  readonly crops: readonly string[];
  /** only this parcel */
  readonly parcel?: string;
}

function matching({ districtId, seasons, codes, crops, parcel: only }: FrostPlantingFilter): SQL | undefined {
  return and(
    eq(planting.districtId, districtId),
    sql`${planting.seasonCode} = any(${textArray(seasons)})`,
    codes ? sql`${planting.parcelCode} = any(${textArray(codes)})` : undefined,
    only === undefined ? undefined : eq(planting.parcelCode, only),
    sql`(${crop.definition} ->> 'frostTable' is not null or ${crop.code} = any(${textArray(crops)}))`,
  );
}

/** In map order, at most `limit`, with the parcel and what the crop's library says. */
export function listFrostPlantings(tx: Tx, filter: FrostPlantingFilter, limit: number) {
  return tx
    .select({
      parcel: parcel.code,
      parcelName: parcel.name,
      area: parcel.area,
      elevation: parcel.elevation,
      longitude: parcel.longitude,
      latitude: parcel.latitude,
      reach: parcel.reachCode,
      sequence: planting.sequence,
      season: planting.seasonCode,
      areaShare: planting.areaShare,
      plantingDate: planting.plantingDate,
      harvestDate: planting.harvestDate,
      crop: crop.code,
      cropName: crop.name,
      frostTable: sql<string | null>`${crop.definition} ->> 'frostTable'`,
      height: sql<number | null>`(${crop.definition} ->> 'heightMax')::double precision`,
    })
    .from(planting)
    .innerJoin(parcel, and(eq(parcel.districtId, planting.districtId), eq(parcel.code, planting.parcelCode)))
    .innerJoin(crop, and(eq(crop.districtId, planting.districtId), eq(crop.code, planting.cropCode)))
    .where(matching(filter))
    .orderBy(asc(parcel.ordinal), asc(planting.seasonCode), asc(planting.sequence))
    .limit(limit);
}

export type FrostPlantingRow = Awaited<ReturnType<typeof listFrostPlantings>>[number];

/** Shapes of some parcels, by code. */
export async function listParcelShapes(tx: Tx, districtId: string, codes: readonly string[]): Promise<Map<string, unknown>> {
  if (codes.length === 0) return new Map();
  const rows = await tx
    .select({ code: parcel.code, geometry: parcel.geometry })
    .from(parcel)
    .where(and(eq(parcel.districtId, districtId), sql`${parcel.code} = any(${textArray(codes)})`));
  return new Map(rows.map(({ code, geometry }) => [code, geometry]));
}
