/** Water that was delivered to parcels, day by day, as the district recorded it. */
import { and, asc, between, eq, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { delivery } from '../schema/land.ts';
import { textArray } from './district-read.ts';

interface DeliveryFilter {
  readonly districtId: string;
  readonly from: string;
  readonly to: string;
  /** only these parcels; null for all */
  readonly codes?: readonly string[] | null;
  readonly parcel?: string;
}

function matching({ districtId, from, to, codes, parcel }: DeliveryFilter) {
  return and(
    eq(delivery.districtId, districtId),
    between(delivery.date, from, to),
    parcel ? eq(delivery.parcelCode, parcel) : undefined,
    codes ? sql`${delivery.parcelCode} = any(${textArray(codes)})` : undefined,
  );
}

const COLUMNS = { parcelCode: delivery.parcelCode, date: delivery.date, volume: delivery.volume };

/** By parcel, then by day. */
export function listDeliveries(tx: Tx, filter: DeliveryFilter) {
  return tx.select(COLUMNS).from(delivery).where(matching(filter)).orderBy(asc(delivery.parcelCode), asc(delivery.date));
}

export type DeliveryRow = Awaited<ReturnType<typeof listDeliveries>>[number];

/** A page of deliveries after a key, by parcel, then by day. */
export function listDeliveryPage(tx: Tx, filter: DeliveryFilter, after: readonly [string, string] | null, limit: number) {
  const beyond = after ? sql`(${delivery.parcelCode}, ${delivery.date}) > (${after[0]}, ${after[1]}::date)` : undefined;
  return tx
    .select(COLUMNS)
    .from(delivery)
    .where(and(matching(filter), beyond))
    .orderBy(asc(delivery.parcelCode), asc(delivery.date))
    .limit(limit);
}

/** Days of deliveries of a span, their volume [m³], and the first and last day that has one; null days where there are none. */
export async function sumDeliveries(tx: Tx, filter: DeliveryFilter) {
  const [row] = await tx
    .select({
      rows: sql<number>`count(*)::int`,
      parcels: sql<number>`count(distinct ${delivery.parcelCode})::int`,
      volume: sql<number>`coalesce(sum(${delivery.volume}), 0)::float8`,
      first: sql<string | null>`min(${delivery.date})::text`,
      last: sql<string | null>`max(${delivery.date})::text`,
    })
    .from(delivery)
    .where(matching(filter));
  return row;
}

/** Writes one day of one parcel, over what was there. */
export async function putDelivery(tx: Tx, row: { districtId: string; parcelCode: string; date: string; volume: number }): Promise<void> {
  await tx
    .insert(delivery)
    .values(row)
    .onConflictDoUpdate({ target: [delivery.districtId, delivery.parcelCode, delivery.date], set: { volume: row.volume } });
}

/** True when there was one. */
export async function removeDelivery(tx: Tx, key: { districtId: string; parcelCode: string; date: string }): Promise<boolean> {
  const rows = await tx
    .delete(delivery)
    .where(and(eq(delivery.districtId, key.districtId), eq(delivery.parcelCode, key.parcelCode), eq(delivery.date, key.date)))
    .returning({ date: delivery.date });
  return rows.length > 0;
}
