/** Vector tiles, read back with a reader of its own. Tile numbers: OGC 17-083r4 WebMercatorQuad; format: Mapbox Vector Tile Specification 2.1. */
import { VectorTile, type VectorTileFeature } from '@mapbox/vector-tile';
import { PbfReader } from 'pbf';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as tile } from '../../app/api/v1/tiles/[layer]/[version]/[z]/[x]/[y]/route.ts';
import { tileBox } from '../../lib/http/answers/tile.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';
import { cookieOf, type Fixture, makeFixture, request } from './district-fixture.ts';

let fresh: TestDatabase;
let made: Fixture;
beforeAll(async () => {
  fresh = await testDatabase();
  made = await makeFixture(fresh.db);
});
afterAll(() => fresh.close());

/** Tile that holds a place, by the published formula. */
function tileOf(longitude: number, latitude: number, z: number) {
  const side = 2 ** z;
  const phi = (latitude * Math.PI) / 180;
  const x = Math.floor(((longitude + 180) / 360) * side);
  const y = Math.floor(((1 - Math.log(Math.tan(phi) + 1 / Math.cos(phi)) / Math.PI) / 2) * side);
  return `${z}/${x}/${y}`;
}

const path = (layer: string, z: number, version = 1) => `/api/v1/tiles/${layer}/${version}/${tileOf(-115.994, 43.6015, z)}.mvt`;

async function features(response: Response, layer: string) {
  expect(response.status).toBe(200);
  const read = new VectorTile(new PbfReader(new Uint8Array(await response.arrayBuffer()))).layers[layer];
  return Array.from({ length: read.length }, (_, i) => read.feature(i));
}

describe('tiles', () => {
  it('holds the parcels with ordinal and code, at the first reading and from the cache', async () => {
    for (let i = 0; i < 2; i++) {
      const found = await features(await tile(request(path('parcels', 12), { token: made.tokens.read })), 'parcels');
      expect(found.map((feature) => [feature.id, feature.properties.o, feature.properties.code])).toEqual([
        [0, 0, 'P-1'],
        [1, 1, 'P-2'],
        [2, 2, '=P-3'],
      ]);
      expect(found.every((feature) => feature.type === 3)).toBe(true);
    }
  });

  it('draws the shape where it lies', async () => {
    const response = await tile(request(path('parcels', 12), { token: made.tokens.read }));
    const [z, x, y] = tileOf(-115.994, 43.6015, 12).split('/').map(Number);
    const read = await features(response, 'parcels');
    const second = read.find((feature) => feature.properties.code === 'P-2');
    const { geometry } = (second as VectorTileFeature).toGeoJSON(x, y, z) as { geometry: { coordinates: number[][][] } };
    const longitudes = geometry.coordinates[0].map(([longitude]) => longitude);
    expect(Math.min(...longitudes)).toBeCloseTo(-115.996, 4);
    expect(Math.max(...longitudes)).toBeCloseTo(-115.993, 4);
  });

  it('holds canals as lines with their kind', async () => {
    const found = await features(await tile(request(path('canals', 10), { token: made.tokens.read })), 'canals');
    expect(found.map((feature) => [feature.properties.o, feature.properties.code, feature.properties.kind, feature.type])).toEqual([
      [0, 'L', 'lateral', 2],
      [1, 'M', 'main', 2],
    ]);
  });

  it('shows a grower the own parcel only, also after everybody’s tile was kept', async () => {
    const cookie = await cookieOf('gus');
    await tile(request(path('parcels', 12), { token: made.tokens.read }));
    const found = await features(await tile(request(path('parcels', 12), { cookie })), 'parcels');
    expect(found.map((feature) => feature.properties.code)).toEqual(['P-2']);
    const all = await features(await tile(request(path('parcels', 12), { token: made.tokens.read })), 'parcels');
    expect(all).toHaveLength(3);
  });

  it('204 where there is nothing, 404 for another version or a tile outside the world, 304 when it is known', async () => {
    const { token } = { token: made.tokens.read };
    expect((await tile(request('/api/v1/tiles/parcels/1/12/0/0.mvt', { token }))).status).toBe(204);
    expect((await tile(request(path('parcels', 12, 2), { token }))).status).toBe(404);
    expect((await tile(request('/api/v1/tiles/parcels/1/3/8/0.mvt', { token }))).status).toBe(404);
    expect((await tile(request('/api/v1/tiles/parcels/1/17/0/0.mvt', { token }))).status).toBe(404);
    expect((await tile(request('/api/v1/tiles/owners/1/3/0/0.mvt', { token }))).status).toBe(404);
    const etag = (await tile(request(path('canals', 12), { token }))).headers.get('etag') as string;
    expect((await tile(request(path('canals', 12), { token, headers: { 'if-none-match': etag } }))).status).toBe(304);
    expect((await tile(request(path('canals', 12), {}))).status).toBe(401);
  });
});

describe('tileBox', () => {
  it('covers the world at zoom 0', () => {
    const box = tileBox({ z: 0, x: 0, y: 0 });
    // latitude limit of the Web Mercator square: atan(sinh π) = 85.0511287798…
    expect(box.north).toBeCloseTo(85.0511287798, 9);
    expect([box.west, box.east]).toEqual([-180, 180]);
  });
});
