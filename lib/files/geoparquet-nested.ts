/**
 * Geometry as nested lists of coordinate structs, the native encodings of GeoParquet 1.1 → GeoJSON.
 */
import type { Geometry, Position } from 'geojson';

type Point = Readonly<{ x: unknown; y: unknown }>;

const TYPES: Readonly<Record<string, Geometry['type']>> = {
  point: 'Point',
  linestring: 'LineString',
  polygon: 'Polygon',
  multipoint: 'MultiPoint',
  multilinestring: 'MultiLineString',
  multipolygon: 'MultiPolygon',
};

/** The geometry of a value of one of the native encodings. @throws {Error} when it is not nested as the encoding asks */
export function nestedGeometry(value: unknown, encoding: string): Geometry {
  const type = TYPES[encoding];
  if (type === undefined) throw new Error('it is not bytes, as WKB must be');
  return { type, coordinates: coordinatesOf(value) } as Geometry;
}

function coordinatesOf(value: unknown): Position | unknown[] {
  if (Array.isArray(value)) return value.map(coordinatesOf);
  const { x, y } = (value ?? {}) as Point;
  if (typeof x !== 'number' || typeof y !== 'number') throw new Error('a position has no x and y');
  return [x, y];
}
