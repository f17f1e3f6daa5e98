/** Weather sources by what their blocks are named, and the stored hours of one site; no values of other sites are read. */
import { and, asc, count, desc, eq, gt, gte, inArray, lte, max, min, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { site, weatherBlock, weatherSource } from '../schema/weather.ts';
import { SITE_COLUMNS } from './weather-observations.ts';

/** Sources in the order in which they stand in for one another, with their number of sites. */
export function listSourcesWithSites(tx: Tx, districtId: string) {
  return tx
    .select({
      sourceId: weatherSource.sourceId,
      name: weatherSource.name,
      kind: weatherSource.kind,
      role: weatherSource.role,
      sites: count(site.ordinal),
    })
    .from(weatherSource)
    .leftJoin(site, and(eq(site.districtId, weatherSource.districtId), eq(site.sourceId, weatherSource.sourceId)))
    .where(eq(weatherSource.districtId, districtId))
    .groupBy(weatherSource.sourceId, weatherSource.name, weatherSource.kind, weatherSource.role, weatherSource.rank)
    .orderBy(asc(weatherSource.rank), asc(weatherSource.sourceId));
}

/** Forecasts in their order, each with whether it has any weather. */
export function listForecastSources(tx: Tx, districtId: string) {
  const hasWeather = sql<boolean>`exists (select 1 from weather_block b
    where b.district_id = "weather_source"."district_id" and b.source_id = "weather_source"."source_id")`;
  return tx
    .select({ sourceId: weatherSource.sourceId, name: weatherSource.name, kind: weatherSource.kind, hasWeather })
    .from(weatherSource)
    .where(and(eq(weatherSource.districtId, districtId), eq(weatherSource.role, 'forecast')))
    .orderBy(asc(weatherSource.rank), asc(weatherSource.sourceId));
}

/** Stations of observations by their codes, each of the first source that has it. */
export async function listObservedStations(tx: Tx, districtId: string, codes: readonly string[]) {
  if (codes.length === 0) return [];
  const rows = await tx
    .select({ ...SITE_COLUMNS, zone: site.zone })
    .from(site)
    .innerJoin(weatherSource, and(eq(weatherSource.districtId, site.districtId), eq(weatherSource.sourceId, site.sourceId)))
    .where(
      and(
        eq(site.districtId, districtId),
        eq(weatherSource.kind, 'stations'),
        eq(weatherSource.role, 'observed'),
        inArray(site.code, [...codes]),
      ),
    )
    .orderBy(asc(site.code), asc(site.sourceId));
  return rows.filter((row, index) => row.code !== rows[index - 1]?.code);
}

/** Day, in the district's zone, on which weather of a source was last brought in; null where no import tells. */
export async function findIssueDay(tx: Tx, districtId: string, sourceId: number): Promise<string | null> {
  const [row] = await tx.execute<{ day: string | null }>(sql`
    select to_char(max(i.applied_at) at time zone d.time_zone, 'YYYY-MM-DD') as day
    from district d
    join import i on i.district_id = d.district_id and i.state = 'applied'
    join import_before b on b.district_id = i.district_id and b.import_id = i.import_id
    where d.district_id = ${districtId}::uuid and b.table_name = 'weather_block' and (b.key ->> 'sourceId')::int = ${sourceId}
    group by d.time_zone`);
  return row?.day ?? null;
}

/** First and last month of every variable of every source, from the keys of the blocks. */
export function listBlockSpans(tx: Tx, districtId: string) {
  return tx
    .select({
      sourceId: weatherBlock.sourceId,
      variable: weatherBlock.variable,
      steps: weatherBlock.steps,
      first: min(weatherBlock.month),
      last: max(weatherBlock.month),
    })
    .from(weatherBlock)
    .where(eq(weatherBlock.districtId, districtId))
    .groupBy(weatherBlock.sourceId, weatherBlock.variable, weatherBlock.steps)
    .orderBy(asc(weatherBlock.sourceId), asc(weatherBlock.variable));
}

/** A page of the sites of one source, in the order of their rows. */
export function listSitePage(tx: Tx, districtId: string, wanted: { sourceId: number; after: number; limit: number }) {
  return tx
    .select()
    .from(site)
    .where(and(eq(site.districtId, districtId), eq(site.sourceId, wanted.sourceId), gt(site.ordinal, wanted.after)))
    .orderBy(asc(site.ordinal))
    .limit(wanted.limit);
}

/** One site by its code, of a source by name or of the first that has it, observations before forecasts; null when there is none. */
export async function findSite(tx: Tx, districtId: string, code: string, source?: string) {
  const [row] = await tx
    .select({ ...SITE_COLUMNS, zone: site.zone })
    .from(site)
    .innerJoin(weatherSource, and(eq(weatherSource.districtId, site.districtId), eq(weatherSource.sourceId, site.sourceId)))
    .where(and(eq(site.districtId, districtId), eq(site.code, code), source === undefined ? undefined : eq(weatherSource.name, source)))
    .orderBy(desc(weatherSource.role), asc(site.sourceId))
    .limit(1);
  return row ?? null;
}

export type SiteOfCode = NonNullable<Awaited<ReturnType<typeof findSite>>>;

/** Stored hours of one site in the months that touch `from … to`: its own part of each block, Float32 [day of month × 24]. */
export function listSiteHours(tx: Tx, districtId: string, wanted: { sourceId: number; ordinal: number; from: string; to: string }) {
  const length = sql`(${weatherBlock.dayCount} * 24 * 4)`;
  return tx
    .select({
      variable: weatherBlock.variable,
      month: weatherBlock.month,
      dayCount: weatherBlock.dayCount,
      values: sql<Uint8Array>`substring(${weatherBlock.values} from ${wanted.ordinal} * ${length} + 1 for ${length})`,
    })
    .from(weatherBlock)
    .where(
      and(
        eq(weatherBlock.districtId, districtId),
        eq(weatherBlock.sourceId, wanted.sourceId),
        eq(weatherBlock.steps, 24),
        gt(weatherBlock.siteCount, wanted.ordinal),
        gte(weatherBlock.month, `${wanted.from.slice(0, 7)}-01`),
        lte(weatherBlock.month, wanted.to),
      ),
    );
}
