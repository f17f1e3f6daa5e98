/**
 * A point that stands for a polygon, and the box around it.
 */
import { bbox, booleanPointInPolygon, centerOfMass, pointOnFeature } from '@turf/turf';
import type { Geometry, MultiPolygon, Polygon, Position } from 'geojson';

/**
 * The centre of mass when it lies inside, else a point on the polygon.
 *
 * @returns [longitude, latitude] in degrees
 */
export function pointInside(shape: Polygon | MultiPolygon): [number, number] {
  const centre = centerOfMass(shape).geometry.coordinates;
  if (booleanPointInPolygon(centre, shape)) return [centre[0], centre[1]];
  const middle = insideOnRow(shape);
  if (middle) return middle;
  const [x, y] = pointOnFeature(shape).geometry.coordinates;
  return [x, y];
}

/** Middle of the longest inside stretch on the row halfway up the box. */
function insideOnRow(shape: Polygon | MultiPolygon): [number, number] | null {
  const [, south, , north] = bbox(shape);
  const y = south + (north - south) * 0.5078125;
  const polygons = shape.type === 'Polygon' ? [shape.coordinates] : shape.coordinates;
  const crossings = polygons
    .flat()
    .flatMap((ring) => crossingsAt(ring, y))
    .sort((a, b) => a - b);
  let best: { x: number; length: number } | null = null;
  for (let i = 0; i + 1 < crossings.length; i += 2) {
    const length = crossings[i + 1] - crossings[i];
    if (!best || length > best.length) best = { x: (crossings[i] + crossings[i + 1]) / 2, length };
  }
  return best ? [best.x, y] : null;
}

/** Where a ring crosses the row `y`, unsorted. */
export function crossingsAt(ring: readonly Position[], y: number): number[] {
  const xs: number[] = [];
  for (let i = 0, j = ring.length - 1; i < ring.length; j = i++) {
    const [xi, yi] = ring[i];
    const [xj, yj] = ring[j];
    if (yi > y !== yj > y) xs.push(xi + ((y - yi) / (yj - yi)) * (xj - xi));
  }
  return xs;
}

/** Bounding box [west, south, east, north] of a geometry. */
export function boxOf(geometry: Geometry): [number, number, number, number] {
  if (geometry.type === 'GeometryCollection') {
    const [west, south, east, north] = bbox(geometry);
    return [west, south, east, north];
  }
  const box: [number, number, number, number] = [Infinity, Infinity, -Infinity, -Infinity];
  widen(box, geometry.coordinates);
  return box;
}

function widen(box: [number, number, number, number], coordinates: Position | Position[] | Position[][] | Position[][][]): void {
  const [x, y] = coordinates;
  if (typeof x === 'number' && typeof y === 'number') {
    if (x < box[0]) box[0] = x;
    if (y < box[1]) box[1] = y;
    if (x > box[2]) box[2] = x;
    if (y > box[3]) box[3] = y;
  } else for (const part of coordinates) widen(box, part as Position[]);
}
