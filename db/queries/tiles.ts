/** Shapes for map tiles, and encoded tiles kept for a version of the land. */
import { and, asc, eq, gte, lte, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { parcel, reach } from '../schema/land.ts';
import { tileCache } from '../schema/run.ts';
import { textArray } from './district-read.ts';

export interface Box {
  readonly west: number;
  readonly south: number;
  readonly east: number;
  readonly north: number;
}

/**
 * Parcels that touch a box. The shape is left out (null) of a parcel whose own box is smaller than `smallest` degrees both ways.
 */
export function listParcelShapes(tx: Tx, districtId: string, wanted: { box: Box; smallest: number; codes: readonly string[] | null }) {
  const { box, smallest, codes } = wanted;
  return tx
    .select({
      ordinal: parcel.ordinal,
      code: parcel.code,
      west: parcel.west,
      south: parcel.south,
      east: parcel.east,
      north: parcel.north,
      geometry: sql<unknown>`case when ${parcel.east} - ${parcel.west} < ${smallest} and ${parcel.north} - ${parcel.south} < ${smallest} then null else ${parcel.geometry} end`,
    })
    .from(parcel)
    .where(
      and(
        eq(parcel.districtId, districtId),
        lte(parcel.west, box.east),
        gte(parcel.east, box.west),
        lte(parcel.south, box.north),
        gte(parcel.north, box.south),
        codes ? sql`${parcel.code} = any(${textArray(codes)})` : undefined,
      ),
    )
    .orderBy(asc(parcel.ordinal));
}

/** Lines of every reach, in the order of their codes: the place in this list is the ordinal of the reach in the tiles. */
export function listReachShapes(tx: Tx, districtId: string) {
  return tx
    .select({ code: reach.code, kind: reach.kind, geometry: reach.geometry })
    .from(reach)
    .where(eq(reach.districtId, districtId))
    .orderBy(asc(reach.code));
}

interface TileKey {
  readonly districtId: string;
  readonly layer: string;
  readonly version: number;
  readonly z: number;
  readonly x: number;
  readonly y: number;
}

export async function findTile(tx: Tx, key: TileKey): Promise<Uint8Array | null> {
  const [row] = await tx
    .select({ bytes: tileCache.bytes })
    .from(tileCache)
    .where(
      and(
        eq(tileCache.districtId, key.districtId),
        eq(tileCache.layer, key.layer),
        eq(tileCache.version, key.version),
        eq(tileCache.z, key.z),
        eq(tileCache.x, key.x),
        eq(tileCache.y, key.y),
      ),
    );
  return row?.bytes ?? null;
}

export async function saveTile(tx: Tx, key: TileKey, bytes: Uint8Array): Promise<void> {
  await tx
    .insert(tileCache)
    .values({ ...key, bytes })
    .onConflictDoNothing();
}
