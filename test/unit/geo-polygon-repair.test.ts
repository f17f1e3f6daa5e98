import { describe, expect, test } from 'vitest';
import { geodesicArea } from '../../lib/geo/geodesic.ts';
import { boxOf, pointInside } from '../../lib/geo/point-inside.ts';
import { repairPolygon } from '../../lib/geo/polygon-repair.ts';
import { square } from '../support/import-context.ts';

describe('repairPolygon', () => {
  test('closes an open ring', () => {
    const repaired = repairPolygon({ type: 'Polygon', coordinates: [square(10, 45).slice(0, -1)] });
    expect(repaired.notes).toEqual(['closed']);
    expect(repaired.geometry).toEqual({ type: 'Polygon', coordinates: [square(10, 45)] });
  });

  test('turns a clockwise outline and an anticlockwise hole', () => {
    const repaired = repairPolygon({ type: 'Polygon', coordinates: [square(10, 45).reverse(), square(10.002, 45.002, 0.002)] });
    expect(repaired.notes).toEqual(['oriented']);
    expect(repaired.geometry?.coordinates[1]).toEqual([...square(10.002, 45.002, 0.002)].reverse());
  });

  test('takes a hole off the area', () => {
    const outer = geodesicArea({ type: 'Polygon', coordinates: [square(10, 45)] });
    const hole = geodesicArea({ type: 'Polygon', coordinates: [square(10.002, 45.002, 0.002)] });
    expect(repairPolygon({ type: 'Polygon', coordinates: [square(10, 45), square(10.002, 45.002, 0.002)] }).area).toBeCloseTo(
      outer - hole,
      3,
    );
  });

  test('keeps a multipolygon', () => {
    const repaired = repairPolygon({ type: 'MultiPolygon', coordinates: [[square(10, 45)], [square(11, 45)]] });
    expect(repaired.geometry?.type).toBe('MultiPolygon');
    expect(repaired.crossingRepaired).toBe(false);
  });

  test('repairs a small slip of the pen and says by how much the area changed', () => {
    const slip = [
      [0, 0],
      [0.01, 0],
      [0.01, 0.01],
      [0.0001, 0.01],
      [-0.0001, 0.0098],
      [0, 0.01],
      [0, 0],
    ];
    const repaired = repairPolygon({ type: 'Polygon', coordinates: [slip] });
    expect(repaired.crossingRepaired).toBe(true);
    expect(Math.abs(repaired.areaChange)).toBeLessThan(0.001);
  });

  test('refuses a bow tie: its signed area is zero', () => {
    const bow = [
      [0, 0],
      [0.01, 0.01],
      [0.01, 0],
      [0, 0.01],
      [0, 0],
    ];
    expect(repairPolygon({ type: 'Polygon', coordinates: [bow] })).toMatchObject({ geometry: null, fault: 'self-intersection' });
  });

  test('refuses a line drawn there and back, a pair of points, and a world-wide strip', () => {
    const fault = (ring: number[][]) => repairPolygon({ type: 'Polygon', coordinates: [ring] }).fault;
    expect(
      fault([
        [0, 0],
        [0.01, 0.01],
        [0.02, 0.02],
        [0, 0],
      ]),
    ).toBe('zero-area');
    expect(
      fault([
        [0, 0],
        [0.01, 0.01],
        [0, 0],
      ]),
    ).toBe('too-few-vertices');
    expect(
      fault([
        [177.9, -18.3],
        [-179.8, -18.3],
        [-179.8, -16.2],
        [177.9, -16.2],
        [177.9, -18.3],
      ]),
    ).toBe('antimeridian');
  });

  test('a scribble of thousands of crossings is refused at once', () => {
    const star = Array.from({ length: 2001 }, (_, k) => [
      0.01 * Math.cos((k * 2 * Math.PI * 701) / 2000),
      0.01 * Math.sin((k * 2 * Math.PI * 701) / 2000),
    ]);
    const start = performance.now();
    expect(repairPolygon({ type: 'Polygon', coordinates: [star] }).fault).toBe('self-intersection');
    expect(performance.now() - start).toBeLessThan(2000);
  });
});

describe('pointInside', () => {
  test('lies in the foot of a U, not in its gap', () => {
    const u = [
      [0, 0],
      [0.03, 0],
      [0.03, 0.1],
      [0.029, 0.1],
      [0.029, 0.001],
      [0.001, 0.001],
      [0.001, 0.1],
      [0, 0.1],
      [0, 0],
    ];
    const [x, y] = pointInside({ type: 'Polygon', coordinates: [u] });
    expect(x < 0.001 || x > 0.029 || y < 0.001).toBe(true);
  });

  test('the box of a square', () => {
    expect(boxOf({ type: 'Polygon', coordinates: [square(10, 45, 1)] })).toEqual([10, 45, 11, 46]);
  });
});
