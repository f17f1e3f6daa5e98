/**
 * Lengths and areas on the WGS 84 ellipsoid.
 *
 * Source: C. F. F. Karney (2013), "Algorithms for geodesics", Journal of Geodesy 87, 43–55, as implemented in GeographicLib.
 */

import geodesic from 'geographiclib-geodesic';
import type { LineString, MultiLineString, MultiPolygon, Polygon, Position } from 'geojson';

const WGS84 = geodesic.Geodesic.WGS84;

/**
 * Shortest distance between two points.
 *
 * @param longitude1 [degrees] @param latitude1 [degrees] @param longitude2 [degrees] @param latitude2 [degrees]
 * @returns [m]; NaN in gives NaN out
 * @example geodesicDistance(0, 0, 1, 0) // 111319.491
 * Source: Karney (2013), the inverse problem.
 */
export function geodesicDistance(longitude1: number, latitude1: number, longitude2: number, latitude2: number): number {
  return WGS84.Inverse(latitude1, longitude1, latitude2, longitude2, geodesic.Geodesic.DISTANCE).s12 ?? Number.NaN;
}

/**
 * Length along a line, its parts added.
 *
 * @returns [m]
 * Source: Karney (2013), the inverse problem per segment.
 */
export function geodesicLength(line: LineString | MultiLineString): number {
  const parts = line.type === 'LineString' ? [line.coordinates] : line.coordinates;
  let length = 0;
  for (const part of parts)
    for (let i = 1; i < part.length; i++) length += geodesicDistance(part[i - 1][0], part[i - 1][1], part[i][0], part[i][1]);
  return length;
}

/**
 * Signed area of one ring whose edges are geodesics: positive anticlockwise. A closing vertex may be present or not.
 *
 * @returns [m²]
 * Source: Karney (2013) section 6.
 */
export function geodesicRingArea(ring: readonly Position[]): number {
  const polygon = WGS84.Polygon(false);
  const last = ring.length - 1;
  const closed = last > 0 && ring[0][0] === ring[last][0] && ring[0][1] === ring[last][1];
  for (let i = 0; i < ring.length - (closed ? 1 : 0); i++) polygon.AddPoint(ring[i][1], ring[i][0]);
  return polygon.Compute(false, true).area ?? Number.NaN;
}

/**
 * Area of a polygon, holes taken off; the orientation of its rings does not matter.
 *
 * @returns [m²]
 * @example geodesicArea({ type: 'Polygon', coordinates: [[[0, 0], [0.01, 0], [0.01, 0.01], [0, 0.01], [0, 0]]] }) // 1230907.2
 * Source: Karney (2013) section 6.
 */
export function geodesicArea(shape: Polygon | MultiPolygon): number {
  const polygons = shape.type === 'Polygon' ? [shape.coordinates] : shape.coordinates;
  let area = 0;
  for (const [outer, ...holes] of polygons) {
    area += Math.abs(geodesicRingArea(outer));
    for (const hole of holes) area -= Math.abs(geodesicRingArea(hole));
  }
  return area;
}
