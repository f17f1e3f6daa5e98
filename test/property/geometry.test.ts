import fc from 'fast-check';
import type { Position } from 'geojson';
import { describe, expect, test } from 'vitest';
import { mulberry32 } from '../../lib/base/random.ts';
import { geodesicArea } from '../../lib/geo/geodesic.ts';
import { findOverlaps } from '../../lib/geo/overlap.ts';
import { pointInside } from '../../lib/geo/point-inside.ts';
import { repairPolygon } from '../../lib/geo/polygon-repair.ts';
import { crossingCount } from '../../lib/geo/ring.ts';

const RUNS = { seed: 20240501, numRuns: 150 };

/** Star-shaped ring about a centre: never crosses itself. Closed, anticlockwise. */
function starRing(): fc.Arbitrary<Position[]> {
  const centre = fc.tuple(fc.double({ min: -170, max: 170, noNaN: true }), fc.double({ min: -60, max: 60, noNaN: true }));
  const radii = fc.array(fc.double({ min: 0.002, max: 0.01, noNaN: true }), { minLength: 5, maxLength: 40 });
  return fc.tuple(centre, radii).map(([[x, y], lengths]) => {
    const ring = lengths.map((r, i): Position => {
      const angle = (2 * Math.PI * i) / lengths.length;
      return [x + r * Math.cos(angle), y + r * Math.sin(angle)];
    });
    return [...ring, [...ring[0]]];
  });
}

describe('repair of a sound polygon', () => {
  test('leaves its corners and its area alone', () => {
    fc.assert(
      fc.property(starRing(), (ring) => {
        const repaired = repairPolygon({ type: 'Polygon', coordinates: [ring] });
        expect(repaired.fault).toBeNull();
        expect(repaired.notes).toEqual([]);
        expect(repaired.geometry).toEqual({ type: 'Polygon', coordinates: [ring] });
      }),
      RUNS,
    );
  });

  test('direction, start, repeated corners and an open end do not change the area', () => {
    fc.assert(
      fc.property(starRing(), fc.nat(), fc.boolean(), (ring, shift, reverse) => {
        const open = ring.slice(0, -1);
        const at = shift % open.length;
        const turned = [...open.slice(at), ...open.slice(0, at)];
        if (reverse) turned.reverse();
        const messy = turned.flatMap((position) => [position, [...position, 12]]);
        const area = geodesicArea({ type: 'Polygon', coordinates: [ring] });
        const repaired = repairPolygon({ type: 'Polygon', coordinates: [messy] });
        expect(Math.abs(repaired.area / area - 1)).toBeLessThan(1e-9);
      }),
      RUNS,
    );
  });

  test('the inside point lies inside by the winding number', () => {
    fc.assert(
      fc.property(starRing(), (ring) => {
        const point = pointInside({ type: 'Polygon', coordinates: [ring] });
        expect(Math.round(winding(ring, point))).toBe(1);
      }),
      RUNS,
    );
  });
});

/** Turns of the ring about a point, by summed angles. */
function winding(ring: readonly Position[], [x, y]: Position): number {
  let turns = 0;
  for (let i = 1; i < ring.length; i++) {
    const a = Math.atan2(ring[i - 1][1] - y, ring[i - 1][0] - x);
    const b = Math.atan2(ring[i][1] - y, ring[i][0] - x);
    turns += (((b - a + 3 * Math.PI) % (2 * Math.PI)) - Math.PI) / (2 * Math.PI);
  }
  return turns;
}

describe('crossings', () => {
  test('a star-shaped ring has none', () => {
    fc.assert(
      fc.property(starRing(), (ring) => {
        expect(crossingCount([ring], 10)).toBe(0);
      }),
      RUNS,
    );
  });

  test('a regular polygon with two neighbouring corners exchanged has some', () => {
    fc.assert(
      fc.property(fc.integer({ min: 4, max: 100 }), fc.nat(), (corners, at) => {
        const open = Array.from(
          { length: corners },
          (_, i): Position => [Math.cos((2 * Math.PI * i) / corners), Math.sin((2 * Math.PI * i) / corners)],
        );
        const [i, j] = [at % corners, (at + 1) % corners];
        [open[i], open[j]] = [open[j], open[i]];
        expect(crossingCount([[...open, open[0]]], 10)).toBeGreaterThan(0);
      }),
      RUNS,
    );
  });

  test('the indexed count equals the plain one on any ring', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 1e6 }), (seed) => {
        const random = mulberry32(seed);
        const corners = Array.from({ length: 80 }, (): Position => [Math.floor(random() * 1e6) / 1e7, Math.floor(random() * 1e6) / 1e7]);
        const ring = [...corners, corners[0]];
        expect(crossingCount([ring], 1e6)).toBe(plainCount(ring));
      }),
      { seed: 7, numRuns: 30 },
    );
  });
});

/** Pairs of edges that cross properly, on the integer lattice, exactly. */
function plainCount(ring: readonly Position[]): number {
  const p = ring.map(([x, y]) => [Math.round(x * 1e7), Math.round(y * 1e7)]);
  const side = (a: number[], b: number[], c: number[]) => Math.sign((b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]));
  let count = 0;
  for (let i = 1; i < p.length; i++) {
    for (let j = i + 1; j < p.length; j++) {
      const [d1, d2] = [side(p[j - 1], p[j], p[i - 1]), side(p[j - 1], p[j], p[i])];
      const [d3, d4] = [side(p[i - 1], p[i], p[j - 1]), side(p[i - 1], p[i], p[j])];
      if (d1 * d2 < 0 && d3 * d4 < 0) count++;
    }
  }
  return count;
}

describe('overlaps', () => {
  test('two squares shifted by a known share overlap by that share', () => {
    fc.assert(
      fc.property(fc.double({ min: 0.05, max: 0.95, noNaN: true }), fc.double({ min: -50, max: 50, noNaN: true }), (share, latitude) => {
        const size = 0.01;
        const cell = (x: number): Position[] => [
          [x, latitude],
          [x + size, latitude],
          [x + size, latitude + size],
          [x, latitude + size],
          [x, latitude],
        ];
        const shapes = [cell(10), cell(10 + size * (1 - share))].map((ring) => ({ type: 'Polygon' as const, coordinates: [ring] }));
        const found = findOverlaps(shapes, shapes.map(geodesicArea), { threshold: 0.01, limit: 10 });
        expect(found).toHaveLength(1);
        expect(Math.abs(found[0].share - share)).toBeLessThan(1e-4);
      }),
      { seed: 3, numRuns: 40 },
    );
  });

  test('the cells of a bent grid, which share their edges, do not overlap', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 1e6 }), (seed) => {
        const random = mulberry32(seed);
        const corner = Array.from(
          { length: 36 },
          (_, k): Position => [5 + ((k % 6) + 0.3 * random()) * 0.01, 45 + (Math.floor(k / 6) + 0.3 * random()) * 0.01],
        );
        const cells = [...Array(29).keys()]
          .filter((k) => k % 6 < 5)
          .map((k) => [corner[k], corner[k + 1], corner[k + 7], corner[k + 6], corner[k]]);
        const shapes = cells.map((ring) => ({ type: 'Polygon' as const, coordinates: [ring] }));
        expect(findOverlaps(shapes, shapes.map(geodesicArea), { threshold: 0.01, limit: 10 })).toEqual([]);
      }),
      { seed: 4, numRuns: 40 },
    );
  });
});
