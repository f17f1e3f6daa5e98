/** The weather sources a run can take, and their hours. */
import { and, asc, eq, gte, lte, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { site, weatherBlock, weatherSource } from '../schema/weather.ts';

/** Sources of observations in the order in which they stand in for one another, each with whether it has any weather. Forecasts are not among them. */
export function listRunSources(tx: Tx, districtId: string) {
  const hasWeather = sql<boolean>`exists (select 1 from weather_block b
    where b.district_id = "weather_source"."district_id" and b.source_id = "weather_source"."source_id")`;
  return tx
    .select({
      sourceId: weatherSource.sourceId,
      name: weatherSource.name,
      kind: weatherSource.kind,
      grid: weatherSource.grid,
      hasWeather,
    })
    .from(weatherSource)
    .where(and(eq(weatherSource.districtId, districtId), eq(weatherSource.role, 'observed')))
    .orderBy(asc(weatherSource.rank), asc(weatherSource.sourceId));
}

export type RunSource = Awaited<ReturnType<typeof listRunSources>>[number];

/** Zones of the sites of a source, by code; null where the site has none of its own. */
export async function listSiteZones(tx: Tx, districtId: string): Promise<Map<string, { ordinal: number; zone: string | null }>> {
  const rows = await tx
    .select({ sourceId: site.sourceId, ordinal: site.ordinal, code: site.code, zone: site.zone })
    .from(site)
    .where(eq(site.districtId, districtId));
  return new Map(rows.map(({ sourceId, ordinal, code, zone }) => [`${sourceId}/${code}`, { ordinal, zone }]));
}

/** Hourly blocks of a source in the months that touch `from … to`. */
export function listHourBlocks(tx: Tx, districtId: string, span: { sourceId: number; from: string; to: string }) {
  return tx
    .select({
      variable: weatherBlock.variable,
      month: weatherBlock.month,
      siteCount: weatherBlock.siteCount,
      dayCount: weatherBlock.dayCount,
      values: weatherBlock.values,
    })
    .from(weatherBlock)
    .where(
      and(
        eq(weatherBlock.districtId, districtId),
        eq(weatherBlock.sourceId, span.sourceId),
        eq(weatherBlock.steps, 24),
        gte(weatherBlock.month, `${span.from.slice(0, 7)}-01`),
        lte(weatherBlock.month, span.to),
      ),
    )
    .orderBy(asc(weatherBlock.month));
}
