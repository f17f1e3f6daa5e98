/**
 * Features as the readers of parcels, canals and areas take them: a geometry of the right type with plausible coordinates, or the reason why
 * there is none; and the values of their properties.
 */
import type { Geometry, Position } from 'geojson';
import type { Finding } from '../base/errors.ts';
import { shown } from './finding-list.ts';
import { isMissingText } from './number-cell.ts';

/** One feature. `geometry` is null when it is missing or broken; then `problem` says why. */
export interface RawFeature {
  /** ordinal in the file, from 1 */
  readonly row: number;
  readonly file: string;
  readonly properties: Readonly<Record<string, unknown>>;
  /** WGS 84, longitude first; heights may remain */
  readonly geometry: Geometry | null;
  readonly problem: string | null;
}

/** What is wrong with a feature, before it is known which one it is. */
export type FeatureFault = Pick<Finding, 'code' | 'message' | 'advice' | 'limit'>;

/** Depth of the coordinate arrays around a position. */
const DEPTH: Readonly<Record<string, number>> = {
  Point: 0,
  MultiPoint: 1,
  LineString: 1,
  MultiLineString: 2,
  Polygon: 2,
  MultiPolygon: 3,
};

/** What is wrong with the nesting or the numbers of a geometry's coordinates; null when nothing is. Ranges are not looked at. */
export function geometryFault(geometry: unknown): FeatureFault | null {
  const { type, coordinates } = geometry as { type?: unknown; coordinates?: unknown };
  if (typeof type !== 'string')
    return { code: 'bad-geometry', message: 'The geometry of the feature has no type.', advice: 'Export the layer again.' };
  const depth = DEPTH[type];
  return depth === undefined ? null : nestingFault(coordinates, depth);
}

function nestingFault(coordinates: unknown, depth: number): FeatureFault | null {
  if (depth === 0) return numberFault(coordinates);
  if (!Array.isArray(coordinates) || coordinates.length === 0) {
    return {
      code: 'bad-coordinates',
      message: 'The coordinates are empty or not nested as the type of the geometry asks.',
      advice: 'Export the layer again.',
    };
  }
  for (const part of coordinates) {
    const fault = nestingFault(part, depth - 1);
    if (fault) return fault;
  }
  return null;
}

function numberFault(position: unknown): FeatureFault | null {
  const [x, y] = Array.isArray(position) ? position : [];
  if (typeof x === 'number' && typeof y === 'number' && Number.isFinite(x) && Number.isFinite(y)) return null;
  return {
    code: 'bad-coordinates',
    message: `"${shown(JSON.stringify(position) ?? '')}" is not a position of two numbers.`,
    advice: 'Export the layer again.',
  };
}

/** The first position of a sound geometry that is no longitude and latitude; null when there is none. */
export function rangeFault(geometry: Geometry): FeatureFault | null {
  if (geometry.type === 'GeometryCollection') return null;
  const position = outside(geometry.coordinates, DEPTH[geometry.type]);
  if (!position) return null;
  const [x, y] = position;
  const projected = Math.abs(x) > 1000 || Math.abs(y) > 1000;
  return {
    code: 'coordinates-out-of-range',
    message: `Position ${x}, ${y} is not a longitude and latitude.`,
    limit: '−180 to 180, −90 to 90 degrees',
    advice: projected
      ? 'The coordinates look projected (metres or feet): name the coordinate system of the file in the options, or reproject the layer to WGS 84 (EPSG:4326).'
      : 'Correct the position; longitude stands before latitude.',
  };
}

function outside(coordinates: unknown, depth: number): Position | null {
  if (depth === 0) {
    const [x, y] = coordinates as Position;
    return Math.abs(x) <= 180 && Math.abs(y) <= 90 ? null : [x, y];
  }
  for (const part of coordinates as unknown[]) {
    const position = outside(part, depth - 1);
    if (position) return position;
  }
  return null;
}

/** True when any position carries a height. */
export function hasHeight(lines: readonly (readonly Position[])[]): boolean {
  return lines.some((line) => line.some((position) => position.length > 2));
}

/** Property as trimmed text; blank, missing and all-asterisk values are null. */
export function propertyText(value: unknown): string | null {
  if (typeof value === 'number') return Number.isFinite(value) ? String(value) : null;
  if (typeof value === 'boolean') return String(value);
  if (typeof value !== 'string') return null;
  const text = value.trim();
  return isMissingText(text) || /^\*+$/.test(text) ? null : text;
}

/** Names of all properties of the features, in order of first appearance, at most `limit`. */
export function propertyNames(features: readonly RawFeature[], limit: number): string[] {
  const names = new Set<string>();
  for (const { properties } of features) {
    for (const name of Object.keys(properties)) if (names.size < limit) names.add(name);
  }
  return [...names];
}
