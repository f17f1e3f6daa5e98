/** Weather blocks as imports need them: one by its key, written whole. */
import { and, eq, gt, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { site, weatherBlock } from '../schema/weather.ts';

export interface BlockKey {
  readonly sourceId: number;
  readonly variable: string;
  /** YYYY-MM-01 */
  readonly month: string;
}

export interface StoredBlock {
  readonly siteCount: number;
  readonly dayCount: number;
  /** values a day */
  readonly steps: number;
  /** Float32 LE [site × day × step] */
  readonly values: Uint8Array;
  /** one byte per value */
  readonly quality: Uint8Array;
  readonly version: number;
}

const one = (districtId: string, key: BlockKey) =>
  and(
    eq(weatherBlock.districtId, districtId),
    eq(weatherBlock.sourceId, key.sourceId),
    eq(weatherBlock.variable, key.variable),
    eq(weatherBlock.month, key.month),
  );

export async function findBlock(tx: Tx, districtId: string, key: BlockKey): Promise<StoredBlock | null> {
  const [row] = await tx
    .select({
      siteCount: weatherBlock.siteCount,
      dayCount: weatherBlock.dayCount,
      steps: weatherBlock.steps,
      values: weatherBlock.values,
      quality: weatherBlock.quality,
      version: weatherBlock.version,
    })
    .from(weatherBlock)
    .where(one(districtId, key));
  return row ?? null;
}

export async function saveBlock(tx: Tx, districtId: string, key: BlockKey, block: StoredBlock): Promise<void> {
  await tx
    .insert(weatherBlock)
    .values({ districtId, ...key, ...block })
    .onConflictDoUpdate({
      target: [weatherBlock.districtId, weatherBlock.sourceId, weatherBlock.variable, weatherBlock.month],
      set: { ...block },
    });
}

export async function deleteBlock(tx: Tx, districtId: string, key: BlockKey): Promise<void> {
  await tx.delete(weatherBlock).where(one(districtId, key));
}

/** Quality bytes of the blocks of a source that reach past a site ordinal. */
export function listBlocksBeyond(tx: Tx, districtId: string, sourceId: number, ordinal: number) {
  return tx
    .select({ dayCount: weatherBlock.dayCount, steps: weatherBlock.steps, quality: weatherBlock.quality })
    .from(weatherBlock)
    .where(and(eq(weatherBlock.districtId, districtId), eq(weatherBlock.sourceId, sourceId), gt(weatherBlock.siteCount, ordinal)));
}

/** Sites of the sources, to see which of them an undo took away. */
export async function listSiteKeys(tx: Tx, districtId: string): Promise<{ sourceId: number; ordinal: number; code: string }[]> {
  return tx
    .select({ sourceId: site.sourceId, ordinal: site.ordinal, code: site.code })
    .from(site)
    .where(eq(site.districtId, districtId))
    .orderBy(sql`1, 2`);
}
