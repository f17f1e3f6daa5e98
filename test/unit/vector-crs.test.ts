import { describe, expect, test } from 'vitest';
import { isCrsFault, type Projection, projectionOf } from '../../lib/files/crs.ts';
import { geodesicDistance } from '../../lib/geo/geodesic.ts';
import { feature, featureFile, square } from '../support/import-context.ts';
import { readLayer } from '../support/vector-files.ts';

function known(text: string): Projection {
  const found = projectionOf(text);
  if (isCrsFault(found)) throw new Error(found.message);
  return found;
}

const RD_JSON = {
  type: 'ProjectedCRS',
  name: 'Amersfoort / RD New',
  base_crs: { name: 'Amersfoort', datum: { name: 'Amersfoort' } },
  id: { authority: 'EPSG', code: 28992 },
};

describe('notations of one system', () => {
  const NOTATIONS = [
    'EPSG:28992',
    'epsg:28992',
    '28992',
    'urn:ogc:def:crs:EPSG::28992',
    'urn:ogc:def:crs:EPSG:10.076:28992',
    'http://www.opengis.net/def/crs/EPSG/0/28992',
    'https://www.opengis.net/def/crs/EPSG/0/28992',
    JSON.stringify(RD_JSON),
    JSON.stringify({ type: 'CompoundCRS', name: 'x', components: [RD_JSON, { type: 'VerticalCRS', name: 'NAP' }] }),
    'PROJCS["x",GEOGCS["Amersfoort",DATUM["Amersfoort",SPHEROID["Bessel 1841",6377397.155,299.1528128]],PRIMEM["Greenwich",0],UNIT["degree",0.0174532925199433]],PROJECTION["Oblique_Stereographic"],UNIT["metre",1],AUTHORITY["EPSG","28992"]]',
    'PROJCRS["x",BASEGEOGCRS["Amersfoort",DATUM["Amersfoort",ELLIPSOID["Bessel 1841",6377397.155,299.1528128]]],CONVERSION["x",METHOD["Oblique Stereographic"]],CS[Cartesian,2],ID["EPSG",28992]]',
    // with the national height system
    'EPSG:7415',
  ];
  for (const text of NOTATIONS) {
    test(text.slice(0, 60), () => {
      expect(known(text).name).toBe('EPSG:28992 Amersfoort / RD New');
    });
  }

  test('longitude and latitude on WGS 84 stay as they are', () => {
    for (const text of [
      'OGC:CRS84',
      'urn:ogc:def:crs:OGC:1.3:CRS84',
      'http://www.opengis.net/def/crs/OGC/1.3/CRS84',
      'EPSG:4326',
      '{"id":{"authority":"OGC","code":"CRS84"}}',
    ])
      expect(known(text)).toMatchObject({ toWgs84: null, transformation: null, accuracy: 0 });
  });
});

describe('what is said of the accuracy', () => {
  // accuracies: EPSG dataset 10.076, the transformation named
  const CASES: [text: string, accuracy: number | null, grid: number | null, words: RegExp][] = [
    ['EPSG:28992', 1, null, /seven parameters/], // Amersfoort to WGS 84 (3)
    ['EPSG:27700', 2, 1, /seven parameters.*grid-shift file would reach 1 m/], // OSGB36 to WGS 84 (6)
    ['EPSG:21037', 35, null, /three parameters; positions to about 35 m/], // Arc 1960 to WGS 84 (1)
    ['EPSG:26910', 4, 1.5, /NAD83 taken as WGS 84; positions to about 4 m/], // NAD83 to WGS 84 (1)
    ['EPSG:32633', 0, null, /on WGS 84/],
    ['EPSG:2328', null, null, /none is published for Xian 1980.*several hundred metres/],
  ];
  for (const [text, accuracy, gridAccuracy, words] of CASES) {
    test(text, () => {
      expect(known(text)).toMatchObject({ accuracy, gridAccuracy, transformation: expect.stringMatching(words) });
    });
  }

  test('a coarse shift is a warning of the file, a fine one a note', async () => {
    const file = (code: number, x: number, y: number) =>
      featureFile([feature({}, 'Polygon', [square(x, y, 100)])], { crs: { type: 'name', properties: { name: `EPSG:${code}` } } });
    const coarse = await readLayer(file(21037, 354_000, 9_090_000));
    expect(coarse.findings).toMatchObject([
      { severity: 'warning', code: 'datum-shift-coarse', message: expect.stringContaining('about 35 m') },
    ]);
    const fine = await readLayer(file(28992, 155_000, 463_000));
    expect(fine.findings).toMatchObject([{ severity: 'note', code: 'reprojected' }]);
    const grid = await readLayer(file(27700, 400_000, 300_000));
    expect(grid.findings).toMatchObject([{ severity: 'note', code: 'grid-shift-not-used' }]);
  });
});

describe('systems that are refused', () => {
  for (const text of ['EPSG:999999', 'nonsense', '', '{"id":', 'EPSG:5773', 'LOCAL_CS["site grid"]']) {
    test(`"${text}"`, () => {
      expect(projectionOf(text)).toMatchObject({ code: 'unsupported-crs', advice: expect.stringContaining('EPSG code') });
    });
  }

  test('coordinates outside the area of the projection are no positions', async () => {
    const file = featureFile([feature({}, 'Polygon', [square(1e12, 1e12, 100)])], {
      crs: { type: 'name', properties: { name: 'EPSG:28992' } },
    });
    const { features, codes } = await readLayer(file);
    expect(features[0].geometry).toBeNull();
    expect(codes).toContain('coordinates-out-of-range');
  });
});

test('a metre east is a metre east', () => {
  // UTM zone 33 north, central meridian, scale 0.9996: 1 000 m of grid are 1 000.40 m on the ellipsoid (Snyder 1987, Eq. 8-15)
  const place = known('EPSG:32633').toWgs84 ?? (() => [Number.NaN, Number.NaN]);
  const [[a, b], [c, d]] = [place(500_000, 5_000_000), place(501_000, 5_000_000)];
  expect(a).toBeCloseTo(15, 9);
  expect(Math.abs(geodesicDistance(a, b, c, d) - 1000 / 0.9996)).toBeLessThan(0.01);
});
