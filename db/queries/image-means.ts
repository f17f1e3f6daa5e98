/** Means of images over the parcels. */
import { and, asc, between, eq, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { imageMean } from '../schema/land.ts';
import { textArray } from './district-read.ts';

interface ImageFilter {
  readonly districtId: string;
  readonly from: string;
  readonly to: string;
  /** only these parcels; null for all */
  readonly codes?: readonly string[] | null;
  readonly parcel?: string;
}

/** By parcel, then by day. */
export function listImageMeans(tx: Tx, { districtId, from, to, codes, parcel }: ImageFilter, limit?: number, offset = 0) {
  const rows = tx
    .select({
      parcelCode: imageMean.parcelCode,
      date: imageMean.date,
      quantity: imageMean.quantity,
      value: imageMean.value,
      seenShare: imageMean.seenShare,
    })
    .from(imageMean)
    .where(
      and(
        eq(imageMean.districtId, districtId),
        between(imageMean.date, from, to),
        parcel ? eq(imageMean.parcelCode, parcel) : undefined,
        codes ? sql`${imageMean.parcelCode} = any(${textArray(codes)})` : undefined,
      ),
    )
    .orderBy(asc(imageMean.parcelCode), asc(imageMean.date), asc(imageMean.quantity))
    .$dynamic();
  return limit === undefined ? rows : rows.limit(limit).offset(offset);
}

export type ImageMean = Awaited<ReturnType<typeof listImageMeans>>[number];
