/** Soil polygons, service areas, placed turnouts and the history of parcels, applied to the database and undone. */
import type { Polygon } from 'geojson';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { database } from '../../lib/access/database.ts';
import type { StagedArea, StagedImport, StagedParcel, StagedSoilArea } from '../../lib/files/reading.ts';
import { performApply } from '../../lib/jobs/import-apply.ts';
import { tellLineage } from '../../lib/jobs/import-lineage.ts';
import { findStagedHead } from '../../lib/jobs/import-staged.ts';
import { performUndo } from '../../lib/jobs/import-undo.ts';
import { stopQueue } from '../../lib/jobs/queue.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { dumpTables, inState, makeDistrict, parcel, parcels, planting, reach, rowsOf, stage, stateOf } from '../support/import-district.ts';

let test: TestDatabase;
let counter = 0;

beforeAll(async () => {
  test = await testDatabase();
});
afterAll(async () => {
  await stopQueue();
  await test.close();
});

const newDistrict = () => makeDistrict(`land-${++counter}`);

async function apply(districtId: string, staged: StagedImport, options: Record<string, unknown> = {}) {
  const own = await stage(districtId, staged, options);
  await inState(own, 'ready', 'applying');
  await performApply(own);
  const after = await stateOf(own);
  expect(after.error).toBeNull();
  expect(after.state).toBe('applied');
  return own;
}

async function undo(own: { districtId: string; importId: string }) {
  await inState(own, 'applied', 'undoing');
  await performUndo(own);
  expect((await stateOf(own)).state).toBe('undone');
}

/** A rectangle in hundredths of a degree, east and north of 120° W 45° N; a hundredth is about 0.8 km by 1.1 km. */
function box(west: number, south: number, east: number, north: number) {
  const place = { west: -120 + west / 100, south: 45 + south / 100, east: -120 + east / 100, north: 45 + north / 100 };
  const ring = [
    [place.west, place.south],
    [place.east, place.south],
    [place.east, place.north],
    [place.west, place.north],
    [place.west, place.south],
  ];
  return { ...place, geometry: { type: 'Polygon', coordinates: [ring] } satisfies Polygon };
}

/** Square metres of a square hundredth of a degree at 45.005° N, near enough: 788.4 m × 1111.3 m. */
const HUNDREDTH = 876_100;

function field(code: string, west: number, south: number, east: number, north: number, more: Partial<StagedParcel> = {}): StagedParcel {
  const place = box(west, south, east, north);
  const area = HUNDREDTH * (east - west) * (north - south);
  return parcel(code, { ...place, area, longitude: (place.west + place.east) / 2, latitude: (place.south + place.north) / 2, ...more });
}

const soilArea = (code: string, soilCode: string, ...corners: Parameters<typeof box>): StagedSoilArea => ({
  code,
  soilCode,
  ...box(...corners),
  attributes: {},
});
const area = (code: string, more: Partial<StagedArea>, ...corners: Parameters<typeof box>): StagedArea => ({
  ...{ code, name: `Area ${code}`, reachCode: null, turnoutCode: null, area: 1e6, attributes: {} },
  ...box(...corners),
  ...more,
});
const CLAY = {
  code: 'clay',
  name: 'Clay',
  fieldCapacity: 0.36,
  wiltingPoint: 0.22,
  evaporationDepth: 0.1,
  readilyEvaporableWater: 10,
  totalEvaporableWater: 25,
  curveNumber: null,
  rootLimit: null,
  source: 'invented',
};

async function sharesOf(districtId: string) {
  const rows = await rowsOf<{ code: string; soil_shares: { soil: string; share: number }[] | null }>(
    districtId,
    'select code, soil_shares from parcel order by code',
  );
  return Object.fromEntries(
    rows.map(({ code, soil_shares: shares }) => [
      code,
      shares && Object.fromEntries(shares.map(({ soil, share }) => [soil, Number(share.toFixed(3))])),
    ]),
  );
}

