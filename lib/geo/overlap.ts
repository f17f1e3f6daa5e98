/**
 * Polygons that lie on each other: candidates from a box index, the shared area by rows, the clear cases confirmed by overlay.
 */
import Flatbush from 'flatbush';
import type { MultiPolygon, Polygon } from 'geojson';
import { intersection } from 'polyclip-ts';
import { geodesicArea } from './geodesic.ts';
import { boxOf, crossingsAt } from './point-inside.ts';
import { planeDoubleArea } from './ring.ts';

interface Overlap {
  readonly first: number;
  readonly second: number;
  /** shared area ÷ the smaller of the two areas, 0–1 */
  readonly share: number;
}

interface OverlapOptions {
  /** share of the smaller area from which an overlap is reported */
  readonly threshold: number;
  /** most overlaps reported */
  readonly limit: number;
}

/** Rows of the first look, and of the second when the first is not clearly nothing. */
const COARSE_ROWS = 12;
const FINE_ROWS = 64;
/** Pairs confirmed by overlay; past it the share by rows stands. */
const EXACT_LIMIT = 500;

/**
 * Pairs of polygons that share more than `threshold` of the smaller one.
 *
 * @param shapes polygons in degrees @param areas their areas [m²]
 */
export function findOverlaps(shapes: readonly (Polygon | MultiPolygon)[], areas: readonly number[], options: OverlapOptions): Overlap[] {
  if (shapes.length < 2) return [];
  const boxes = shapes.map(boxOf);
  const index = new Flatbush(shapes.length);
  for (const [west, south, east, north] of boxes) index.add(west, south, east, north);
  index.finish();
  const found: Overlap[] = [];
  for (const [first, box] of boxes.entries()) {
    for (const second of index.search(...box)) {
      if (second <= first || found.length >= options.limit) continue;
      const share = sharedShare(shapes, areas, first, second, { boxes, exact: found.length < EXACT_LIMIT, threshold: options.threshold });
      if (share > options.threshold) found.push({ first, second, share });
    }
  }
  return found;
}

interface SharedOptions {
  readonly boxes: readonly (readonly [number, number, number, number])[];
  readonly exact: boolean;
  readonly threshold: number;
}

function sharedShare(
  shapes: readonly (Polygon | MultiPolygon)[],
  areas: readonly number[],
  first: number,
  second: number,
  { boxes, exact, threshold }: SharedOptions,
): number {
  const [a, b] = [boxes[first], boxes[second]];
  const box = [Math.max(a[0], b[0]), Math.max(a[1], b[1]), Math.min(a[2], b[2]), Math.min(a[3], b[3])] as const;
  if (box[2] <= box[0] || box[3] <= box[1]) return 0;
  const smaller = areas[first] <= areas[second] ? first : second;
  const [west, south, east, north] = boxes[smaller];
  const boxShare = ((box[2] - box[0]) * (box[3] - box[1])) / ((east - west) * (north - south));
  if (boxShare < threshold / 100) return 0;
  const plane = planeArea(shapes[smaller]);
  if (plane === 0 || sharedByRows(shapes[first], shapes[second], box, COARSE_ROWS) / plane < threshold / 4) return 0;
  const estimate = sharedByRows(shapes[first], shapes[second], box, FINE_ROWS) / plane;
  if (estimate < threshold / 2 || !exact) return Math.min(1, estimate);
  return exactShare(shapes[first], shapes[second], areas[smaller]) ?? Math.min(1, estimate);
}

/** Plane area [degrees²], holes taken off. */
function planeArea(shape: Polygon | MultiPolygon): number {
  const polygons = shape.type === 'Polygon' ? [shape.coordinates] : shape.coordinates;
  const parts = polygons.map(([outer, ...holes]) =>
    holes.reduce((sum, hole) => sum - Math.abs(planeDoubleArea(hole)), Math.abs(planeDoubleArea(outer))),
  );
  return parts.reduce((sum, part) => sum + part, 0) / 2;
}

/** Shared plane area [degrees²] by the midpoint rule over rows of the box. */
function sharedByRows(
  a: Polygon | MultiPolygon,
  b: Polygon | MultiPolygon,
  box: readonly [number, number, number, number],
  rows: number,
): number {
  const [, south, , north] = box;
  const step = (north - south) / rows;
  let shared = 0;
  for (let row = 0; row < rows; row++) {
    const y = south + (row + 0.5) * step;
    shared += commonLength(rowCrossings(a, y), rowCrossings(b, y)) * step;
  }
  return shared;
}

function rowCrossings(shape: Polygon | MultiPolygon, y: number): number[] {
  const xs: number[] = [];
  const polygons = shape.type === 'Polygon' ? [shape.coordinates] : shape.coordinates;
  for (const rings of polygons) for (const ring of rings) xs.push(...crossingsAt(ring, y));
  return xs.sort((p, q) => p - q);
}

/** Length that both sets of intervals cover; ends stand in pairs, sorted. */
function commonLength(a: readonly number[], b: readonly number[]): number {
  let length = 0;
  let i = 0;
  let j = 0;
  while (i + 1 < a.length && j + 1 < b.length) {
    const low = Math.max(a[i], b[j]);
    const high = Math.min(a[i + 1], b[j + 1]);
    if (high > low) length += high - low;
    if (a[i + 1] < b[j + 1]) i += 2;
    else j += 2;
  }
  return length;
}

function exactShare(a: Polygon | MultiPolygon, b: Polygon | MultiPolygon, smallerArea: number): number | null {
  try {
    const shared = intersection(...([a.coordinates, b.coordinates] as unknown as Parameters<typeof intersection>));
    return shared.length === 0
      ? 0
      : geodesicArea({ type: 'MultiPolygon', coordinates: shared as MultiPolygon['coordinates'] }) / smallerArea;
  } catch {
    return null;
  }
}
