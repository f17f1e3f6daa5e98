/** Sites and their stored weather, block by block. */
import { and, asc, eq, gte, lte, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { site, weatherBlock, weatherSource } from '../schema/weather.ts';

/** Sites with the name of their source, in the order of sources and of rows in their blocks. */
export function listSites(tx: Tx, districtId: string, source?: string | null) {
  return tx
    .select({
      sourceId: site.sourceId,
      source: weatherSource.name,
      ordinal: site.ordinal,
      code: site.code,
      name: site.name,
      longitude: site.longitude,
      latitude: site.latitude,
      elevation: site.elevation,
      windHeight: site.windHeight,
    })
    .from(site)
    .innerJoin(weatherSource, and(eq(weatherSource.districtId, site.districtId), eq(weatherSource.sourceId, site.sourceId)))
    .where(and(eq(site.districtId, districtId), source ? eq(weatherSource.name, source) : undefined))
    .orderBy(asc(site.sourceId), asc(site.ordinal));
}

export type SiteRow = Awaited<ReturnType<typeof listSites>>[number];

/** Blocks of the months that touch `from … to`; of one source when it is given. */
export function listBlocks(tx: Tx, districtId: string, span: { from: string; to: string; sourceId?: number }) {
  return tx
    .select({
      sourceId: weatherBlock.sourceId,
      variable: weatherBlock.variable,
      month: weatherBlock.month,
      siteCount: weatherBlock.siteCount,
      dayCount: weatherBlock.dayCount,
      values: weatherBlock.values,
      quality: weatherBlock.quality,
    })
    .from(weatherBlock)
    .where(
      and(
        eq(weatherBlock.districtId, districtId),
        span.sourceId === undefined ? undefined : eq(weatherBlock.sourceId, span.sourceId),
        gte(weatherBlock.month, `${span.from.slice(0, 7)}-01`),
        lte(weatherBlock.month, span.to),
      ),
    )
    .orderBy(asc(weatherBlock.month));
}

export type BlockRow = Awaited<ReturnType<typeof listBlocks>>[number];

/** First and last month of stored weather, as first days of months; null when there is none. */
export async function findMonths(tx: Tx, districtId: string, sourceId?: number): Promise<{ first: string; last: string } | null> {
  const [row] = await tx
    .select({ first: sql<string | null>`min(${weatherBlock.month})::text`, last: sql<string | null>`max(${weatherBlock.month})::text` })
    .from(weatherBlock)
    .where(and(eq(weatherBlock.districtId, districtId), sourceId === undefined ? undefined : eq(weatherBlock.sourceId, sourceId)));
  return row.first && row.last ? { first: row.first, last: row.last } : null;
}
