/** Parcels, plantings, reaches and libraries as readers see them. */
import { and, asc, eq, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { applicationMethod, crop, cropCalendar, parcel, planting, reach, soil } from '../schema/land.ts';
import { textArray } from './district-read.ts';

interface ParcelFilter {
  readonly districtId: string;
  /** only these; null for all */
  readonly codes: readonly string[] | null;
  readonly search?: string;
}

/** What a parcel hangs on and where it lies. */
export const PARCEL_JOINS_AND_PLACE = {
  turnoutCode: parcel.turnoutCode,
  reachCode: parcel.reachCode,
  soilCode: parcel.soilCode,
  soilShares: parcel.soilShares,
  methodCode: parcel.methodCode,
  area: parcel.area,
  elevation: parcel.elevation,
  longitude: parcel.longitude,
  latitude: parcel.latitude,
};

/** A reach without its shape. */
export const REACH_COLUMNS = {
  code: reach.code,
  name: reach.name,
  parentCode: reach.parentCode,
  kind: reach.kind,
  capacity: reach.capacity,
  lossRule: reach.lossRule,
  length: reach.length,
};

const columns = {
  code: parcel.code,
  name: parcel.name,
  ...PARCEL_JOINS_AND_PLACE,
  crops: sql<string[]>`(select coalesce(jsonb_agg(distinct coalesce(c.name, p.crop_code)), '[]') from planting p
    left join crop c on c.district_id = p.district_id and c.code = p.crop_code
    where p.district_id = "parcel"."district_id" and p.parcel_code = "parcel"."code")`,
};

function matching({ districtId, codes, search }: ParcelFilter) {
  const like = search ? `%${search.replace(/[\\%_]/g, '\\$&')}%` : null;
  return and(
    eq(parcel.districtId, districtId),
    codes ? sql`${parcel.code} = any(${textArray(codes)})` : undefined,
    like ? sql`(${parcel.code} ilike ${like} or ${parcel.name} ilike ${like} or ${parcel.turnoutCode} ilike ${like})` : undefined,
  );
}

/** A page of parcels after a code, in code order. */
export function listParcels(tx: Tx, filter: ParcelFilter, after: string | null, limit: number) {
  return tx
    .select(columns)
    .from(parcel)
    .where(and(matching(filter), after === null ? undefined : sql`${parcel.code} > ${after}`))
    .orderBy(asc(parcel.code))
    .limit(limit);
}

export async function countParcels(tx: Tx, filter: ParcelFilter): Promise<number> {
  const [row] = await tx.select({ count: sql<number>`count(*)::int` }).from(parcel).where(matching(filter));
  return row.count;
}

export async function findParcel(tx: Tx, districtId: string, code: string) {
  const [row] = await tx
    .select(columns)
    .from(parcel)
    .where(and(eq(parcel.districtId, districtId), eq(parcel.code, code)));
  return row ?? null;
}

/** Areas of parcels [m²] by code. */
export async function mapParcelAreas(tx: Tx, districtId: string, codes: readonly string[]): Promise<Map<string, number>> {
  if (codes.length === 0) return new Map();
  const rows = await tx
    .select({ code: parcel.code, area: parcel.area })
    .from(parcel)
    .where(and(eq(parcel.districtId, districtId), sql`${parcel.code} = any(${textArray(codes)})`));
  return new Map(rows.map(({ code, area }) => [code, area]));
}

interface PlantingFilter {
  readonly districtId: string;
  readonly codes: readonly string[] | null;
  readonly season?: string;
  readonly parcel?: string;
}

function plantingsMatching({ districtId, codes, season, parcel: code }: PlantingFilter) {
  return and(
    eq(planting.districtId, districtId),
    season ? eq(planting.seasonCode, season) : undefined,
    code ? eq(planting.parcelCode, code) : undefined,
    codes ? sql`${planting.parcelCode} = any(${textArray(codes)})` : undefined,
  );
}

/** A page of plantings after a key, in key order. */
export function listPlantings(tx: Tx, filter: PlantingFilter, after: readonly [string, string, number] | null, limit: number) {
  const key = sql`(${planting.seasonCode}, ${planting.parcelCode}, ${planting.sequence})`;
  return tx
    .select()
    .from(planting)
    .where(and(plantingsMatching(filter), after ? sql`${key} > (${after[0]}, ${after[1]}, ${after[2]}::int)` : undefined))
    .orderBy(asc(planting.seasonCode), asc(planting.parcelCode), asc(planting.sequence))
    .limit(limit);
}

export async function countPlantings(tx: Tx, filter: PlantingFilter): Promise<number> {
  const [row] = await tx.select({ count: sql<number>`count(*)::int` }).from(planting).where(plantingsMatching(filter));
  return row.count;
}

/** Reaches with what hangs on them, by code. */
export function listCanals(tx: Tx, districtId: string) {
  return tx
    .select({
      ...REACH_COLUMNS,
      turnoutCount: sql<number>`(select count(*)::int from turnout t where t.district_id = "reach"."district_id" and t.reach_code = "reach"."code")`,
      parcelCount: sql<number>`(select count(*)::int from parcel p where p.district_id = "reach"."district_id" and p.reach_code = "reach"."code")`,
    })
    .from(reach)
    .where(eq(reach.districtId, districtId))
    .orderBy(asc(reach.code));
}

export function listSoils(tx: Tx, districtId: string) {
  return tx.select().from(soil).where(eq(soil.districtId, districtId)).orderBy(asc(soil.code));
}

export function listMethods(tx: Tx, districtId: string) {
  return tx.select().from(applicationMethod).where(eq(applicationMethod.districtId, districtId)).orderBy(asc(applicationMethod.code));
}

export async function findMethod(tx: Tx, districtId: string, code: string) {
  const [row] = await tx
    .select()
    .from(applicationMethod)
    .where(and(eq(applicationMethod.districtId, districtId), eq(applicationMethod.code, code)));
  return row ?? null;
}

export async function updateMethod(
  tx: Tx,
  districtId: string,
  code: string,
  values: Partial<Omit<typeof applicationMethod.$inferInsert, 'districtId' | 'code'>>,
): Promise<void> {
  await tx
    .update(applicationMethod)
    .set(values)
    .where(and(eq(applicationMethod.districtId, districtId), eq(applicationMethod.code, code)));
}

/** Crops with the number of plantings of each; one only when `code` is given. */
export function listCrops(tx: Tx, districtId: string, code?: string) {
  return tx
    .select({
      code: crop.code,
      name: crop.name,
      group: crop.group,
      definition: crop.definition,
      sources: crop.sources,
      notes: crop.notes,
      plantingCount: sql<number>`(select count(*)::int from planting p where p.district_id = "crop"."district_id" and p.crop_code = "crop"."code")`,
    })
    .from(crop)
    .where(and(eq(crop.districtId, districtId), code ? eq(crop.code, code) : undefined))
    .orderBy(asc(crop.group), asc(crop.name));
}

export function listCalendars(tx: Tx, districtId: string, cropCode?: string) {
  return tx
    .select()
    .from(cropCalendar)
    .where(and(eq(cropCalendar.districtId, districtId), cropCode ? eq(cropCalendar.cropCode, cropCode) : undefined))
    .orderBy(asc(cropCalendar.name), asc(cropCalendar.code));
}

/** Names of crops by code. */
export async function cropNames(tx: Tx, districtId: string): Promise<Map<string, string>> {
  const rows = await tx.select({ code: crop.code, name: crop.name }).from(crop).where(eq(crop.districtId, districtId));
  return new Map(rows.map((row) => [row.code, row.name]));
}
