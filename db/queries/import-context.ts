/** What a district already knows, for a reader to check and join against. */
import { and, asc, eq, isNotNull, sql } from 'drizzle-orm';
import type { LineString, MultiLineString, MultiPolygon, Polygon } from 'geojson';
import type { ImportContext, ImportKind } from '../../lib/files/reading.ts';
import type { GridShape } from '../../lib/weather/variable.ts';
import type { Tx } from '../connect.ts';
import { district } from '../schema/district.ts';
import {
  applicationMethod,
  crop,
  cropCalendar,
  cropMapping,
  parcel,
  planting,
  reach,
  season,
  serviceArea,
  soil,
  turnout,
} from '../schema/land.ts';
import { site, weatherBlock, weatherSource } from '../schema/weather.ts';

/** @param kind shapes and areas of the parcels come along only where it needs them */
export async function findImportContext(tx: Tx, districtId: string, kind?: ImportKind): Promise<ImportContext> {
  const [own] = await tx
    .select({ units: district.units, timeZone: district.timeZone, defaultElevation: district.defaultElevation })
    .from(district)
    .where(eq(district.districtId, districtId));
  const sites = await tx
    .select({
      code: site.code,
      name: site.name,
      zone: site.zone,
      longitude: site.longitude,
      latitude: site.latitude,
      elevation: site.elevation,
    })
    .from(site)
    .innerJoin(weatherSource, and(eq(weatherSource.districtId, site.districtId), eq(weatherSource.sourceId, site.sourceId)))
    .where(and(eq(site.districtId, districtId), eq(weatherSource.kind, 'stations')))
    .orderBy(asc(site.code));
  const parcels = await tx.select({ code: parcel.code }).from(parcel).where(eq(parcel.districtId, districtId)).orderBy(asc(parcel.code));
  const reaches = await tx.select({ code: reach.code, parentCode: reach.parentCode }).from(reach).where(eq(reach.districtId, districtId));
  const turnouts = await tx
    .select({ code: turnout.code, reachCode: turnout.reachCode, longitude: turnout.longitude, latitude: turnout.latitude })
    .from(turnout)
    .where(eq(turnout.districtId, districtId));
  return {
    districtUnits: own?.units ?? 'metric',
    timeZone: own?.timeZone,
    defaultElevation: own?.defaultElevation,
    sources: await listContextSources(tx, districtId),
    serviceAreas: await listContextAreas(tx, districtId),
    reachLines: await listContextLines(tx, districtId),
    knownSites: sites.filter((one, i) => one.code !== sites[i - 1]?.code),
    knownParcels: parcels.map((row) => row.code),
    knownReaches: reaches,
    knownTurnouts: turnouts,
    districtBox: await districtBox(tx, districtId),
    siteBox: await siteBox(tx, districtId),
    plantingCounts: await plantingCounts(tx, districtId),
    parcelCounts: await parcelCounts(tx, districtId),
    ...(kind === 'images' ? { parcelShapes: await listParcelShapes(tx, districtId) } : {}),
    ...(kind === 'deliveries' ? { parcelAreas: await listParcelAreas(tx, districtId) } : {}),
    ...(await libraries(tx, districtId)),
  };
}

async function listParcelAreas(tx: Tx, districtId: string): Promise<Record<string, number>> {
  const rows = await tx.select({ code: parcel.code, area: parcel.area }).from(parcel).where(eq(parcel.districtId, districtId));
  return Object.fromEntries(rows.map(({ code, area }) => [code, area]));
}

async function listParcelShapes(tx: Tx, districtId: string): Promise<ImportContext['parcelShapes']> {
  const rows = await tx
    .select({ code: parcel.code, geometry: parcel.geometry })
    .from(parcel)
    .where(eq(parcel.districtId, districtId))
    .orderBy(asc(parcel.ordinal));
  return rows.map((row) => ({ ...row, geometry: row.geometry as Polygon | MultiPolygon }));
}

async function listContextSources(tx: Tx, districtId: string): Promise<ImportContext['sources']> {
  const rows = await listSources(tx, districtId);
  return rows.map(({ name, kind, grid }) => ({ name, kind, grid: grid as GridShape | null }));
}

async function listContextAreas(tx: Tx, districtId: string): Promise<ImportContext['serviceAreas']> {
  const rows = await tx
    .select({
      code: serviceArea.code,
      reachCode: serviceArea.reachCode,
      turnoutCode: serviceArea.turnoutCode,
      geometry: serviceArea.geometry,
    })
    .from(serviceArea)
    .where(eq(serviceArea.districtId, districtId));
  return rows.map((row) => ({ ...row, geometry: row.geometry as Polygon | MultiPolygon }));
}

async function listContextLines(tx: Tx, districtId: string) {
  const rows = await tx.select({ code: reach.code, geometry: reach.geometry }).from(reach).where(eq(reach.districtId, districtId));
  return rows.map((row) => ({ code: row.code, geometry: row.geometry as LineString | MultiLineString }));
}