describe('soil polygons', () => {
  const map: StagedImport = {
    kind: 'soil-areas',
    soilAreas: [soilArea('S1', 'loam', -1, -1, 1, 2), soilArea('S2', 'clay', 1, -1, 1.75, 2), soilArea('S3', 'loam', 1.75, -1, 2, 2)],
  };

  async function district() {
    const districtId = await newDistrict();
    await apply(districtId, { kind: 'soils', soils: [CLAY] });
    await apply(districtId, parcels([field('A', 0, 0, 2, 1), field('B', 1, 0, 1.5, 1), field('C', 5, 0, 6, 1)]));
    return districtId;
  }

  it('lay their classes under the parcels by area, and undoing takes them away', async () => {
    const districtId = await district();
    const before = await dumpTables(districtId);
    const own = await apply(districtId, map);
    // A: loam 0–1 and 1.75–2 of 2, clay 0.75 of 2; B: clay alone; C: nothing
    expect(await sharesOf(districtId)).toEqual({ A: { loam: 0.625, clay: 0.375 }, B: { clay: 1 }, C: null });
    expect((await stateOf(own)).understood.applied).toMatchObject({ soil_areas_added: 3, parcels_changed: 2 });
    await undo(own);
    expect(await dumpTables(districtId)).toEqual(before);
  });

  it('are looked at again when parcels come, and when polygons are replaced', async () => {
    const districtId = await district();
    await apply(districtId, map);
    await apply(districtId, parcels([field('D', -1, 0, 0, 1), field('A', 0, 0, 1, 1)]));
    expect(await sharesOf(districtId)).toEqual({ A: { loam: 1 }, B: { clay: 1 }, C: null, D: { loam: 1 } });
    await apply(districtId, { kind: 'soil-areas', soilAreas: [soilArea('S9', 'clay', -5, -5, 0.5, 5)] }, { replace: true });
    expect(await sharesOf(districtId)).toEqual({ A: { clay: 0.5 }, B: null, C: null, D: { clay: 1 } });
    expect(await rowsOf(districtId, 'select code from soil_area')).toEqual([{ code: 'S9' }]);
  });

  it('of a soil that the district does not have are refused', async () => {
    const districtId = await newDistrict();
    const own = await stage(districtId, { kind: 'soil-areas', soilAreas: [soilArea('S1', 'marl', 0, 0, 1, 1)] });
    await inState(own, 'ready', 'applying');
    await performApply(own);
    const after = await stateOf(own);
    expect(after.state).toBe('failed');
    expect(after.error).toContain('soil polygons of soils that do not exist');
  });
});

describe('service areas and turnouts', () => {
  it('are kept, replaced as a whole when asked, and undone', async () => {
    const districtId = await newDistrict();
    await apply(districtId, { kind: 'canals', reaches: [reach('main', null)] });
    const bare = await dumpTables(districtId);
    const turnouts = await apply(districtId, {
      kind: 'turnouts',
      turnouts: [{ code: 'T1', reachCode: 'main', capacity: 0.2, longitude: -120, latitude: 45 }],
    });
    const [placed] = await rowsOf(districtId, 'select code, capacity_m3_s, longitude, latitude from turnout');
    expect(placed).toEqual({ code: 'T1', capacity_m3_s: 0.2, longitude: -120, latitude: 45 });
    const own = await apply(districtId, {
      kind: 'areas',
      areas: [area('A1', { turnoutCode: 'T1', reachCode: 'main' }, 0, 0, 1, 1), area('A2', {}, 1, 0, 2, 1)],
    });
    const replaced = await apply(districtId, { kind: 'areas', areas: [area('A2', { name: 'East' }, 1, 0, 3, 1)] }, { replace: true });
    expect(await rowsOf(districtId, 'select code, name, turnout_code from service_area')).toEqual([
      { code: 'A2', name: 'East', turnout_code: null },
    ]);
    await undo(replaced);
    expect(await rowsOf(districtId, 'select code, turnout_code from service_area order by code')).toEqual([
      { code: 'A1', turnout_code: 'T1' },
      { code: 'A2', turnout_code: null },
    ]);
    await undo(own);
    await undo(turnouts);
    expect(await dumpTables(districtId)).toEqual(bare);
  });

  it('keep a turnout in its place when parcels name it', async () => {
    const districtId = await newDistrict();
    await apply(districtId, { kind: 'canals', reaches: [reach('main', null)] });
    await apply(districtId, {
      kind: 'turnouts',
      turnouts: [{ code: 'T1', reachCode: 'main', capacity: null, longitude: -120, latitude: 45 }],
    });
    await apply(
      districtId,
      parcels([field('A', 0, 0, 1, 1, { turnoutCode: 'T1', reachCode: 'main' })], {
        turnouts: [{ code: 'T1', reachCode: 'main', capacity: 0.4 }],
      }),
    );
    expect(await rowsOf(districtId, 'select capacity_m3_s, longitude, latitude from turnout')).toEqual([
      { capacity_m3_s: 0.4, longitude: -120, latitude: 45 },
    ]);
  });

  it('of a turnout that is not there are refused', async () => {
    const districtId = await newDistrict();
    const own = await stage(districtId, { kind: 'areas', areas: [area('A1', { turnoutCode: 'T9' }, 0, 0, 1, 1)] });
    await inState(own, 'ready', 'applying');
    await performApply(own);
    expect((await stateOf(own)).error).toContain('service areas of turnouts that do not exist');
  });
});

