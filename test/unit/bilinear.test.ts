/** Weights on a lattice, reckoned by hand. */
import { describe, expect, test } from 'vitest';
import { bilinearCells, nearestCell } from '../../lib/weather/bilinear.ts';
import type { GridShape } from '../../lib/weather/variable.ts';

const grid: GridShape = { rows: 3, columns: 3, kind: 'rectilinear', x: [10, 11, 12], y: [50, 49, 48], crs: 'EPSG:4326' };

function weightsAt(shape: GridShape, x: number, y: number): Record<string, number> | null {
  const cells = bilinearCells(shape, x, y);
  return cells && Object.fromEntries(cells.map(({ row, column, weight }) => [`${row},${column}`, Math.round(weight * 1e9) / 1e9]));
}

describe('bilinear cells', () => {
  test('a quarter of the way east and six tenths south', () => {
    expect(weightsAt(grid, 10.25, 49.4)).toEqual({ '0,0': 0.3, '0,1': 0.1, '1,0': 0.45, '1,1': 0.15 });
  });
  test('the same place on an axis that rises', () => {
    expect(weightsAt({ ...grid, y: [48, 49, 50] }, 10.25, 49.4)).toEqual({ '2,0': 0.3, '2,1': 0.1, '1,0': 0.45, '1,1': 0.15 });
  });
  test('on a centre there is one cell, on an edge between two centres two', () => {
    expect(weightsAt(grid, 11, 49)).toEqual({ '1,1': 1 });
    expect(weightsAt(grid, 10.5, 48)).toEqual({ '2,0': 0.5, '2,1': 0.5 });
  });
  test('half a cell beyond the outermost centres the edge holds, further out nothing does', () => {
    expect(weightsAt(grid, 9.6, 50.4)).toEqual({ '0,0': 1 });
    expect(weightsAt(grid, 12.5, 47.5)).toEqual({ '2,2': 1 });
    expect(weightsAt(grid, 9.4, 49)).toBeNull();
    expect(weightsAt(grid, 11, 47.4)).toBeNull();
  });
  test('longitudes of the other habit, and across the seam of a grid that goes once around', () => {
    const pacific = { ...grid, x: [189, 190, 191] };
    expect(weightsAt(pacific, -170.25, 50)).toEqual({ '0,0': 0.25, '0,1': 0.75 });
    const around = { ...grid, columns: 4, x: [0, 90, 180, 270] };
    expect(weightsAt(around, -22.5, 50)).toEqual({ '0,3': 0.25, '0,0': 0.75 });
    expect(weightsAt(around, 337.5, 50)).toEqual({ '0,3': 0.25, '0,0': 0.75 });
  });
  test('a grid of one cell, and one without axes', () => {
    expect(weightsAt({ ...grid, rows: 1, columns: 1, x: [10], y: [50] }, 10.1, 50.1)).toEqual({ '0,0': 1 });
    expect(weightsAt({ ...grid, kind: 'curvilinear', x: null, y: null }, 10, 50)).toBeNull();
  });
  test('a field that is linear along both axes comes back exactly', () => {
    const field = (x: number, y: number) => 3 - 2 * x + 0.5 * y;
    const cells = bilinearCells(grid, 11.37, 48.81) ?? [];
    const value = cells.reduce((sum, { row, column, weight }) => sum + weight * field([10, 11, 12][column], [50, 49, 48][row]), 0);
    expect(value).toBeCloseTo(field(11.37, 48.81), 10);
  });
  test('the nearest cell is the heaviest', () => {
    expect(nearestCell(grid, 10.25, 49.4)).toMatchObject({ row: 1, column: 0 });
  });
});
