/** Laws of overlay that hold for any polygons. */
import fc from 'fast-check';
import type { Polygon } from 'geojson';
import { describe, expect, it } from 'vitest';
import { coverOf } from '../../lib/geo/area-shares.ts';
import { lineageOf } from '../../lib/geo/lineage.ts';
import { type PlaneShape, planeShape, sharedArea } from '../../lib/geo/plane-shape.ts';

const RUN = { seed: 20261201, numRuns: 200 };

/** A star about a centre: never crosses itself, seldom convex. */
const star = fc
  .record({
    x: fc.double({ min: -0.02, max: 0.02, noNaN: true }),
    y: fc.double({ min: -0.02, max: 0.02, noNaN: true }),
    radii: fc.array(fc.double({ min: 0.002, max: 0.02, noNaN: true }), { minLength: 3, maxLength: 12 }),
  })
  .map(({ x, y, radii }): Polygon => {
    const ring = radii.map((radius, i) => {
      const angle = (2 * Math.PI * i) / radii.length;
      return [5 + x + radius * Math.cos(angle), 52 + y + radius * Math.sin(angle)];
    });
    return { type: 'Polygon', coordinates: [[...ring, ring[0]]] };
  });

const areaOf = (shape: PlaneShape) => sharedArea(shape, shape);

describe('shares by area', () => {
  it('sum to 1 at most, whatever lies under a polygon, and are largest first', () => {
    fc.assert(
      fc.property(star, fc.array(star, { maxLength: 8 }), (one, under) => {
        const shape = planeShape(one);
        const shares = coverOf(under.map(planeShape)).sharesOf(shape, areaOf(shape));
        expect(shares.reduce((sum, { share }) => sum + share, 0)).toBeLessThanOrEqual(1 + 1e-9);
        for (const [i, { share }] of shares.entries()) expect(share).toBeLessThanOrEqual(shares[i - 1]?.share ?? 1 + 1e-9);
      }),
      RUN,
    );
  });

  it('sum to 1 where the polygons below tile the ground', () => {
    const tiles = Array.from({ length: 16 }, (_, i) => {
      const [west, south] = [4.9 + (i % 4) * 0.05, 51.9 + Math.floor(i / 4) * 0.05];
      const ring = [
        [west, south],
        [west + 0.05, south],
        [west + 0.05, south + 0.05],
        [west, south + 0.05],
        [west, south],
      ];
      return planeShape({ type: 'Polygon', coordinates: [ring] });
    });
    fc.assert(
      fc.property(star, (one) => {
        const shape = planeShape(one);
        const shared = tiles.reduce((sum, tile) => sum + sharedArea(shape, tile), 0);
        expect(shared / areaOf(shape)).toBeCloseTo(1, 9);
      }),
      RUN,
    );
  });

  it('do not ask which polygon comes first', () => {
    fc.assert(
      fc.property(star, star, (one, other) => {
        const [a, b] = [planeShape(one), planeShape(other)];
        const shared = sharedArea(a, b);
        expect(Math.abs(sharedArea(b, a) - shared)).toBeLessThanOrEqual(1e-9 * shared + 1e-6);
        expect(shared).toBeLessThanOrEqual(Math.min(areaOf(a), areaOf(b)) * (1 + 1e-9));
      }),
      RUN,
    );
  });
});

describe('lineage', () => {
  it('leaves out no parcel of either generation', () => {
    fc.assert(
      fc.property(fc.array(star, { minLength: 1, maxLength: 6 }), fc.array(star, { maxLength: 6 }), (earlier, later) => {
        const grounds = (list: readonly Polygon[]) =>
          list.map((one, i) => ({ code: `P${i}`, shape: planeShape(one), area: areaOf(planeShape(one)) }));
        const { descents, fresh } = lineageOf(grounds(earlier), grounds(later));
        expect(descents).toHaveLength(earlier.length);
        for (const { change, successors } of descents) {
          for (const { share } of successors) expect(share).toBeGreaterThan(0);
          if (change !== 'vanished') expect(successors.length).toBeGreaterThan(0);
          if (change === 'split') expect(successors.length).toBeGreaterThan(1);
        }
        const taken = new Set(descents.flatMap(({ successors }) => successors.map(({ index }) => index)));
        for (const index of later.keys()) expect(taken.has(index) || fresh.includes(index)).toBe(true);
      }),
      RUN,
    );
  });

  it('finds every parcel unchanged when nothing has changed', () => {
    const parcels = Array.from({ length: 50 }, (_, i) => {
      const [west, south] = [5 + (i % 10) * 0.01, 52 + Math.floor(i / 10) * 0.01];
      const ring = [
        [west, south],
        [west + 0.01, south],
        [west + 0.01, south + 0.01],
        [west, south + 0.01],
        [west, south],
      ];
      const shape = planeShape({ type: 'Polygon', coordinates: [ring] });
      return { code: `P${i}`, shape, area: areaOf(shape) };
    });
    const { descents, fresh } = lineageOf(parcels, parcels.toReversed());
    expect(descents.every(({ change }) => change === 'unchanged')).toBe(true);
    expect(fresh).toEqual([]);
  });
});
