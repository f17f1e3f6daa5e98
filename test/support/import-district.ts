/** A small invented district for the tests of imports, what a reader might have staged for it, and a look at every table it can touch. */
import { randomUUID } from 'node:crypto';
import { sql } from 'drizzle-orm';
import type { Tx } from '../../db/connect.ts';
import { changeImport, findImport, insertImport, saveStaged } from '../../db/queries/import-row.ts';
import { district } from '../../db/schema/district.ts';
import { applicationMethod, crop, cropCalendar, season, soil } from '../../db/schema/land.ts';
import { database } from '../../lib/access/database.ts';
import type { ImportKind, StagedBlock, StagedImport, StagedParcel, StagedPlanting, StagedReach } from '../../lib/files/reading.ts';
import { stagedPieces } from '../../lib/jobs/import-staged.ts';

export const TOUCHED_TABLES = [
  'weather_source',
  'site',
  'weather_block',
  'reach',
  'turnout',
  'parcel',
  'soil',
  'crop_mapping',
  'planting',
  'season',
  'crop',
  'crop_calendar',
  'application_method',
  'service_area',
  'soil_area',
  'parcel_history',
] as const;

/** Makes a district with one season, one crop with its calendar, a soil and a method. */
export async function makeDistrict(code: string): Promise<string> {
  const districtId = randomUUID();
  await database().inDistrict(districtId, async (tx) => {
    await tx.insert(district).values({ districtId, code, name: code, timeZone: 'America/Los_Angeles' });
    await tx.insert(season).values({ districtId, code: '2023', name: '2023', startDate: '2023-03-01', endDate: '2023-10-31' });
    await tx.insert(crop).values({ districtId, code: 'maize', name: 'Maize', group: 'cereals', definition: {} });
    await tx
      .insert(cropCalendar)
      .values({ districtId, code: 'maize-1', cropCode: 'maize', name: 'Maize', definition: {}, source: 'invented' });
    await tx.insert(soil).values({
      districtId,
      code: 'loam',
      name: 'Loam',
      fieldCapacity: 0.27,
      wiltingPoint: 0.12,
      readilyEvaporableWater: 9,
      totalEvaporableWater: 21,
      source: 'invented',
    });
    await tx.insert(applicationMethod).values({
      districtId,
      code: 'furrow',
      name: 'Furrow',
      efficiency: 0.65,
      wettedFraction: 0.6,
      maximumDailyDepth: 80,
      triggerFraction: 1,
      source: 'invented',
    });
  });
  return districtId;
}

/** Every row of every table an import can touch, as text: equal text is equal to the last bit. */
export async function dumpTables(districtId: string): Promise<Record<string, string>> {
  return database().inDistrict(districtId, async (tx) => {
    const dump: Record<string, string> = {};
    for (const table of TOUCHED_TABLES) {
      const [row] = await tx.execute<{ rows: string }>(
        sql`select coalesce(jsonb_agg(to_jsonb(t) order by to_jsonb(t)::text), '[]')::text as rows from ${sql.raw(`public.${table}`)} t`,
      );
      dump[table] = row.rows;
    }
    return dump;
  });
}

export async function rowsOf<T extends Record<string, unknown>>(districtId: string, query: string): Promise<T[]> {
  return database().inDistrict(districtId, async (tx) => [...(await tx.execute(sql.raw(query)))] as T[]);
}

/** An import that has been read: its state "ready" with these rows staged. */
export async function stage(
  districtId: string,
  staged: StagedImport,
  options: Record<string, unknown> = {},
): Promise<{ districtId: string; importId: string }> {
  const pieces = await stagedPieces(staged);
  const values = { districtId, kind: staged.kind as ImportKind, options: { recompute: false, ...options }, createdBy: 'test' };
  const file = { name: `${staged.kind}.csv`, content: [new TextEncoder().encode('invented')], sha256: '00' };
  return database().inDistrict(districtId, async (tx) => {
    const importId = await insertImport(tx, values, [file]);
    await changeImport(tx, { districtId, importId, from: ['reading'] }, { state: 'ready', understood: { format: 'csv' } });
    await saveStaged(tx, districtId, importId, pieces);
    return { districtId, importId };
  });
}

export function inState(own: { districtId: string; importId: string }, from: 'ready' | 'applied', state: 'applying' | 'undoing') {
  return database().inDistrict(own.districtId, (tx) => changeImport(tx, { ...own, from: [from] }, { state }));
}

export async function stateOf(own: { districtId: string; importId: string }) {
  const row = await database().inDistrict(own.districtId, (tx: Tx) => findImport(tx, own.districtId, own.importId));
  if (!row) throw new Error('no such import');
  return { state: row.state, error: row.error, understood: row.understood as Record<string, Record<string, unknown>>, row };
}

export function site(code: string, longitude = -120.1): Extract<StagedImport, { kind: 'stations' }>['sites'][number] {
  return { code, name: `Station ${code}`, longitude, latitude: 45.12345678901234, elevation: 210.3, windHeight: 2, zone: null };
}

/** One variable of January 2023 to March 2023 for some stations; `value(site, day)` may be null. */
export function block(
  month: string,
  siteCodes: string[],
  value: (site: number, day: number) => number | null,
  variable: StagedBlock['variable'] = 'precipitation_mm',
): StagedBlock {
  const days = new Date(Date.UTC(Number(month.slice(0, 4)), Number(month.slice(5, 7)), 0)).getUTCDate();
  const values = Float32Array.from({ length: siteCodes.length * days }, (_, i) => value(Math.floor(i / days), i % days) ?? Number.NaN);
  return { variable, month, siteCodes, steps: 1, values };
}

export function reach(code: string, parentCode: string | null): StagedReach {
  return {
    code,
    name: `Reach ${code}`,
    parentCode,
    kind: 'lateral',
    capacity: 1.7,
    lossRule: { kind: 'fraction-per-km', fraction: 0.013 },
    length: 1234.5678901234567,
    geometry: {
      type: 'LineString',
      coordinates: [
        [-120.1, 45.1],
        [-120.2, 45.2000000001],
      ],
    },
  };
}

export function parcel(code: string, more: Partial<StagedParcel> = {}): StagedParcel {
  return {
    code,
    name: null,
    turnoutCode: null,
    reachCode: null,
    soilCode: null,
    methodCode: null,
    area: 40468.56422400001,
    elevation: null,
    longitude: -120.15,
    latitude: 45.15,
    west: -120.16,
    south: 45.14,
    east: -120.14,
    north: 45.16,
    geometry: {
      type: 'Polygon',
      coordinates: [
        [
          [-120.16, 45.14],
          [-120.14, 45.14],
          [-120.14, 45.16],
          [-120.16, 45.14],
        ],
      ],
    },
    attributes: { owner: 'invented', acres: 10.000000000000002 },
    crop: null,
    ...more,
  };
}

export function planting(parcelCode: string, sequence = 1, plantingDate = '2023-04-15'): StagedPlanting {
  return {
    parcelCode,
    seasonCode: '2023',
    sequence,
    cropCode: 'maize',
    calendarCode: 'maize-1',
    plantingDate,
    harvestDate: null,
    cutDates: [],
    areaShare: 1,
  };
}

export function parcels(list: StagedParcel[], more: Partial<Extract<StagedImport, { kind: 'parcels' }>> = {}): StagedImport {
  return { kind: 'parcels', parcels: list, turnouts: [], plantings: [], cropMappings: {}, ...more };
}

export function weather(blocks: StagedBlock[], source = 'Valley'): StagedImport {
  return { kind: 'weather', source, blocks, rows: 1, sites: 1 };
}
