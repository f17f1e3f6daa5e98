/** A district and what it holds. */
import { desc, eq, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { district } from '../schema/district.ts';
import { season } from '../schema/land.ts';

export type DistrictRow = typeof district.$inferSelect;

export async function findWholeDistrict(tx: Tx, districtId: string): Promise<DistrictRow | null> {
  const [row] = await tx.select().from(district).where(eq(district.districtId, districtId));
  return row ?? null;
}

export async function insertDistrict(tx: Tx, values: typeof district.$inferInsert): Promise<void> {
  await tx.insert(district).values(values);
}

export async function updateDistrict(tx: Tx, districtId: string, values: Partial<typeof district.$inferInsert>): Promise<void> {
  await tx.update(district).set(values).where(eq(district.districtId, districtId));
}

export function listSeasons(tx: Tx, districtId: string) {
  return tx.select().from(season).where(eq(season.districtId, districtId)).orderBy(desc(season.startDate), desc(season.code));
}

/** Adds a season; false when the code is taken. */
export async function insertSeason(tx: Tx, values: typeof season.$inferInsert): Promise<boolean> {
  const rows = await tx.insert(season).values(values).onConflictDoNothing().returning({ code: season.code });
  return rows.length > 0;
}

export async function countDistrict(
  tx: Tx,
  districtId: string,
): Promise<{ parcels: number; reaches: number; sites: number; plantings: number }> {
  const [row] = await tx.execute<{ parcels: number; reaches: number; sites: number; plantings: number }>(sql`select
    (select count(*)::int from parcel where district_id = ${districtId}) as parcels,
    (select count(*)::int from reach where district_id = ${districtId}) as reaches,
    (select count(*)::int from site where district_id = ${districtId}) as sites,
    (select count(*)::int from planting where district_id = ${districtId}) as plantings`);
  return { ...row };
}

/** Corners of all parcels, or of those named; null when there are none. */
export async function findBounds(
  tx: Tx,
  districtId: string,
  codes: readonly string[] | null,
): Promise<[number, number, number, number] | null> {
  const own = codes === null ? sql`true` : sql`code = any(${textArray(codes)})`;
  const [row] = await tx.execute<{ w: number | null; s: number; e: number; n: number }>(
    sql`select min(west) as w, min(south) as s, max(east) as e, max(north) as n from parcel where district_id = ${districtId} and ${own}`,
  );
  return row.w === null ? null : [row.w, row.s, row.e, row.n];
}

/** A text[] parameter. */
export function textArray(values: readonly string[]) {
  return sql`array(select jsonb_array_elements_text(${JSON.stringify(values)}::jsonb))`;
}
