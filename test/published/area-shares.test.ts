/**
 * Polygons over polygons against an outside overlay: SpatiaLite 5.0.1 with GEOS 3.11.1 and PROJ 9.1.1, through GDAL 3.6.2:
 * ST_Area(ST_Transform(ST_Segmentize(ST_Intersection(p, s), 0.0001), 3035)), the edges straight in longitude and latitude and cut short so
 * that they stay so in the equal-area projection EPSG:3035.
 */
import type { MultiPolygon, Polygon, Position } from 'geojson';
import { describe, expect, it } from 'vitest';
import { coverOf } from '../../lib/geo/area-shares.ts';
import { degreeLengths } from '../../lib/geo/degree-lengths.ts';
import { geodesicArea } from '../../lib/geo/geodesic.ts';
import { nearestOf } from '../../lib/geo/nearest-place.ts';
import { planeShape, sharedArea } from '../../lib/geo/plane-shape.ts';

const polygon = (...coordinates: Position[][]): Polygon => ({ type: 'Polygon', coordinates });

const P1 = polygon([
  [5.1, 52.1],
  [5.112, 52.101],
  [5.111, 52.109],
  [5.099, 52.107],
  [5.1, 52.1],
]);
const P2 = polygon(
  [
    [5.112, 52.101],
    [5.125, 52.1],
    [5.121, 52.105],
    [5.126, 52.111],
    [5.111, 52.109],
    [5.112, 52.101],
  ],
  [
    [5.114, 52.103],
    [5.114, 52.106],
    [5.118, 52.106],
    [5.118, 52.103],
    [5.114, 52.103],
  ],
);
const P3: MultiPolygon = {
  type: 'MultiPolygon',
  coordinates: [
    [
      [
        [5.13, 52.1],
        [5.134, 52.1],
        [5.134, 52.104],
        [5.13, 52.104],
        [5.13, 52.1],
      ],
    ],
    [
      [
        [5.136, 52.105],
        [5.14, 52.105],
        [5.138, 52.11],
        [5.136, 52.105],
      ],
    ],
  ],
};
const COVER = {
  clay: polygon([
    [5.09, 52.095],
    [5.1065, 52.095],
    [5.1035, 52.115],
    [5.09, 52.115],
    [5.09, 52.095],
  ]),
  loam: polygon([
    [5.1065, 52.095],
    [5.119, 52.095],
    [5.123, 52.103],
    [5.116, 52.115],
    [5.1035, 52.115],
    [5.1065, 52.095],
  ]),
  sand: polygon([
    [5.119, 52.095],
    [5.137, 52.095],
    [5.137, 52.115],
    [5.116, 52.115],
    [5.123, 52.103],
    [5.119, 52.095],
  ]),
  // lies on the sand
  peat: polygon([
    [5.132, 52.102],
    [5.137, 52.102],
    [5.137, 52.107],
    [5.132, 52.107],
    [5.132, 52.102],
  ]),
};

describe('shares of ground by area', () => {
  const names = Object.keys(COVER);
  const cover = coverOf(Object.values(COVER).map(planeShape));
  const sharesOf = (shape: Polygon | MultiPolygon) =>
    Object.fromEntries(cover.sharesOf(planeShape(shape), geodesicArea(shape)).map(({ index, share }) => [names[index], share]));

  it.each([
    ['a quadrilateral', P1, { clay: 0.4519809, loam: 0.5480191 }],
    ['a polygon with a hole and an inward corner', P2, { loam: 0.7785872, sand: 0.2214128 }],
    ['two parts, of which the cover leaves some out', P3, { sand: 0.6634839, peat: 0.2000007 }],
  ])('are those of the outside overlay: %s', (_name, shape, expected) => {
    const shares = sharesOf(shape);
    expect(Object.keys(shares).sort()).toEqual(Object.keys(expected).sort());
    for (const [soil, share] of Object.entries(expected)) {
      // the area of a parcel is that of geodesic edges: a few parts in a hundred thousand
      expect(shares[soil]).toBeCloseTo(share, 4);
    }
  });

  it.each([
    ['P1 on clay', P1, COVER.clay, 315299.651],
    ['P1 on loam', P1, COVER.loam, 382295.352],
    ['P2 on loam', P2, COVER.loam, 572802.7],
    ['P2 on sand', P2, COVER.sand, 162892.286],
    ['P3 on sand', P3, COVER.sand, 131519.637],
    ['P3 on peat', P3, COVER.peat, 39645.3],
  ])('in square metres to a part in a hundred thousand: %s', (_name, a, b, squareMetres) => {
    expect(sharedArea(planeShape(a), planeShape(b)) / squareMetres).toBeCloseTo(1, 5);
  });

  it('does not trip over a ring that touches itself in a point', () => {
    // two triangles meeting in (0, 0) drawn as one ring; half of each lies in x > 0.5 … by hand: the band 0.5–1 holds 3/4 of the right one
    const bowTie = polygon([
      [-1, -1],
      [0, 0],
      [1, -1],
      [1, 1],
      [0, 0],
      [-1, 1],
      [-1, -1],
    ]);
    const band = polygon([
      [0.5, -2],
      [2, -2],
      [2, 2],
      [0.5, 2],
      [0.5, -2],
    ]);
    const whole = sharedArea(planeShape(bowTie), planeShape(bowTie));
    expect(sharedArea(planeShape(bowTie), planeShape(band)) / whole).toBeCloseTo(0.375, 4);
  });
});

describe('distance from the edge of a polygon', () => {
  // pyproj 3.4.1 with PROJ 9.1.1: Geod(ellps='WGS84').inv between the point and the nearest point of the edge
  const square = planeShape(
    polygon([
      [-120.16, 45.14],
      [-120.14, 45.14],
      [-120.14, 45.16],
      [-120.16, 45.16],
      [-120.16, 45.14],
    ]),
  );
  it.each([
    ['east of an edge', [-120.136, 45.15], 314.5633],
    ['off a corner', [-120.137, 45.163], 408.4064],
    ['north of an edge', [-120.15, 45.165], 555.6748],
  ])('is the geodesic one to 0.1 %%: %s', (_name, coordinates, metres) => {
    const found = nearestOf([{ type: 'Point', coordinates }])(square, 1000);
    expect((found?.distance ?? Number.NaN) / metres).toBeCloseTo(1, 3);
  });

  it.each([
    [0, 111319.4908, 110574.2758],
    [45, 78846.8351, 111131.7774],
    [60, 55800.0016, 111412.2875],
  ])('rests on the length of a degree, here at %d°', (latitude, east, north) => {
    const unit = degreeLengths(latitude);
    expect(unit.east / east).toBeCloseTo(1, 6);
    expect(unit.north / north).toBeCloseTo(1, 6);
  });

  it('is 0 for a place inside and a line across, and null beyond the limit', () => {
    const across = {
      type: 'LineString' as const,
      coordinates: [
        [-120.2, 45.15],
        [-120.1, 45.15],
      ],
    };
    expect(nearestOf([{ type: 'Point', coordinates: [-120.15, 45.15] }])(square, 10)).toEqual({ index: 0, distance: 0 });
    expect(nearestOf([across])(square, 10)).toEqual({ index: 0, distance: 0 });
    expect(nearestOf([{ type: 'Point', coordinates: [-120.136, 45.15] }])(square, 300)).toBeNull();
    expect(nearestOf([])(square, 300)).toBeNull();
  });
});
