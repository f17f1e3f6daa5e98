/** Bulk inserts for the first data of an empty installation. */
import type { Tx } from '../connect.ts';
import { growerParcel } from '../schema/district.ts';
import { parcel, planting, reach, season, turnout } from '../schema/land.ts';
import { site, weatherBlock, weatherSource } from '../schema/weather.ts';

const STEP = 500;

export interface FirstRows {
  readonly seasons: (typeof season.$inferInsert)[];
  readonly sources: (typeof weatherSource.$inferInsert)[];
  readonly sites: (typeof site.$inferInsert)[];
  readonly blocks: (typeof weatherBlock.$inferInsert)[];
  readonly reaches: (typeof reach.$inferInsert)[];
  readonly turnouts: (typeof turnout.$inferInsert)[];
  readonly parcels: (typeof parcel.$inferInsert)[];
  readonly plantings: (typeof planting.$inferInsert)[];
}

export async function insertFirstRows(tx: Tx, rows: FirstRows): Promise<void> {
  await tx.insert(season).values(rows.seasons);
  await tx.insert(weatherSource).values(rows.sources);
  await tx.insert(site).values(rows.sites);
  await inSteps(rows.blocks, (some) => tx.insert(weatherBlock).values(some));
  await inSteps(rows.reaches, (some) => tx.insert(reach).values(some));
  await inSteps(rows.turnouts, (some) => tx.insert(turnout).values(some));
  await inSteps(rows.parcels, (some) => tx.insert(parcel).values(some));
  await inSteps(rows.plantings, (some) => tx.insert(planting).values(some));
}

async function inSteps<Row>(rows: readonly Row[], insert: (some: Row[]) => Promise<unknown>): Promise<void> {
  for (let from = 0; from < rows.length; from += STEP) await insert(rows.slice(from, from + STEP));
}

export async function insertGrowerParcels(tx: Tx, districtId: string, userId: string, parcelCodes: readonly string[]): Promise<void> {
  await tx.insert(growerParcel).values(parcelCodes.map((parcelCode) => ({ districtId, userId, parcelCode })));
}
