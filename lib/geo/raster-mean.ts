/**
 * Which cells of a raster lie in a polygon: those whose centre does.
 */
import type { MultiPolygon, Polygon, Position } from 'geojson';

/** A place in a raster: column and row as fractions, with the centre of the first cell at (0, 0). */
export type ToCell = (longitude: number, latitude: number) => readonly [column: number, row: number];

/** A polygon in the cells of a raster. `rows` and `columns` are first and last whose centre can lie inside; empty when the last is below the first. */
export interface CellShape {
  readonly rings: readonly Float64Array[];
  readonly rowFrom: number;
  readonly rowTo: number;
  readonly columnFrom: number;
  readonly columnTo: number;
}

/**
 * A polygon brought to the cells of a raster, vertex by vertex.
 *
 * @param shape degrees
 * @throws never; vertices that the projection cannot take make an empty shape
 */
export function cellShape(shape: Polygon | MultiPolygon, toCell: ToCell): CellShape {
  const polygons = shape.type === 'Polygon' ? [shape.coordinates] : shape.coordinates;
  const rings = polygons.flat().map((ring) => cellRing(ring, toCell));
  let [left, right, top, bottom] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
  for (const ring of rings) {
    for (let i = 0; i < ring.length; i += 2) {
      left = Math.min(left, ring[i]);
      right = Math.max(right, ring[i]);
      top = Math.min(top, ring[i + 1]);
      bottom = Math.max(bottom, ring[i + 1]);
    }
  }
  const whole = Number.isFinite(left + right + top + bottom);
  if (!whole) return { rings: [], rowFrom: 0, rowTo: -1, columnFrom: 0, columnTo: -1 };
  return {
    rings,
    rowFrom: Math.ceil(top),
    rowTo: Math.floor(bottom),
    columnFrom: Math.ceil(left),
    columnTo: Math.floor(right),
  };
}

function cellRing(ring: readonly Position[], toCell: ToCell): Float64Array {
  const cells = new Float64Array(ring.length * 2);
  for (const [i, [longitude, latitude]] of ring.entries()) cells.set(toCell(longitude, latitude), i * 2);
  return cells;
}

/**
 * Runs of columns whose cell centres lie inside the polygon on one row, by the even-odd rule: [first, last], in order.
 *
 * @example insideRuns({ rings: [Float64Array.of(-0.5, -0.5, 2.5, -0.5, 2.5, 1.5, -0.5, 1.5, -0.5, -0.5)], rowFrom: 0, rowTo: 1, columnFrom: 0, columnTo: 2 }, 0) // [[0, 2]]
 */
export function insideRuns({ rings }: CellShape, row: number): [number, number][] {
  const crossings: number[] = [];
  for (const ring of rings) {
    for (let i = 0; i + 3 < ring.length; i += 2) {
      const [x0, y0, x1, y1] = [ring[i], ring[i + 1], ring[i + 2], ring[i + 3]];
      if (y0 > row === y1 > row) continue;
      crossings.push(x0 + ((row - y0) / (y1 - y0)) * (x1 - x0));
    }
  }
  crossings.sort((a, b) => a - b);
  const runs: [number, number][] = [];
  for (let i = 0; i + 1 < crossings.length; i += 2) {
    // adding zero turns −0 into 0
    const run: [number, number] = [Math.ceil(crossings[i]) + 0, Math.ceil(crossings[i + 1]) - 1];
    if (run[1] >= run[0]) runs.push(run);
  }
  return runs;
}