describe('the history of parcels', () => {
  const first = [
    field('P1', 0, 0, 2, 1),
    field('P2', 2, 0, 3, 1),
    field('P3', 3, 0, 4, 1),
    field('P4', 4, 0, 5, 1),
    field('P5', 6, 0, 7, 1),
  ];
  const second = [
    field('P1', 0, 0, 1, 1),
    field('P1b', 1, 0, 2, 1),
    field('P23', 2, 0, 4, 1),
    field('P4', 4, 0, 5, 1),
    field('P6', 8, 0, 9, 1),
  ];

  async function told(districtId: string, list: StagedParcel[], options: Record<string, unknown>) {
    const own = await stage(districtId, parcels(list), options);
    await database().inDistrict(districtId, async (tx) => {
      expect(await findStagedHead(tx, districtId, own.importId)).not.toBeNull();
      const row = { kind: 'parcels', options: { recompute: false, ...options } };
      await tellLineage(tx, own, row, { understood: {} as never, findings: [], findingCounts: { error: 0, warning: 0, note: 0 } });
    });
    const after = await stateOf(own);
    return {
      own,
      lineage: after.understood.lineage as never as Lineage,
      findings: after.row.findings as { code: string; message: string }[],
    };
  }
  interface Lineage {
    readonly counts: Record<string, number>;
    readonly items: readonly { change: string; code: string; successors: { code: string; share: number }[] }[];
    readonly valid_to: string | null;
  }

  it('is told before applying, kept by applying, and undone', async () => {
    const districtId = await newDistrict();
    await apply(districtId, parcels(first, { plantings: [planting('P5')] }));
    const before = await dumpTables(districtId);
    const { own, lineage } = await told(districtId, second, { replace: true, validFrom: '2024-01-01' });
    expect(lineage.counts).toEqual({ unchanged: 1, recoded: 0, reshaped: 0, split: 1, merged: 2, vanished: 1, new: 1, overlaid: 0 });
    expect(lineage.valid_to).toBe('2023-12-31');
    expect(lineage.items.map(({ change, code, successors }) => [change, code, successors])).toEqual([
      ['vanished', 'P5', []],
      [
        'split',
        'P1',
        [
          { code: 'P1', share: 0.5 },
          { code: 'P1b', share: 0.5 },
        ],
      ],
      ['merged', 'P2', [{ code: 'P23', share: 1 }]],
      ['merged', 'P3', [{ code: 'P23', share: 1 }]],
      ['new', 'P6', []],
    ]);
    expect(await dumpTables(districtId)).toEqual(before);

    await inState(own, 'ready', 'applying');
    await performApply(own);
    expect((await stateOf(own)).state).toBe('applied');
    const kept = await rowsOf(
      districtId,
      `select parcel_code, change, successors, valid_to::text, geometry_version, (row ->> 'area_m2')::float8 as area, row ->> 'code' as code
       from parcel_history order by parcel_code`,
    );
    expect(kept.map((row) => [row.parcel_code, row.change, row.valid_to, row.code, row.area])).toEqual([
      ['P1', 'split', '2023-12-31', 'P1', 2 * HUNDREDTH],
      ['P2', 'merged', '2023-12-31', 'P2', HUNDREDTH],
      ['P3', 'merged', '2023-12-31', 'P3', HUNDREDTH],
      ['P5', 'vanished', '2023-12-31', 'P5', HUNDREDTH],
    ]);
    const [{ version }] = await rowsOf<{ version: number }>(districtId, 'select geometry_version as version from district');
    expect(kept.every((row) => row.geometry_version === version - 1)).toBe(true);
    await undo(own);
    expect(await dumpTables(districtId)).toEqual(before);
  });

  it('warns of parcels that stay under those of the file, and of codes that moved', async () => {
    const districtId = await newDistrict();
    await apply(districtId, parcels(first));
    const { lineage, findings } = await told(districtId, [field('N1', 0, 0, 2, 1), field('P2', 20, 0, 21, 1)], {});
    expect(lineage.counts).toMatchObject({ overlaid: 1, vanished: 1, new: 1 });
    expect(lineage.items[0]).toMatchObject({ change: 'overlaid', code: 'P1', successors: [{ code: 'N1', share: 1 }] });
    expect(findings.map(({ code }) => code)).toEqual(['parcels-overlaid', 'parcel-code-moved']);
    expect(findings[1].message).toContain('P2');
  });

  it('keeps nothing of parcels that come for the first time or have not changed', async () => {
    const districtId = await newDistrict();
    await apply(districtId, parcels(first));
    await apply(districtId, parcels(first.map((one) => ({ ...one, name: 'again' }))));
    expect(await rowsOf(districtId, 'select * from parcel_history')).toEqual([]);
  });
});
