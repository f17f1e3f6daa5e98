/**
 * Geometry thinned for a sample on screen.
 */
import { simplify } from '@turf/turf';
import type { Geometry } from 'geojson';

/** Vertices from which a geometry is thinned. */
const THIN_FROM = 200;

/** Fewer vertices for a preview: Douglas–Peucker with a tolerance [degrees]; small geometries stay as they are. */
export function thinGeometry(geometry: Geometry, tolerance = 0.00002): Geometry {
  if (vertexCount(geometry) < THIN_FROM) return geometry;
  try {
    return simplify(geometry, { tolerance, highQuality: false });
  } catch {
    return geometry;
  }
}

function vertexCount(geometry: Geometry): number {
  if (geometry.type === 'GeometryCollection') return geometry.geometries.reduce((sum, part) => sum + vertexCount(part), 0);
  return count(geometry.coordinates);
}

function count(coordinates: unknown): number {
  if (!Array.isArray(coordinates)) return 0;
  return typeof coordinates[0] === 'number' ? 1 : coordinates.reduce((sum: number, part) => sum + count(part), 0);
}
