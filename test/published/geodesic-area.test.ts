import type { Polygon } from 'geojson';
import { describe, expect, test } from 'vitest';
import { geodesicArea, geodesicDistance, geodesicLength, geodesicRingArea } from '../../lib/geo/geodesic.ts';

/** Test set of GeographicLib (Karney), PlanimeterN: [latitude, longitude] corners, perimeter [m], signed area [m²]. */
const PLANIMETER: { name: string; points: [number, number][]; area: number; tolerance: number }[] = [
  {
    name: 'round the north pole',
    points: [
      [89, 0],
      [89, 90],
      [89, 180],
      [89, 270],
    ],
    area: 24952305678,
    tolerance: 1,
  },
  {
    name: 'round the south pole',
    points: [
      [-89, 0],
      [-89, 90],
      [-89, 180],
      [-89, 270],
    ],
    area: -24952305678,
    tolerance: 1,
  },
  {
    name: 'about the equator',
    points: [
      [0, -1],
      [-1, 0],
      [0, 1],
      [1, 0],
    ],
    area: 24619419146,
    tolerance: 1,
  },
  {
    name: 'octant',
    points: [
      [90, 0],
      [0, 0],
      [0, 90],
    ],
    area: 63758202715511,
    tolerance: 1,
  },
  {
    name: 'small triangle',
    points: [
      [2, 1],
      [1, 2],
      [3, 3],
    ],
    area: 18454562325.45119,
    tolerance: 0.5,
  },
];

describe('polygon areas of the GeographicLib test set', () => {
  for (const { name, points, area, tolerance } of PLANIMETER) {
    test(name, () => {
      const ring = points.map(([latitude, longitude]) => [longitude, latitude]);
      expect(Math.abs(geodesicRingArea(ring) - area)).toBeLessThanOrEqual(tolerance);
    });
  }
});

/** WGS 84 defining constants. Source: NIMA TR8350.2 (2000), Table 3.1. */
const A = 6378137;
const F = 1 / 298.257223563;

/** Area [m²] between two parallels over a width of longitude, in closed form. Source: Snyder (1987), Map Projections, USGS PP 1395, Eq. 3-12. */
function zoneArea(south: number, north: number, width: number): number {
  const e2 = F * (2 - F);
  const e = Math.sqrt(e2);
  const q = (latitude: number) => {
    const s = Math.sin((latitude * Math.PI) / 180);
    return (1 - e2) * (s / (1 - e2 * s * s) - (1 / (2 * e)) * Math.log((1 - e * s) / (1 + e * s)));
  };
  return ((A * A) / 2) * (q(north) - q(south)) * ((width * Math.PI) / 180);
}

/** Area [m²] of the same cell on the sphere of 6 371 008.8 m. */
function sphereArea(south: number, north: number, width: number): number {
  const sin = (latitude: number) => Math.sin((latitude * Math.PI) / 180);
  return 6371008.8 ** 2 * (sin(north) - sin(south)) * ((width * Math.PI) / 180);
}

describe('a parcel-sized cell against Snyder Eq. 3-12', () => {
  for (const latitude of [0, 30, 35, 40, 45, 50]) {
    test(`latitude ${latitude}`, () => {
      const [south, north, width] = [latitude, latitude + 0.005, 0.005];
      const cell: Polygon = {
        type: 'Polygon',
        coordinates: [
          [
            [10, south],
            [10 + width, south],
            [10 + width, north],
            [10, north],
            [10, south],
          ],
        ],
      };
      // a geodesic edge bulges poleward of its parallel by less than 3 mm here: 1e-5 of the area
      expect(Math.abs(geodesicArea(cell) / zoneArea(south, north, width) - 1)).toBeLessThan(1e-5);
    });
  }
});

/** Bias of the sphere of mean radius, in percent: known to two decimals. */
const SPHERE_BIAS: [latitude: number, percent: number][] = [
  [0, 0.45],
  [30, 0.11],
  [40, -0.11],
  [45, -0.22],
  [50, -0.34],
];

describe('what a spherical area would miss', () => {
  for (const [latitude, percent] of SPHERE_BIAS) {
    test(`sphere at latitude ${latitude} is ${percent} % off`, () => {
      const cell: Polygon = {
        type: 'Polygon',
        coordinates: [
          [
            [10, latitude],
            [10.005, latitude],
            [10.005, latitude + 0.005],
            [10, latitude + 0.005],
            [10, latitude],
          ],
        ],
      };
      const bias = (sphereArea(latitude, latitude + 0.005, 0.005) / geodesicArea(cell) - 1) * 100;
      expect(Math.abs(bias - percent)).toBeLessThan(0.01);
    });
  }
});

describe('distances', () => {
  test('a degree of the equator is a·π/180', () => {
    expect(Math.abs(geodesicDistance(0, 0, 1, 0) - (A * Math.PI) / 180)).toBeLessThan(1e-6);
  });

  test('New York JFK to London Heathrow', () => {
    // Source: GeographicLib, GeodSolve manual page, first example: 5 551 759.400 m (recalled, not re-read)
    expect(Math.abs(geodesicDistance(-73.8, 40.6, -0.5, 51.6) - 5551759.4003)).toBeLessThan(0.001);
  });

  test('the length of a bent line is the sum of its edges', () => {
    const line = {
      type: 'LineString' as const,
      coordinates: [
        [0, 0],
        [1, 0],
        [2, 0],
      ],
    };
    expect(Math.abs(geodesicLength(line) - (2 * A * Math.PI) / 180)).toBeLessThan(1e-6);
  });
});
