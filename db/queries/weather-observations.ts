/** Sites and their stored weather, block by block. */
import { and, asc, eq, gte, inArray, lte, type SQL, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { site, weatherBlock, weatherSource } from '../schema/weather.ts';

/** A site with the name and kind of its source. */
export const SITE_COLUMNS = {
  sourceId: site.sourceId,
  source: weatherSource.name,
  kind: weatherSource.kind,
  role: weatherSource.role,
  ordinal: site.ordinal,
  code: site.code,
  name: site.name,
  longitude: site.longitude,
  latitude: site.latitude,
  elevation: site.elevation,
  windHeight: site.windHeight,
};

/** Sites with the name of their source, in the order of sources and of rows in their blocks. */
export function listSites(tx: Tx, districtId: string, source?: string | null) {
  return tx
    .select(SITE_COLUMNS)
    .from(site)
    .innerJoin(weatherSource, and(eq(weatherSource.districtId, site.districtId), eq(weatherSource.sourceId, site.sourceId)))
    .where(and(eq(site.districtId, districtId), source ? eq(weatherSource.name, source) : undefined))
    .orderBy(asc(site.sourceId), asc(site.ordinal));
}

export type SiteRow = Awaited<ReturnType<typeof listSites>>[number];

/** Sites of the sources, as `listSites`. */
export async function listSitesOf(tx: Tx, districtId: string, sourceIds: readonly number[]): Promise<SiteRow[]> {
  const wanted = new Set(sourceIds);
  if (wanted.size === 0) return [];
  return (await listSites(tx, districtId)).filter((row) => wanted.has(row.sourceId));
}

/** Sources in the order in which they stand in for one another, and whether any daily weather of them is stored. */
export function listWeatherSources(tx: Tx, districtId: string) {
  return tx
    .select({
      sourceId: weatherSource.sourceId,
      name: weatherSource.name,
      kind: weatherSource.kind,
      role: weatherSource.role,
      rank: weatherSource.rank,
      hasWeather: sql<boolean>`exists (select 1 from weather_block own where own.district_id = weather_source.district_id
        and own.source_id = weather_source.source_id and own.steps = 1)`,
    })
    .from(weatherSource)
    .where(eq(weatherSource.districtId, districtId))
    .orderBy(asc(weatherSource.rank), asc(weatherSource.sourceId));
}

export type WeatherSourceRow = Awaited<ReturnType<typeof listWeatherSources>>[number];

interface BlocksWanted {
  readonly from: string;
  readonly to: string;
  readonly sourceId?: number;
  readonly sourceIds?: readonly number[];
  readonly variables?: readonly string[];
  /** values in a day: 1 daily unless told, 24 hourly */
  readonly steps?: number;
}

function ofSources({ sourceId, sourceIds }: { sourceId?: number; sourceIds?: readonly number[] }): SQL | undefined {
  if (sourceIds) return sourceIds.length > 0 ? inArray(weatherBlock.sourceId, [...sourceIds]) : sql`false`;
  return sourceId === undefined ? undefined : eq(weatherBlock.sourceId, sourceId);
}

/** Daily blocks of the months that touch `from … to`; of some sources and variables when they are given. */
export function listBlocks(tx: Tx, districtId: string, wanted: BlocksWanted) {
  return tx
    .select({
      sourceId: weatherBlock.sourceId,
      variable: weatherBlock.variable,
      month: weatherBlock.month,
      siteCount: weatherBlock.siteCount,
      dayCount: weatherBlock.dayCount,
      steps: weatherBlock.steps,
      values: weatherBlock.values,
      quality: weatherBlock.quality,
    })
    .from(weatherBlock)
    .where(
      and(
        eq(weatherBlock.districtId, districtId),
        eq(weatherBlock.steps, wanted.steps ?? 1),
        ofSources(wanted),
        wanted.variables ? inArray(weatherBlock.variable, [...wanted.variables]) : undefined,
        gte(weatherBlock.month, `${wanted.from.slice(0, 7)}-01`),
        lte(weatherBlock.month, wanted.to),
      ),
    )
    .orderBy(asc(weatherBlock.month));
}

export type BlockRow = Awaited<ReturnType<typeof listBlocks>>[number];

/** First and last month of stored daily weather, as first days of months; null when there is none. */
export async function findMonths(
  tx: Tx,
  districtId: string,
  sources?: number | readonly number[],
): Promise<{ first: string; last: string } | null> {
  const of = typeof sources === 'number' ? { sourceId: sources } : { sourceIds: sources };
  const [row] = await tx
    .select({ first: sql<string | null>`min(${weatherBlock.month})::text`, last: sql<string | null>`max(${weatherBlock.month})::text` })
    .from(weatherBlock)
    .where(and(eq(weatherBlock.districtId, districtId), eq(weatherBlock.steps, 1), ofSources(of)));
  return row.first && row.last ? { first: row.first, last: row.last } : null;
}
