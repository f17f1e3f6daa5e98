/** Soil polygons, service areas and the shapes of parcels, as imports, joins and the map need them. */
import { and, asc, eq, gt, isNotNull, sql } from 'drizzle-orm';
import type { MultiPolygon, Polygon } from 'geojson';
import type { Tx } from '../connect.ts';
import { parcel, serviceArea, soilArea, turnout } from '../schema/land.ts';
import { textArray } from './district-read.ts';

type Shape = Polygon | MultiPolygon;

/** Soil polygons with the class of each, by code. */
export async function listSoilAreas(tx: Tx, districtId: string) {
  const rows = await tx
    .select({ code: soilArea.code, soilCode: soilArea.soilCode, geometry: soilArea.geometry })
    .from(soilArea)
    .where(eq(soilArea.districtId, districtId))
    .orderBy(asc(soilArea.code));
  return rows.map((row) => ({ ...row, geometry: row.geometry as Shape }));
}

/** Service areas, by code. */
export async function listServiceAreas(tx: Tx, districtId: string) {
  const rows = await tx
    .select({
      code: serviceArea.code,
      name: serviceArea.name,
      reachCode: serviceArea.reachCode,
      turnoutCode: serviceArea.turnoutCode,
      area: serviceArea.area,
      west: serviceArea.west,
      south: serviceArea.south,
      east: serviceArea.east,
      north: serviceArea.north,
      geometry: serviceArea.geometry,
    })
    .from(serviceArea)
    .where(eq(serviceArea.districtId, districtId))
    .orderBy(asc(serviceArea.code));
  return rows.map((row) => ({ ...row, geometry: row.geometry as Shape }));
}

/** Codes of the areas of a kind that an import may replace. */
export async function listAreaCodes(tx: Tx, districtId: string, kind: 'service_area' | 'soil_area'): Promise<string[]> {
  const table = kind === 'service_area' ? serviceArea : soilArea;
  const rows = await tx.select({ code: table.code }).from(table).where(eq(table.districtId, districtId));
  return rows.map((row) => row.code);
}

/** A page of parcels with their shapes and soils, after a code, in code order. */
export async function listParcelGround(tx: Tx, districtId: string, after: string | null, limit: number) {
  const rows = await tx
    .select({ code: parcel.code, area: parcel.area, geometry: parcel.geometry, soilShares: parcel.soilShares })
    .from(parcel)
    .where(and(eq(parcel.districtId, districtId), after === null ? undefined : gt(parcel.code, after)))
    .orderBy(asc(parcel.code))
    .limit(limit);
  return rows.map((row) => ({ ...row, geometry: row.geometry as Shape }));
}

/** Whole rows of some parcels as JSON, as the database writes them. */
export async function listParcelRows(tx: Tx, districtId: string, codes: readonly string[]): Promise<Map<string, Record<string, unknown>>> {
  const rows = await tx
    .select({ code: parcel.code, row: sql<Record<string, unknown>>`to_jsonb("parcel")` })
    .from(parcel)
    .where(and(eq(parcel.districtId, districtId), sql`${parcel.code} = any(${textArray(codes)})`));
  return new Map(rows.map(({ code, row }) => [code, row]));
}

/** Turnouts whose place is known, by code. */
export async function listPlacedTurnouts(tx: Tx, districtId: string) {
  return tx
    .select({ code: turnout.code, reachCode: turnout.reachCode, longitude: turnout.longitude, latitude: turnout.latitude })
    .from(turnout)
    .where(and(eq(turnout.districtId, districtId), isNotNull(turnout.longitude), isNotNull(turnout.latitude)))
    .orderBy(asc(turnout.code));
}

/** Inner points of the parcels, or of those named, by code. */
export function listParcelPoints(tx: Tx, districtId: string, codes: readonly string[] | null) {
  return tx
    .select({ code: parcel.code, longitude: parcel.longitude, latitude: parcel.latitude })
    .from(parcel)
    .where(and(eq(parcel.districtId, districtId), codes ? sql`${parcel.code} = any(${textArray(codes)})` : undefined))
    .orderBy(asc(parcel.code));
}
