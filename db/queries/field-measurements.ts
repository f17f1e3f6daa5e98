/** What was measured, or given, at parcels: soil water, water tables, salinity, efficiency. */
import { and, asc, between, eq, inArray, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { type FieldQuantity, fieldMeasurement } from '../schema/land.ts';
import { textArray } from './district-read.ts';

interface MeasurementFilter {
  readonly districtId: string;
  readonly from: string;
  readonly to: string;
  /** only these parcels; null for all */
  readonly codes?: readonly string[] | null;
  readonly parcel?: string;
  readonly quantities?: readonly FieldQuantity[];
}

function matching({ districtId, from, to, codes, parcel, quantities }: MeasurementFilter) {
  return and(
    eq(fieldMeasurement.districtId, districtId),
    between(fieldMeasurement.date, from, to),
    parcel ? eq(fieldMeasurement.parcelCode, parcel) : undefined,
    codes ? sql`${fieldMeasurement.parcelCode} = any(${textArray(codes)})` : undefined,
    quantities ? inArray(fieldMeasurement.quantity, [...quantities]) : undefined,
  );
}

const COLUMNS = {
  parcelCode: fieldMeasurement.parcelCode,
  date: fieldMeasurement.date,
  quantity: fieldMeasurement.quantity,
  depth: fieldMeasurement.depth,
  value: fieldMeasurement.value,
};

const IN_ORDER = [
  asc(fieldMeasurement.parcelCode),
  asc(fieldMeasurement.date),
  asc(fieldMeasurement.quantity),
  asc(fieldMeasurement.depth),
] as const;

/** By parcel, day, quantity and depth. */
export function listMeasurements(tx: Tx, filter: MeasurementFilter) {
  return tx
    .select(COLUMNS)
    .from(fieldMeasurement)
    .where(matching(filter))
    .orderBy(...IN_ORDER);
}

export type MeasurementRow = Awaited<ReturnType<typeof listMeasurements>>[number];

/** Parcel, day, quantity and depth of a measurement. */
export type MeasurementKey = readonly [string, string, string, number];

/** A page of measurements after a key, in the order of `listMeasurements`. */
export function listMeasurementPage(tx: Tx, filter: MeasurementFilter, after: MeasurementKey | null, limit: number) {
  const m = fieldMeasurement;
  const key = sql`(${m.parcelCode}, ${m.date}, ${m.quantity}, ${m.depth})`;
  const beyond = after ? sql`${key} > (${after[0]}, ${after[1]}::date, ${after[2]}, ${after[3]}::float8)` : undefined;
  return tx
    .select(COLUMNS)
    .from(m)
    .where(and(matching(filter), beyond))
    .orderBy(...IN_ORDER)
    .limit(limit);
}

/** Writes one measurement, over what was there. */
export async function putMeasurement(tx: Tx, row: typeof fieldMeasurement.$inferInsert): Promise<void> {
  const m = fieldMeasurement;
  await tx
    .insert(m)
    .values(row)
    .onConflictDoUpdate({ target: [m.districtId, m.parcelCode, m.date, m.quantity, m.depth], set: { value: row.value } });
}

/** True when there was one. */
export async function removeMeasurement(
  tx: Tx,
  key: { districtId: string; parcelCode: string; date: string; quantity: FieldQuantity; depth: number },
): Promise<boolean> {
  const m = fieldMeasurement;
  const rows = await tx
    .delete(m)
    .where(
      and(
        eq(m.districtId, key.districtId),
        eq(m.parcelCode, key.parcelCode),
        eq(m.date, key.date),
        eq(m.quantity, key.quantity),
        eq(m.depth, key.depth),
      ),
    )
    .returning({ date: m.date });
  return rows.length > 0;
}
