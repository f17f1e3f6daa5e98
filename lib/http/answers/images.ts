/** Means of images over the parcels a caller may see. */
import { z } from 'zod';
import { listImageMeans } from '../../../db/queries/image-means.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { roundOrNull } from '../../base/missing.ts';
import type { ImageRow } from '../contract/images.ts';
import { readCursor, writeCursor } from '../paging.ts';
import type { PageWanted } from './land.ts';

interface ImagesWanted {
  readonly from: string;
  readonly to: string;
  readonly parcel?: string;
}

export async function answerImages(
  caller: Caller,
  wanted: ImagesWanted & PageWanted,
): Promise<{ items: ImageRow[]; next_cursor: string | null }> {
  const offset = readCursor(wanted.cursor, z.tuple([z.number().int()]))?.[0] ?? 0;
  const { districtId, parcels: codes } = caller;
  const { from, to, parcel, limit } = wanted;
  const rows = await database().inDistrict(districtId, (tx) =>
    listImageMeans(tx, { districtId, from, to, parcel, codes }, limit + 1, offset),
  );
  const items = rows.slice(0, limit).map((row): ImageRow => {
    return {
      parcel: row.parcelCode,
      date: row.date,
      quantity: row.quantity,
      value: roundOrNull(row.value, 4) ?? 0,
      seen_share: roundOrNull(row.seenShare, 4) ?? 0,
    };
  });
  return { items, next_cursor: rows.length > limit ? writeCursor(offset + limit) : null };
}
