/**
 * Features of a source → features in WGS 84: coordinates checked, brought over, checked again.
 */
import type { Geometry, Position } from 'geojson';
import type { ToWgs84 } from './crs.ts';
import { type FeatureFault, geometryFault, rangeFault } from './raw-feature.ts';
import type { VectorFeature } from './vector-file.ts';
import type { SourceFeature, VectorSource } from './vector-source.ts';

const NO_GEOMETRY: FeatureFault = { code: 'no-geometry', message: 'The feature has no geometry.', advice: 'Draw it, or delete its row.' };

/** The features of a layer, one by one; frees the source when they end, whatever ends them. */
export async function* placedFeatures(source: VectorSource, toWgs84: ToWgs84 | null): AsyncGenerator<VectorFeature> {
  let row = 0;
  try {
    for await (const feature of source.features) yield placed(feature, ++row, toWgs84);
  } finally {
    source.close?.();
  }
}

function placed({ geometry, properties, id, fault }: SourceFeature, row: number, toWgs84: ToWgs84 | null): VectorFeature {
  const failed = (reason: FeatureFault): VectorFeature => ({ row, properties, id, geometry: null, fault: reason });
  if (fault) return failed(fault);
  if (geometry === null || geometry === undefined) return failed(NO_GEOMETRY);
  const single = withoutCollection(geometry);
  const unsound = geometryFault(single);
  if (unsound) return failed(unsound);
  const sound = single as Geometry;
  const moved = toWgs84 ? moveGeometry(sound, toWgs84) : sound;
  if (moved === null) {
    return failed({
      code: 'coordinates-out-of-range',
      message: 'The coordinates lie outside the area of the coordinate system.',
      advice: 'Check that the coordinate system of the file is the one it states, or name another in the options.',
    });
  }
  const out = rangeFault(moved);
  return out ? failed(out) : { row, properties, id, geometry: moved, fault: null };
}

/** A collection of polygons, lines or points alone is the multi-geometry of its parts; any other value stays as it is. */
function withoutCollection(geometry: unknown): unknown {
  const { type, geometries } = geometry as { type?: unknown; geometries?: unknown };
  if (type !== 'GeometryCollection' || !Array.isArray(geometries) || geometries.length === 0) return geometry;
  const kind = String(geometries[0]?.type).replace(/^Multi/, '');
  if (!['Point', 'LineString', 'Polygon'].includes(kind)) return geometry;
  const parts: unknown[] = [];
  for (const part of geometries as { type?: unknown; coordinates?: unknown }[]) {
    if (part?.type === kind) parts.push(part.coordinates);
    else if (part?.type === `Multi${kind}` && Array.isArray(part.coordinates)) parts.push(...part.coordinates);
    else return geometry;
  }
  return { type: `Multi${kind}`, coordinates: parts };
}

/** The geometry with every position brought over; null when one cannot be. Heights are kept. */
function moveGeometry(geometry: Geometry, toWgs84: ToWgs84): Geometry | null {
  if (geometry.type === 'GeometryCollection') return geometry;
  const [x, y] = firstPosition(geometry.coordinates);
  if (toWgs84.outside(x, y)) return null;
  const coordinates = moved(geometry.coordinates, toWgs84);
  return coordinates === null ? null : ({ type: geometry.type, coordinates } as Geometry);
}

function firstPosition(coordinates: unknown): Position {
  const [first] = coordinates as unknown[];
  return typeof first === 'number' ? (coordinates as Position) : firstPosition(first);
}

function moved(coordinates: unknown, toWgs84: ToWgs84): unknown {
  const list = coordinates as unknown[];
  if (typeof list[0] === 'number') {
    const [x, y, ...rest] = list as Position;
    const [longitude, latitude] = toWgs84(x, y);
    return Number.isFinite(longitude) && Number.isFinite(latitude) ? [longitude, latitude, ...rest] : null;
  }
  const parts = new Array(list.length);
  for (let i = 0; i < list.length; i++) {
    parts[i] = moved(list[i], toWgs84);
    if (parts[i] === null) return null;
  }
  return parts;
}
