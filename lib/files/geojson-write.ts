/**
 * Parcels or canals with their numbers as GeoJSON.
 *
 * Source: RFC 7946: WGS 84 longitude and latitude, exterior rings counter-clockwise and holes clockwise (section 3.1.6), no `crs` member.
 */
import type { Feature, FeatureCollection, Geometry, Position } from 'geojson';

/** 7 decimals of a degree are about a centimetre; RFC 7946 section 11.2 asks for no more than is meant. */
const DECIMALS = 1e7;

export interface GeoJsonRow {
  readonly id: string;
  readonly geometry: Geometry;
  /** names carry their unit as suffix; NaN becomes null */
  readonly properties: Readonly<Record<string, string | number | null>>;
}

/** @param members further members of the collection, such as the run's name; RFC 7946 section 6.1 allows them */
export function geoJsonCollection(rows: Iterable<GeoJsonRow>, members: Readonly<Record<string, unknown>> = {}): FeatureCollection {
  return { type: 'FeatureCollection', ...members, features: Array.from(rows, geoJsonFeature) };
}

export function geoJsonFeature({ id, geometry, properties }: GeoJsonRow): Feature {
  const clean = Object.entries(properties).map(([name, value]) => [
    name,
    typeof value === 'number' && !Number.isFinite(value) ? null : value,
  ]);
  return { type: 'Feature', id, geometry: rightHanded(geometry), properties: Object.fromEntries(clean) };
}

/** Rows of a table joined with their shapes by the first column; rows without a shape are left out. */
export function* tableFeatures(
  table: { readonly columns: readonly { readonly key: string }[]; readonly rows: Iterable<readonly (string | number | null)[]> },
  shapes: ReadonlyMap<string, Geometry>,
): Generator<GeoJsonRow> {
  for (const row of table.rows) {
    const id = String(row[0]);
    const geometry = shapes.get(id);
    if (geometry) yield { id, geometry, properties: Object.fromEntries(table.columns.map((column, i) => [column.key, row[i]])) };
  }
}

/** The geometry with rings turned as RFC 7946 wants them and coordinates rounded; other kinds are only rounded. */
export function rightHanded(geometry: Geometry): Geometry {
  if (geometry.type === 'Polygon') return { type: 'Polygon', coordinates: turnRings(geometry.coordinates) };
  if (geometry.type === 'MultiPolygon') return { type: 'MultiPolygon', coordinates: geometry.coordinates.map(turnRings) };
  if (geometry.type === 'LineString') return { type: 'LineString', coordinates: geometry.coordinates.map(round) };
  if (geometry.type === 'MultiLineString')
    return { type: 'MultiLineString', coordinates: geometry.coordinates.map((line) => line.map(round)) };
  if (geometry.type === 'Point') return { type: 'Point', coordinates: round(geometry.coordinates) };
  return geometry;
}

function turnRings(rings: readonly Position[][]): Position[][] {
  return rings.map((ring, i) => {
    const turned = counterClockwise(ring) === (i === 0) ? ring : ring.toReversed();
    return turned.map(round);
  });
}

/** By the sign of the shoelace sum. */
function counterClockwise(ring: readonly Position[]): boolean {
  let twice = 0;
  for (let i = 0; i + 1 < ring.length; i++)
    twice += (ring[i][0] - ring[0][0]) * (ring[i + 1][1] - ring[0][1]) - (ring[i + 1][0] - ring[0][0]) * (ring[i][1] - ring[0][1]);
  return twice >= 0;
}

function round(position: Position): Position {
  return [Math.round(position[0] * DECIMALS) / DECIMALS, Math.round(position[1] * DECIMALS) / DECIMALS];
}
