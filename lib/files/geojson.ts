/**
 * GeoJSON (RFC 7946) → features whose geometry has the right types and plausible coordinates. What a feature means is for others.
 */
import type { Geometry, Position } from 'geojson';
import { type FindingList, shown } from './finding-list.ts';
import { parseJsonFile } from './json-text.ts';
import { isMissingText } from './number-cell.ts';
import type { ImportFile } from './reading.ts';

/** Most features of one file. */
const FEATURE_LIMIT = 1_000_000;

/** One feature. `geometry` is null when it is missing or broken; then `problem` says why. */
export interface RawFeature {
  /** ordinal in the file, from 1 */
  readonly row: number;
  readonly file: string;
  readonly properties: Readonly<Record<string, unknown>>;
  readonly geometry: Geometry | null;
  readonly problem: string | null;
}

interface FeatureFile {
  readonly features: RawFeature[];
  readonly encoding: string;
  readonly crs: string;
}

/** Names of the legacy `crs` member that mean WGS 84 longitude and latitude. */
const WGS84_NAMES = /(^|[:/])(CRS:?84|EPSG:+(4326|0:4326)|EPSG\/0\/4326)$|OGC:1\.3:CRS84$|EPSG::4326$/i;

type Json = Record<string, unknown>;

function isObject(value: unknown): value is Json {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}

/** Reads the features of a file; null after a file-level finding. Broken features are findings of their row. */
export function readFeatures(file: ImportFile, wanted: readonly Geometry['type'][], findings: FindingList): FeatureFile | null {
  const json = parseJsonFile(file, findings);
  if (!json) return null;
  const refuse = (code: string, message: string, advice: string): null => {
    findings.refuse({ code, message, file: file.name, advice });
    return null;
  };
  const { value } = json;
  if (!isObject(value))
    return refuse('not-geojson', 'The file is JSON but not GeoJSON: its top level is not an object.', 'Export the layer as GeoJSON.');
  const crs = crsOf(value, file, findings);
  if (crs === null) return null;
  const list = featuresOf(value);
  if (typeof list === 'string') return refuse('not-geojson', list, 'Export the layer as a FeatureCollection.');
  if (list.length === 0) return refuse('no-features', 'The file holds no features.', 'Export the layer with its features.');
  if (list.length > FEATURE_LIMIT)
    return refuse(
      'too-many-features',
      `The file holds ${list.length} features; the limit is ${FEATURE_LIMIT}.`,
      'Cut it into several files.',
    );
  return {
    features: list.map((feature, index) => rawFeature(feature, { row: index + 1, file: file.name, wanted }, findings)),
    encoding: json.encoding,
    crs,
  };
}

function featuresOf(value: Json): unknown[] | string {
  if (value.type === 'FeatureCollection')
    return Array.isArray(value.features) ? value.features : 'The FeatureCollection has no array "features".';
  if (value.type === 'Feature') return [value];
  if (typeof value.type === 'string' && 'coordinates' in value)
    return 'The file is a bare geometry without properties; features are needed.';
  if (value.type === undefined) return 'The file has no type member: it is JSON, but not a GeoJSON FeatureCollection or Feature.';
  if (typeof value.type !== 'string') return 'The type member of the file is not a text: it should say FeatureCollection or Feature.';
  return `The type "${shown(value.type)}" is not a GeoJSON FeatureCollection or Feature.`;
}

function crsOf(value: Json, file: ImportFile, findings: FindingList): string | null {
  if (value.crs === undefined || value.crs === null) return 'OGC:CRS84';
  const properties = isObject(value.crs) && isObject(value.crs.properties) ? value.crs.properties : {};
  const name = String(properties.name ?? properties.href ?? properties.code ?? 'unnamed');
  if (WGS84_NAMES.test(name.trim())) return name;
  findings.refuse({
    code: 'unsupported-crs',
    message: `The file is in the coordinate system "${shown(name)}". GeoJSON must be in WGS 84 longitude and latitude.`,
    file: file.name,
    value: shown(name),
    limit: 'OGC:CRS84 or EPSG:4326 (RFC 7946 section 4)',
    advice: 'Reproject the layer to WGS 84 (EPSG:4326) and export it again.',
  });
  return null;
}

