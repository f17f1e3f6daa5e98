/** Service areas, the history of parcels, and the map of a run whose parcels have changed since. */
import { VectorTile } from '@mapbox/vector-tile';
import { sql } from 'drizzle-orm';
import { PbfReader } from 'pbf';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as areas } from '../../app/api/v1/areas/route.ts';
import { GET as history } from '../../app/api/v1/parcels/[code]/history/route.ts';
import { GET as map } from '../../app/api/v1/runs/[id]/map/route.ts';
import { GET as summary } from '../../app/api/v1/runs/[id]/summary/route.ts';
import { GET as tile } from '../../app/api/v1/tiles/[layer]/[version]/[z]/[x]/[y]/route.ts';
import { parcel, serviceArea } from '../../db/schema/land.ts';
import type { StagedParcel } from '../../lib/files/reading.ts';
import { performApply } from '../../lib/jobs/import-apply.ts';
import { stopQueue } from '../../lib/jobs/queue.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { inState, parcels, stage, parcel as stagedParcel, stateOf } from '../support/import-district.ts';
import { cookieOf, type Fixture, makeFixture, request } from './district-fixture.ts';

let fresh: TestDatabase;
let made: Fixture;

beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
  // the west of the three parcels lies in both areas, the middle one in the large one, the east one in none
  await fresh.db.inDistrict(made.a.id, (tx) =>
    tx.insert(serviceArea).values([areaRow('big', 'Big', -116.001, -115.99, 2e6), areaRow('small', 'Small', -116.001, -115.997, 1e6)]),
  );
  await apply();
});
afterAll(async () => {
  await stopQueue();
  await fresh.close();
});

function box(west: number, east: number) {
  const [south, north] = [43.6, 43.603];
  const ring = [
    [west, south],
    [east, south],
    [east, north],
    [west, north],
    [west, south],
  ];
  return { west, south, east, north, geometry: { type: 'Polygon' as const, coordinates: [ring] } };
}

function areaRow(code: string, name: string, west: number, east: number, area: number) {
  return { districtId: made.a.id, code, name, reachCode: 'M', turnoutCode: null, area, ...box(west, east) };
}

function field(code: string, west: number, east: number, area: number): StagedParcel {
  return stagedParcel(code, { ...box(west, east), area, longitude: (west + east) / 2, latitude: 43.6015, attributes: {} });
}

/** P-1 is split in two, P-2 and =P-3 become P-9, after the run of the fixture. */
async function apply() {
  const districtId = made.a.id;
  const plantings = sql`delete from planting where district_id = ${districtId}`;
  await fresh.db.inDistrict(districtId, (tx) => tx.execute(plantings));
  const list = [field('P-1', -116, -115.998, 6000), field('P-1b', -115.998, -115.997, 4000), field('P-9', -115.996, -115.989, 60_000)];
  const own = await stage(districtId, parcels(list), { replace: true, validFrom: '2025-01-01' });
  await inState(own, 'ready', 'applying');
  await performApply(own);
  expect((await stateOf(own)).error).toBeNull();
}

async function json<T>(response: Response | Promise<Response>): Promise<T> {
  const got = await response;
  expect(got.status).toBe(200);
  return (await got.json()) as T;
}

describe('GET /api/v1/areas', () => {
  it('lists the areas with the parcels in each, the smaller of two that overlap before the larger', async () => {
    const { items } = await json<{ items: object[] }>(areas(request('/api/v1/areas', { token: made.tokens.read })));
    expect(items).toEqual([
      { code: 'big', name: 'Big', turnout: null, reach: 'M', area_ha: 200, parcel_count: 1 },
      { code: 'small', name: 'Small', turnout: null, reach: 'M', area_ha: 100, parcel_count: 2 },
    ]);
    const csv = await areas(request('/api/v1/areas', { token: made.tokens.read, headers: { accept: 'text/csv' } }));
    expect((await csv.text()).split('\r\n')[0]).toBe('code,name,turnout,reach,area_ha,parcel_count');
  });

  it('tells nothing of another district', async () => {
    const { items } = await json<{ items: object[] }>(areas(request('/api/v1/areas', { token: made.tokens.other })));
    expect(items).toEqual([]);
  });
});