async function libraries(tx: Tx, districtId: string) {
  const crops = await tx
    .select({ code: crop.code, name: crop.name })
    .from(crop)
    .where(eq(crop.districtId, districtId))
    .orderBy(asc(crop.code));
  const calendars = await tx
    .select({ code: cropCalendar.code, cropCode: cropCalendar.cropCode, plantingDay: cropCalendar.plantingDay })
    .from(cropCalendar)
    .where(eq(cropCalendar.districtId, districtId))
    .orderBy(asc(cropCalendar.code));
  const soils = await tx
    .select({ code: soil.code, name: soil.name })
    .from(soil)
    .where(eq(soil.districtId, districtId))
    .orderBy(asc(soil.code));
  const methods = await tx
    .select({ code: applicationMethod.code })
    .from(applicationMethod)
    .where(eq(applicationMethod.districtId, districtId));
  const seasons = await tx
    .select({ code: season.code, startDate: season.startDate, endDate: season.endDate })
    .from(season)
    .where(eq(season.districtId, districtId))
    .orderBy(asc(season.startDate));
  const mappings = await tx.select().from(cropMapping).where(eq(cropMapping.districtId, districtId));
  return {
    crops,
    calendars,
    soils: soils.map((row) => row.code),
    soilNames: Object.fromEntries(soils.map((row) => [row.code, row.name])),
    methods: methods.map((row) => row.code),
    seasons,
    cropMappings: Object.fromEntries(mappings.map((row) => [row.foreignCode, row.cropCode])),
  };
}

async function districtBox(tx: Tx, districtId: string): Promise<[number, number, number, number] | null> {
  const [box] = await tx
    .select({
      west: sql<number | null>`min(${parcel.west})`,
      south: sql<number | null>`min(${parcel.south})`,
      east: sql<number | null>`max(${parcel.east})`,
      north: sql<number | null>`max(${parcel.north})`,
    })
    .from(parcel)
    .where(eq(parcel.districtId, districtId));
  if (!box || box.west === null || box.south === null || box.east === null || box.north === null) return boundaryBox(tx, districtId);
  return [box.west, box.south, box.east, box.north];
}

/** Box of the district's boundary, while it has no parcels. */
async function boundaryBox(tx: Tx, districtId: string): Promise<[number, number, number, number] | null> {
  const [own] = await tx.select({ boundary: district.boundary }).from(district).where(eq(district.districtId, districtId));
  const boundary = own?.boundary as Polygon | MultiPolygon | null | undefined;
  if (!boundary) return null;
  const rings = boundary.type === 'Polygon' ? boundary.coordinates : boundary.coordinates.flat();
  const box: [number, number, number, number] = [180, 90, -180, -90];
  for (const [x, y] of rings.flat()) {
    box[0] = Math.min(box[0], x);
    box[1] = Math.min(box[1], y);
    box[2] = Math.max(box[2], x);
    box[3] = Math.max(box[3], y);
  }
  return box[0] <= box[2] ? box : null;
}

async function siteBox(tx: Tx, districtId: string): Promise<[number, number, number, number] | null> {
  const [box] = await tx
    .select({
      west: sql<number | null>`min(${site.longitude})`,
      south: sql<number | null>`min(${site.latitude})`,
      east: sql<number | null>`max(${site.longitude})`,
      north: sql<number | null>`max(${site.latitude})`,
    })
    .from(site)
    .where(eq(site.districtId, districtId));
  if (!box || box.west === null || box.south === null || box.east === null || box.north === null) return null;
  return [box.west, box.south, box.east, box.north];
}

async function plantingCounts(tx: Tx, districtId: string): Promise<Record<string, number>> {
  const rows = await tx
    .select({ code: planting.parcelCode, count: sql<number>`count(*)::int` })
    .from(planting)
    .where(eq(planting.districtId, districtId))
    .groupBy(planting.parcelCode);
  return Object.fromEntries(rows.map(({ code, count }) => [code, count]));
}

async function parcelCounts(tx: Tx, districtId: string): Promise<Record<string, number>> {
  const rows = await tx
    .select({ code: parcel.reachCode, count: sql<number>`count(*)::int` })
    .from(parcel)
    .where(and(eq(parcel.districtId, districtId), isNotNull(parcel.reachCode)))
    .groupBy(parcel.reachCode);
  return Object.fromEntries(rows.map(({ code, count }) => [code ?? '', count]));
}

/** Seasons that could be computed now: the district has parcels, the season has plantings, and some weather falls in it or a run of it stands. */
export async function listComputableSeasons(tx: Tx, districtId: string) {
  return tx
    .select({ code: season.code, startDate: season.startDate, endDate: season.endDate })
    .from(season)
    .where(
      and(
        eq(season.districtId, districtId),
        sql`exists (select 1 from ${parcel} where ${parcel.districtId} = ${districtId})`,
        sql`exists (select 1 from ${planting} where ${planting.districtId} = ${districtId} and ${planting.seasonCode} = ${season.code})`,
        sql`(exists (select 1 from ${weatherBlock} where ${weatherBlock.districtId} = ${districtId}
              and ${weatherBlock.month} <= ${season.endDate} and ${weatherBlock.month} + interval '1 month' > ${season.startDate})
            or exists (select 1 from run where run.district_id = ${districtId} and run.season_code = ${season.code} and run.standing))`,
      ),
    )
    .orderBy(asc(season.startDate));
}

/** Sites with the name of their source. */
export function listSourceSites(tx: Tx, districtId: string) {
  return tx
    .select({
      sourceId: site.sourceId,
      source: weatherSource.name,
      kind: weatherSource.kind,
      role: weatherSource.role,
      ordinal: site.ordinal,
      code: site.code,
    })
    .from(site)
    .innerJoin(weatherSource, and(eq(weatherSource.districtId, site.districtId), eq(weatherSource.sourceId, site.sourceId)))
    .where(eq(site.districtId, districtId))
    .orderBy(asc(site.sourceId), asc(site.ordinal));
}

export function listSources(tx: Tx, districtId: string) {
  return tx
    .select({
      sourceId: weatherSource.sourceId,
      name: weatherSource.name,
      kind: weatherSource.kind,
      role: weatherSource.role,
      grid: weatherSource.grid,
    })
    .from(weatherSource)
    .where(eq(weatherSource.districtId, districtId))
    .orderBy(asc(weatherSource.sourceId));
}