interface Where {
  readonly row: number;
  readonly file: string;
  readonly wanted: readonly Geometry['type'][];
}

function rawFeature(feature: unknown, where: Where, findings: FindingList): RawFeature {
  const { row, file, wanted } = where;
  const properties = isObject(feature) && isObject(feature.properties) ? feature.properties : {};
  const fail = (code: string, message: string, advice: string, limit?: string): RawFeature => {
    findings.error({ code, message, file, row, limit, advice });
    return { row, file, properties, geometry: null, problem: message };
  };
  if (!isObject(feature) || feature.type !== 'Feature')
    return fail('not-a-feature', 'The entry is not a GeoJSON Feature.', 'Export the layer again.');
  if (feature.properties !== null && feature.properties !== undefined && !isObject(feature.properties))
    return fail('bad-properties', 'The properties of the feature are not an object.', 'Export the layer again.');
  const { geometry } = feature;
  if (geometry === null || geometry === undefined)
    return fail('no-geometry', 'The feature has no geometry.', 'Draw it, or delete its row.');
  if (!isObject(geometry) || typeof geometry.type !== 'string')
    return fail('bad-geometry', 'The geometry of the feature has no type.', 'Export the layer again.');
  if (!wanted.includes(geometry.type as Geometry['type']))
    return fail('wrong-geometry', `The geometry is a ${shown(geometry.type)}.`, 'Choose the right layer.', wanted.join(' or '));
  const fault = coordinateFault(geometry.coordinates, DEPTH[geometry.type]);
  if (fault) return fail(fault.code, fault.message, fault.advice, fault.limit);
  return { row, file, properties, geometry: geometry as unknown as Geometry, problem: null };
}

/** Depth of the coordinates arrays around a position. */
const DEPTH: Record<string, number> = { Point: 0, MultiPoint: 1, LineString: 1, MultiLineString: 2, Polygon: 2, MultiPolygon: 3 };

interface CoordinateFault {
  readonly code: string;
  readonly message: string;
  readonly advice: string;
  readonly limit?: string;
}

function coordinateFault(coordinates: unknown, depth: number): CoordinateFault | null {
  if (depth === 0) return positionFault(coordinates);
  if (!Array.isArray(coordinates) || coordinates.length === 0) {
    return {
      code: 'bad-coordinates',
      message: 'The coordinates are empty or not nested as the type of the geometry asks.',
      advice: 'Export the layer again.',
    };
  }
  for (const part of coordinates) {
    const fault = coordinateFault(part, depth - 1);
    if (fault) return fault;
  }
  return null;
}

function positionFault(position: unknown): CoordinateFault | null {
  const [x, y] = Array.isArray(position) ? position : [];
  if (typeof x !== 'number' || typeof y !== 'number' || !Number.isFinite(x) || !Number.isFinite(y)) {
    return {
      code: 'bad-coordinates',
      message: `"${shown(JSON.stringify(position) ?? '')}" is not a position of two numbers.`,
      advice: 'Export the layer again.',
    };
  }
  if (Math.abs(x) <= 180 && Math.abs(y) <= 90) return null;
  const projected = Math.abs(x) > 1000 || Math.abs(y) > 1000;
  return {
    code: 'coordinates-out-of-range',
    message: `Position ${x}, ${y} is not a longitude and latitude.`,
    limit: '−180 to 180, −90 to 90 degrees',
    advice: projected
      ? 'The coordinates look projected (metres or feet): reproject the layer to WGS 84 (EPSG:4326).'
      : 'Correct the position; longitude stands before latitude.',
  };
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
