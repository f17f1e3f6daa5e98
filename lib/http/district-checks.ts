/** Checks of a district's settings that no type can say. */
import { Refused } from '../base/errors.ts';

/** @throws {Refused} when the name is not in the IANA time zone database of this server. */
export function requireTimeZone(name: string): void {
  try {
    new Intl.DateTimeFormat('en', { timeZone: name });
  } catch (cause) {
    throw new Refused(`"${name}" is not a time zone: give an IANA name such as "America/Boise"`, [], { cause });
  }
}

type Position = [number, number];

/**
 * The boundary as a geometry; a Feature gives its own.
 *
 * @returns null for none
 * @throws {Refused} when it is not a GeoJSON Polygon or MultiPolygon in longitude and latitude.
 */
export function requireBoundary(given: unknown): object | null {
  if (given === undefined || given === null) return null;
  const shape = given as { type?: unknown; geometry?: unknown; coordinates?: unknown };
  if (shape.type === 'Feature') return requireBoundary(shape.geometry);
  if (shape.type !== 'Polygon' && shape.type !== 'MultiPolygon') {
    throw new Refused('the boundary must be a GeoJSON Polygon or MultiPolygon, or a Feature with one');
  }
  const polygons = (shape.type === 'Polygon' ? [shape.coordinates] : shape.coordinates) as Position[][][];
  if (!Array.isArray(polygons) || polygons.length === 0 || !polygons.every(isPolygon)) {
    throw new Refused('the boundary’s rings must be closed and have at least four positions, longitude −180 to 180, latitude −90 to 90');
  }
  return { type: shape.type, coordinates: shape.coordinates };
}

function isPolygon(rings: unknown): boolean {
  return Array.isArray(rings) && rings.length > 0 && rings.every(isRing);
}

function isRing(ring: unknown): boolean {
  if (!Array.isArray(ring) || ring.length < 4 || !ring.every(isPosition)) return false;
  const [first, last] = [ring[0] as Position, ring[ring.length - 1] as Position];
  return first[0] === last[0] && first[1] === last[1];
}

function isPosition(position: unknown): boolean {
  return Array.isArray(position) && Math.abs(Number(position[0])) <= 180 && Math.abs(Number(position[1])) <= 90;
}
