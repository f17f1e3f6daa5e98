/**
 * What a Parquet file says about its geometry: the "geo" metadata of GeoParquet 1 and 2, and the geometry type of Parquet itself.
 *
 * Source: OGC GeoParquet 1.1 specification; Apache Parquet format, logical types GEOMETRY and GEOGRAPHY.
 */
import type { FileMetaData } from 'hyparquet';
import type { FindingList } from './finding-list.ts';
import type { ImportFile } from './reading.ts';
import { refusal, WGS84_NAME } from './vector-source.ts';

export interface GeometryColumn {
  readonly name: string;
  /** WKB, or one of the nested coordinate encodings: point, linestring, polygon, multipoint, multilinestring, multipolygon */
  readonly encoding: string;
  /** null where the file says that it is unknown */
  readonly crs: string | null;
  readonly box: readonly [number, number, number, number] | null;
  /** types stated, e.g. "Polygon", "Polygon Z"; empty where any may occur */
  readonly types: readonly string[];
  /** columns that only hold the boxes of the geometries */
  readonly boxColumns: readonly string[];
}

type Json = Readonly<Record<string, unknown>>;

const VERSIONS = /^[12]\.\d/;
const ENCODINGS = ['WKB', 'point', 'linestring', 'polygon', 'multipoint', 'multilinestring', 'multipolygon'];
const ADVICE = 'Export it again with current software, or as GeoPackage.';

/** The geometry column to read. @throws {Refused} when there is none, or the metadata contradict themselves */
export function geometryColumn(metadata: FileMetaData, file: ImportFile, findings: FindingList): GeometryColumn {
  const bad = (message: string, limit?: string, advice = ADVICE) =>
    refusal(file.name, { code: 'geoparquet-metadata', message, limit, advice });
  const warn = (code: string, message: string) => findings.warn({ code, message, file: file.name, advice: 'Look at the map.' });
  const geo = geoOf(metadata);
  const native = nativeColumns(metadata);
  if (geo === null) {
    const [name] = native.keys();
    if (name === undefined) throw bad('The file is Parquet, but says of no column that it holds geometry.');
    warn('geo-metadata-missing', `The file has no GeoParquet metadata; column "${name}" is of Parquet's geometry type and is read.`);
    return { name, encoding: 'WKB', crs: native.get(name) ?? WGS84_NAME, box: null, types: [], boxColumns: [] };
  }
  if (typeof geo !== 'object') throw bad('The GeoParquet metadata are not valid JSON.');
  if (typeof geo.version !== 'string')
    warn('geo-version-missing', 'The GeoParquet metadata state no version; they are read as version 1.1.');
  else if (!VERSIONS.test(geo.version)) throw bad(`The file is GeoParquet of version ${geo.version.slice(0, 20)}.`, 'versions 1 and 2');
  const columns = isObject(geo.columns) ? geo.columns : {};
  const known = Object.keys(columns).filter((name) => isObject(columns[name]) && metadata.schema.some((element) => element.name === name));
  if (known.length === 0) throw bad('The GeoParquet metadata name no column that the file has.');
  const primary = String(geo.primary_column);
  const name = known.includes(primary) ? primary : known[0];
  if (name !== primary) warn('geo-primary-column', `The primary column "${primary.slice(0, 60)}" is not there; "${name}" is read.`);
  const column = columns[name] as Json;
  const encoding = String(column.encoding);
  if (!ENCODINGS.includes(encoding)) throw bad(`The geometry is in the encoding "${encoding.slice(0, 40)}".`, ENCODINGS.join(', '));
  if (column.edges === 'spherical')
    warn('geo-edges', 'The edges of the polygons are meant as arcs on a sphere; they are read as straight lines.');
  if (column.epoch !== undefined)
    warn('geo-epoch', `The coordinates are of the epoch ${String(column.epoch)}; the motion of plates since is not applied.`);
  const crs = crsOf(column);
  const own = native.get(name);
  if (native.has(name) && (own ?? WGS84_NAME) !== crs && !sameCode(own ?? WGS84_NAME, crs))
    throw bad(
      'The coordinate system in the GeoParquet metadata is not the one of the column itself.',
      undefined,
      'Export it again, or name the coordinate system in the options.',
    );
  return { name, encoding, crs, box: boxOf(column.bbox), types: textsOf(column.geometry_types), boxColumns: boxColumnsOf(column) };
}

/** The "geo" metadata; null when there are none, a text when they are no JSON object. */
function geoOf({ key_value_metadata }: FileMetaData): Json | string | null {
  const text = key_value_metadata?.find(({ key }) => key === 'geo')?.value;
  if (text === undefined) return null;
  try {
    const value: unknown = JSON.parse(text);
    return isObject(value) ? value : text;
  } catch {
    return text;
  }
}

/** Columns of Parquet's own geometry types, with their coordinate system where they state one. */
function nativeColumns(metadata: FileMetaData): Map<string, string | undefined> {
  const found = new Map<string, string | undefined>();
  for (const { name, logical_type } of metadata.schema) {
    if (logical_type?.type !== 'GEOMETRY' && logical_type?.type !== 'GEOGRAPHY') continue;
    const { crs } = logical_type;
    const key = /^projjson:(.*)$/.exec(crs ?? '')?.[1];
    found.set(name, key === undefined ? crs || undefined : metadata.key_value_metadata?.find((pair) => pair.key === key)?.value);
  }
  return found;
}

function crsOf(column: Json): string | null {
  if (column.crs === undefined) return WGS84_NAME;
  if (column.crs === null) return null;
  return typeof column.crs === 'string' ? column.crs : JSON.stringify(column.crs);
}

/** True when both texts state one code, or the same system in other words. */
function sameCode(one: string, other: string | null): boolean {
  const code = (text: string) =>
    /"id":\{"authority":"?(\w+)"?,"code":"?(\w+)"?\}[^{}]*\}?$/.exec(text)?.slice(1).join(':') ?? text.replace(/^srid:/i, 'EPSG:');
  const plain = (text: string) => code(text).replace(/^(EPSG:4326|OGC:CRS84h?)$/i, WGS84_NAME);
  return other !== null && plain(one) === plain(other);
}

function boxOf(value: unknown): GeometryColumn['box'] {
  if (!Array.isArray(value) || !value.every((item) => typeof item === 'number')) return null;
  if (value.length === 4) return [value[0], value[1], value[2], value[3]];
  return value.length === 6 ? [value[0], value[1], value[3], value[4]] : null;
}

function textsOf(value: unknown): string[] {
  return Array.isArray(value) ? value.filter((item) => typeof item === 'string') : [];
}

function boxColumnsOf({ covering }: Json): string[] {
  const box = isObject(covering) && isObject(covering.bbox) ? covering.bbox : {};
  return [...new Set(Object.values(box).map((path) => (Array.isArray(path) ? String(path[0]) : '')))].filter((name) => name !== '');
}

function isObject(value: unknown): value is Json {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}