describe('GET /api/v1/parcels/{code}/history', () => {
  const of = (code: string, sent: { token?: string; cookie?: string }) =>
    history(request(`/api/v1/parcels/${encodeURIComponent(code)}/history`, sent));
  interface History {
    stands: boolean;
    items: { parcel: string; change: string; valid_to: string; area_ha: number; successors: object[] }[];
  }

  it('tells what stood there, from the parcel that took the ground over', async () => {
    const { stands, items } = await json<History>(of('P-1b', { token: made.tokens.read }));
    expect(stands).toBe(true);
    expect(items).toMatchObject([
      {
        parcel: 'P-1',
        change: 'split',
        valid_to: '2024-12-31',
        area_ha: 1,
        geometry_version: 1,
        successors: [{ parcel: 'P-1' }, { parcel: 'P-1b' }],
      },
    ]);
    const merged = await json<History>(of('P-9', { token: made.tokens.read }));
    expect(merged.items.map((item) => [item.parcel, item.change])).toEqual([
      ['=P-3', 'merged'],
      ['P-2', 'merged'],
    ]);
  });

  it('is there for a parcel that stands no more, and for no other code', async () => {
    const { stands, items } = await json<History>(of('P-2', { token: made.tokens.read }));
    expect([stands, items.length]).toEqual([false, 1]);
    expect((await of('P-77', { token: made.tokens.read })).status).toBe(404);
    expect((await of('P-9', { token: made.tokens.other })).status).toBe(404);
  });

  it('shows a grower the own parcel, without the codes of others', async () => {
    const cookie = await cookieOf('gus');
    expect((await of('P-1', { cookie })).status).toBe(404);
    const { items } = await json<History>(of('P-2', { cookie }));
    expect(items[0].successors).toEqual([]);
  });
});

describe('a run from before its parcels changed', () => {
  interface Description {
    tiles: { parcels: string; canals: string; areas: string };
    parcels: { ordinal: number[]; code: string[] };
  }
  const described = () => json<Description>(map(request(`/api/v1/runs/${made.runId}/map`, { token: made.tokens.read })));

  async function shapes(path: string) {
    const response = await tile(request(path, { token: made.tokens.read }));
    expect(response.status).toBe(200);
    const { layers } = new VectorTile(new PbfReader(new Uint8Array(await response.arrayBuffer())));
    const [layer] = Object.values(layers);
    return Array.from({ length: layer.length }, (_, i) => [layer.feature(i).id, layer.feature(i).properties.code]);
  }
  // tile of 115.994° W 43.6015° N by the published formula (OGC 17-083r4)
  const at = (template: string) => template.replace('{z}', '12').replace('{x}', '728').replace('{y}', '1495');

  it('is drawn with the parcels as they stood', async () => {
    const { tiles, parcels: drawn } = await described();
    expect(tiles.parcels).toContain('/parcels/1/');
    expect(tiles.canals).toContain('/canals/2/');
    expect(drawn).toMatchObject({ code: ['P-1', 'P-2', '=P-3'], ordinal: [0, 1, 2] });
    expect(await shapes(at(tiles.parcels))).toEqual([
      [0, 'P-1'],
      [1, 'P-2'],
      [2, '=P-3'],
    ]);
    const now = await shapes(at(tiles.parcels.replace('/1/', '/2/')));
    expect(now.map(([, code]) => code)).toEqual(['P-1', 'P-1b', 'P-9']);
  });

  it('offers the outlines of the service areas', async () => {
    const { tiles } = await described();
    expect(await shapes(at(tiles.areas))).toEqual([
      [0, 'big'],
      [1, 'small'],
    ]);
  });

  it('sums up by service area what stands in one now', async () => {
    const answer = await json<{ areas: { code: string; name: string; parcel_count: number }[] }>(
      summary(request(`/api/v1/runs/${made.runId}/summary`, { token: made.tokens.read })),
    );
    // of the parcels of the run only P-1 still stands
    expect(answer.areas.map(({ code, name, parcel_count }) => [code, name, parcel_count])).toEqual([['small', 'Small', 1]]);
  });
});

it('has no parcel left over from the fixture', async () => {
  const rows = await fresh.db.inDistrict(made.a.id, (tx) => tx.select({ code: parcel.code }).from(parcel));
  expect(rows.map(({ code }) => code).sort()).toEqual(['P-1', 'P-1b', 'P-9']);
});
