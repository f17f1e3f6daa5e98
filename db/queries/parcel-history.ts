/** Parcels as they stood before imports reshaped, split, merged or ended them. */
import { randomUUID } from 'node:crypto';
import { and, asc, desc, eq, gte, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { parcelHistory } from '../schema/land.ts';
import { textArray } from './district-read.ts';
import { fileAbsent, type ImportKey } from './import-before.ts';
import { jsonText } from './json-text.ts';
import type { Box } from './tiles.ts';

const columns = {
  historyId: parcelHistory.historyId,
  parcelCode: parcelHistory.parcelCode,
  change: parcelHistory.change,
  successors: parcelHistory.successors,
  validTo: parcelHistory.validTo,
  geometryVersion: parcelHistory.geometryVersion,
  area: sql<number>`(${parcelHistory.row} ->> 'area_m2')::float8`,
  createdAt: parcelHistory.createdAt,
};

/** A stored parcel that an import is about to change. */
export interface EndedParcel {
  readonly code: string;
  readonly change: 'reshaped' | 'split' | 'merged' | 'vanished';
  readonly successors: readonly { readonly code: string; readonly share: number }[];
}

/** Keeps parcels as they now stand, under an import that can be undone. */
export async function keepParcels(
  tx: Tx,
  own: ImportKey,
  ended: readonly EndedParcel[],
  stood: { readonly validTo: string | null; readonly version: number },
): Promise<void> {
  const items = ended.map((item) => ({ ...item, id: randomUUID() }));
  await fileAbsent(
    tx,
    own,
    'parcel_history',
    items.map(({ id }) => ({ history_id: id })),
  );
  await tx.execute(sql`
    insert into parcel_history (district_id, history_id, parcel_code, change, successors, valid_to, geometry_version, row, import_id)
    select p.district_id, k.id, p.code, k.change, k.successors, ${stood.validTo}::date, ${stood.version}::int, to_jsonb(p), ${own.importId}::uuid
    from jsonb_to_recordset(${jsonText(items)}::jsonb) as k (id uuid, code text, change text, successors jsonb)
    join parcel p on p.district_id = ${own.districtId}::uuid and p.code = k.code`);
}

/** Rows of some codes, and of parcels whose ground they took over; the newest first. */
export function listHistory(tx: Tx, districtId: string, codes: readonly string[]) {
  const succeeded = sql`exists (select 1 from jsonb_array_elements(${parcelHistory.successors}) s where s ->> 'code' = any(${textArray(codes)}))`;
  return tx
    .select(columns)
    .from(parcelHistory)
    .where(and(eq(parcelHistory.districtId, districtId), sql`(${parcelHistory.parcelCode} = any(${textArray(codes)}) or ${succeeded})`))
    .orderBy(desc(parcelHistory.geometryVersion), asc(parcelHistory.parcelCode))
    .limit(500);
}

/** True when parcels have changed since a geometry version in a way that the history tells. */
export async function hasHistorySince(tx: Tx, districtId: string, version: number): Promise<boolean> {
  const [row] = await tx
    .select({ historyId: parcelHistory.historyId })
    .from(parcelHistory)
    .where(and(eq(parcelHistory.districtId, districtId), gte(parcelHistory.geometryVersion, version)))
    .limit(1);
  return row !== undefined;
}

/** Places in map arrays of the parcels that stood at a geometry version and have changed since, by code. */
export async function mapOrdinalsAt(tx: Tx, districtId: string, version: number): Promise<Map<string, number>> {
  const rows = await tx
    .selectDistinctOn([parcelHistory.parcelCode], {
      code: parcelHistory.parcelCode,
      ordinal: sql<number>`(${parcelHistory.row} ->> 'ordinal')::int`,
    })
    .from(parcelHistory)
    .where(and(eq(parcelHistory.districtId, districtId), gte(parcelHistory.geometryVersion, version)))
    .orderBy(asc(parcelHistory.parcelCode), asc(parcelHistory.geometryVersion));
  return new Map(rows.map(({ code, ordinal }) => [code, ordinal]));
}

/** Share of a changed parcel from which one that took it over counts as made by the change. */
const NEW_GROUND = 0.05;

/** Parcels within a box as they were drawn at a geometry version: changed ones from the history, the others as they stand. */
export function listParcelShapesAt(
  tx: Tx,
  districtId: string,
  wanted: { box: Box; smallest: number; codes: readonly string[] | null; version: number },
) {
  const { box, smallest, codes, version } = wanted;
  const own = codes ? sql`p.code = any(${textArray(codes)})` : sql`true`;
  return tx.execute<{
    ordinal: number;
    code: string;
    west: number;
    south: number;
    east: number;
    north: number;
    geometry: unknown;
  }>(sql`
    with old as (
      select distinct on (h.parcel_code) h.parcel_code, h.row from parcel_history h
      where h.district_id = ${districtId}::uuid and h.geometry_version >= ${version}::int
      order by h.parcel_code, h.geometry_version
    ), made as (
      select distinct s ->> 'code' as code from parcel_history h, jsonb_array_elements(h.successors) s
      where h.district_id = ${districtId}::uuid and h.geometry_version >= ${version}::int
        and (s ->> 'share')::float8 >= ${NEW_GROUND}
    ), stood as (
      select r.* from old, jsonb_populate_record(null::public.parcel, old.row) r
      union all
      select n.* from public.parcel n
      where n.district_id = ${districtId}::uuid and not exists (select 1 from old where old.parcel_code = n.code)
        and not exists (select 1 from made where made.code = n.code)
    )
    select p.ordinal, p.code, p.west, p.south, p.east, p.north,
      case when p.east - p.west < ${smallest} and p.north - p.south < ${smallest} then null else p.geometry end as geometry
    from stood p
    where p.west <= ${box.east} and p.east >= ${box.west} and p.south <= ${box.north} and p.north >= ${box.south} and ${own}
    order by p.ordinal`);
}

/** Shapes of some parcels of a run as they stood at its geometry version: from the history where they have changed since. */
export async function listRunGeometries(
  tx: Tx,
  districtId: string,
  runId: string,
  codes: readonly string[],
): Promise<{ code: string; geometry: unknown }[]> {
  const rows = await tx.execute<{ code: string; geometry: unknown }>(sql`
    with version as (select geometry_version as v from run where district_id = ${districtId}::uuid and run_id = ${runId}::uuid),
    old as (
      select distinct on (h.parcel_code) h.parcel_code as code, h.row -> 'geometry' as geometry from parcel_history h, version
      where h.district_id = ${districtId}::uuid and h.geometry_version >= version.v and h.parcel_code = any(${textArray(codes)})
      order by h.parcel_code, h.geometry_version
    )
    select code, geometry from old
    union all
    select p.code, p.geometry from public.parcel p
    where p.district_id = ${districtId}::uuid and p.code = any(${textArray(codes)}) and not exists (select 1 from old where old.code = p.code)`);
  return [...rows];
}
