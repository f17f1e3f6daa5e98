/** Land as imports need it: places in map order, references between tables, the counter that names the tiles. */
import { and, asc, eq, inArray, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { district } from '../schema/district.ts';
import { importBefore } from '../schema/import.ts';
import { delivery, fieldMeasurement, parcel, planting, reach, turnout } from '../schema/land.ts';
import { site, weatherSource } from '../schema/weather.ts';

/** What the parcels hold that a file may leave unsaid, by code. */
export async function mapStoredParcels(tx: Tx, districtId: string) {
  const rows = await tx
    .select({
      code: parcel.code,
      ordinal: parcel.ordinal,
      name: parcel.name,
      turnoutCode: parcel.turnoutCode,
      reachCode: parcel.reachCode,
      soilCode: parcel.soilCode,
      methodCode: parcel.methodCode,
      elevation: parcel.elevation,
    })
    .from(parcel)
    .where(eq(parcel.districtId, districtId));
  return new Map(rows.map((row) => [row.code, row]));
}

export async function mapTurnouts(tx: Tx, districtId: string) {
  const rows = await tx
    .select({
      code: turnout.code,
      reachCode: turnout.reachCode,
      capacity: turnout.capacity,
      longitude: turnout.longitude,
      latitude: turnout.latitude,
    })
    .from(turnout)
    .where(eq(turnout.districtId, districtId));
  return new Map(rows.map((row) => [row.code, row]));
}

const imaged = (table: string, column: string) =>
  sql<number>`coalesce(max((select max((r ->> ${column})::int) from jsonb_array_elements(${importBefore.before}) r)) filter (where ${importBefore.tableName} = ${table}), -1)::int`;

/** First place never used: also a removed parcel keeps its place, because undo may bring it back. */
export async function nextParcelOrdinal(tx: Tx, districtId: string): Promise<number> {
  const [stored] = await tx
    .select({ last: sql<number>`coalesce(max(${parcel.ordinal}), -1)::int` })
    .from(parcel)
    .where(eq(parcel.districtId, districtId));
  const [kept] = await tx
    .select({ last: imaged('parcel', 'ordinal') })
    .from(importBefore)
    .where(and(eq(importBefore.districtId, districtId), eq(importBefore.tableName, 'parcel'), sql`${importBefore.before} is not null`));
  return Math.max(stored.last, kept.last) + 1;
}

export async function nextSiteOrdinal(tx: Tx, districtId: string, sourceId: number): Promise<number> {
  const [stored] = await tx
    .select({ last: sql<number>`coalesce(max(${site.ordinal}), -1)::int` })
    .from(site)
    .where(and(eq(site.districtId, districtId), eq(site.sourceId, sourceId)));
  return stored.last + 1;
}

export async function nextSourceId(tx: Tx, districtId: string): Promise<number> {
  const [stored] = await tx
    .select({ last: sql<number>`coalesce(max(${weatherSource.sourceId}), 0)::int` })
    .from(weatherSource)
    .where(eq(weatherSource.districtId, districtId));
  return stored.last + 1;
}

/** The parcel and season pairs that have plantings on some parcels. */
export function listPlantingKeys(tx: Tx, districtId: string, parcelCodes: readonly string[]) {
  return tx
    .selectDistinct({ season_code: planting.seasonCode, parcel_code: planting.parcelCode })
    .from(planting)
    .where(and(eq(planting.districtId, districtId), inArray(planting.parcelCode, [...parcelCodes])));
}

/** Days of deliveries, and days and quantities of measurements, of some parcels. */
export async function listRecordKeys(tx: Tx, districtId: string, parcelCodes: readonly string[]) {
  const codes = [...parcelCodes];
  const deliveries = await tx
    .select({ parcel_code: delivery.parcelCode, date: delivery.date })
    .from(delivery)
    .where(and(eq(delivery.districtId, districtId), inArray(delivery.parcelCode, codes)));
  const measurements = await tx
    .selectDistinct({ parcel_code: fieldMeasurement.parcelCode, date: fieldMeasurement.date, quantity: fieldMeasurement.quantity })
    .from(fieldMeasurement)
    .where(and(eq(fieldMeasurement.districtId, districtId), inArray(fieldMeasurement.parcelCode, codes)));
  return { deliveries, measurements };
}

/** Turnouts and parcels that name some reaches. */
export async function listReachUsers(tx: Tx, districtId: string, reachCodes: readonly string[]) {
  const turnouts = await tx
    .select({ code: turnout.code, reachCode: turnout.reachCode })
    .from(turnout)
    .where(and(eq(turnout.districtId, districtId), inArray(turnout.reachCode, [...reachCodes])))
    .orderBy(asc(turnout.code));
  const parcels = await tx
    .select({ code: parcel.code, reachCode: parcel.reachCode })
    .from(parcel)
    .where(and(eq(parcel.districtId, districtId), inArray(parcel.reachCode, [...reachCodes])))
    .orderBy(asc(parcel.code));
  return { turnouts, parcels };
}

export function listTreeNodes(tx: Tx, districtId: string) {
  return tx
    .select({ code: reach.code, parentCode: reach.parentCode })
    .from(reach)
    .where(eq(reach.districtId, districtId))
    .orderBy(asc(reach.code));
}

/** Every change of parcels or canals names new tiles. */
export async function countGeometryUp(tx: Tx, districtId: string): Promise<void> {
  await tx
    .update(district)
    .set({ geometryVersion: sql`${district.geometryVersion} + 1` })
    .where(eq(district.districtId, districtId));
}

/** Columns that name a row of another table, with the words for both. */
const REFERENCES = [
  { table: 'planting', column: 'parcel_code', to: 'parcel', words: 'plantings on parcels that do not exist' },
  { table: 'planting', column: 'season_code', to: 'season', words: 'plantings in seasons that do not exist' },
  { table: 'planting', column: 'crop_code', to: 'crop', words: 'plantings of crops that are not in the library' },
  { table: 'planting', column: 'calendar_code', to: 'crop_calendar', words: 'plantings with calendars that do not exist' },
  { table: 'delivery', column: 'parcel_code', to: 'parcel', words: 'deliveries to parcels that do not exist' },
  { table: 'field_measurement', column: 'parcel_code', to: 'parcel', words: 'measurements at parcels that do not exist' },
  { table: 'parcel', column: 'reach_code', to: 'reach', words: 'parcels on reaches that do not exist' },
  { table: 'parcel', column: 'turnout_code', to: 'turnout', words: 'parcels on turnouts that do not exist' },
  { table: 'parcel', column: 'soil_code', to: 'soil', words: 'parcels on soils that do not exist' },
  { table: 'parcel', column: 'method_code', to: 'application_method', words: 'parcels with application methods that do not exist' },
  { table: 'turnout', column: 'reach_code', to: 'reach', words: 'turnouts on reaches that do not exist' },
  { table: 'service_area', column: 'reach_code', to: 'reach', words: 'service areas of reaches that do not exist' },
  { table: 'service_area', column: 'turnout_code', to: 'turnout', words: 'service areas of turnouts that do not exist' },
  { table: 'soil_area', column: 'soil_code', to: 'soil', words: 'soil polygons of soils that do not exist' },
] as const;

export interface Dangling {
  readonly table: string;
  /** table the column names a row of */
  readonly to: string;
  readonly words: string;
  /** true when the district has no row at all of that table */
  readonly nothingThere: boolean;
  readonly count: number;
  readonly example: string;
}

/** Rows that name something which is not there, per reference; references without fault are left out. */
export async function listDangling(tx: Tx, districtId: string): Promise<Dangling[]> {
  const found: Dangling[] = [];
  for (const { table, column, to, words } of REFERENCES) {
    const [row] = await tx.execute<{ count: number; example: string | null; nothing: boolean }>(sql`
      select count(*)::int as count, min(t.${sql.raw(column)}) as example,
        not exists (select 1 from public.${sql.raw(to)} o where o.district_id = ${districtId}::uuid) as nothing
      from public.${sql.raw(table)} t
      where t.district_id = ${districtId}::uuid and t.${sql.raw(column)} is not null
        and not exists (select 1 from public.${sql.raw(to)} o where o.district_id = t.district_id and o.code = t.${sql.raw(column)})`);
    if (row.count > 0) found.push({ table, to, words, nothingThere: row.nothing, count: row.count, example: row.example ?? '' });
  }
  return found;
}
