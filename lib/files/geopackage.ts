/**
 * GeoPackage → a layer. The database is opened where it lies, read-only; rows are taken one by one.
 *
 * Source: OGC 12-128r19, GeoPackage Encoding Standard: tables of contents and geometry columns (1.1.3, 2.1.5), binary header (2.1.3).
 */
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import sqlite from 'node-sqlite3-wasm';
import type { FindingList } from './finding-list.ts';
import type { ImportFile, UnderstoodLayer } from './reading.ts';
import { tellLayer } from './vector-archive.ts';
import { chooseLayer, FEATURE_LIMIT, type LayerWish, refusal, type SourceFeature, type VectorSource } from './vector-source.ts';
import { geometryOfWkb, isEmptyGeometry } from './wkb.ts';

type Database = InstanceType<typeof sqlite.Database>;
type Row = Readonly<Record<string, unknown>>;

interface PackageLayer extends UnderstoodLayer {
  readonly column: string;
  readonly srs: number;
  readonly box: readonly [number, number, number, number] | null;
}

/** Lengths of the envelope in a geometry's header by its code [bytes]. */
const ENVELOPE_BYTES = [0, 32, 48, 48, 64];

/** Opens the layer asked for, or the first that has features. @throws {Refused} when the database is damaged or has no layer */
export function openGeoPackage(file: ImportFile, options: LayerWish, findings: FindingList): VectorSource {
  const held = onDisk(file);
  let database: Database | null = null;
  const close = () => {
    database?.close();
    database = null;
    held.release();
  };
  try {
    database = new sqlite.Database(held.path, { readOnly: true, fileMustExist: true });
    const layers = layersOf(database, file);
    const layer = chooseLayer(file.name, layers, options);
    tellLayer(file, layers, layer.name, options, findings);
    const count = layer.featureCount ?? 0;
    if (count > FEATURE_LIMIT) throw damaged(file, `layer "${layer.name}" holds ${count} features, more than ${FEATURE_LIMIT}`);
    return {
      format: 'geopackage',
      layers: layers.map(({ name, featureCount, geometry }) => ({ name, featureCount, geometry })),
      layer: layer.name,
      crs: crsOf(database, layer.srs),
      box: layer.box,
      encoding: null,
      featureCount: count,
      features: rowsOf(database, layer),
      close,
    };
  } catch (error) {
    close();
    throw isDatabaseError(error) ? damaged(file, (error as Error).message, error) : error;
  }
}

function isDatabaseError(error: unknown): boolean {
  return error instanceof sqlite.SQLite3Error || (error instanceof Error && error.constructor.name === 'SQLite3Error');
}

function damaged(file: ImportFile, why: string, cause?: unknown) {
  return refusal(
    file.name,
    {
      code: 'geopackage-unreadable',
      message: `The GeoPackage cannot be read: ${why}.`,
      advice: 'It is damaged or incomplete: export it again.',
    },
    cause,
  );
}

/** The path of the file; one that is only in memory is laid into a folder of its own for as long as it is read. */
function onDisk(file: ImportFile): { path: string; release(): void } {
  if (file.path !== undefined) return { path: file.path, release: () => undefined };
  const folder = mkdtempSync(join(tmpdir(), 'geopackage-'));
  const path = join(folder, 'layer.gpkg');
  writeFileSync(path, file.bytes);
  return { path, release: () => rmSync(folder, { recursive: true, force: true }) };
}

function layersOf(database: Database, file: ImportFile): PackageLayer[] {
  const tables = new Set(
    database.all("SELECT name FROM sqlite_master WHERE type IN ('table', 'view')").map((row) => String(row.name).toLowerCase()),
  );
  if (!tables.has('gpkg_contents') || !tables.has('gpkg_geometry_columns')) {
    throw refusal(file.name, {
      code: 'not-a-geopackage',
      message: 'The file is a SQLite database, but no GeoPackage with layers of features.',
      advice: 'Export the layer as GeoPackage.',
    });
  }
  const rows =
    database.all(`SELECT g.table_name AS name, g.column_name AS geometry_column, g.geometry_type_name AS geometry_type, g.srs_id AS srs,
    c.min_x, c.min_y, c.max_x, c.max_y FROM gpkg_geometry_columns g JOIN gpkg_contents c ON lower(c.table_name) = lower(g.table_name)
    WHERE c.data_type = 'features' ORDER BY c.rowid`) as Row[];
  const layers = rows.filter(({ name }) => tables.has(String(name).toLowerCase())).map((row) => layerOf(database, row));
  if (layers.length === 0) {
    throw refusal(file.name, {
      code: 'no-layer',
      message: 'The GeoPackage has no layer of features.',
      advice: 'Export the layer with its features.',
    });
  }
  return layers;
}

function layerOf(database: Database, row: Row): PackageLayer {
  const name = String(row.name);
  const counted = database.get(`SELECT count(*) AS n FROM ${quoted(name)}`) as Row;
  const box = [row.min_x, row.min_y, row.max_x, row.max_y];
  return {
    name,
    featureCount: Number(counted.n),
    geometry: row.geometry_type === null ? null : String(row.geometry_type),
    column: String(row.geometry_column),
    srs: Number(row.srs),
    box: box.every((value) => typeof value === 'number') ? (box as unknown as PackageLayer['box']) : null,
  };
}

/** Code or definition of a system; null for the two "undefined" ones (0 and −1). */
function crsOf(database: Database, srs: number): string | null {
  if (srs === 0 || srs === -1) return null;
  const row = database.get('SELECT organization, organization_coordsys_id, definition FROM gpkg_spatial_ref_sys WHERE srs_id = ?', [
    srs,
  ]) as Row | null;
  if (!row) return `EPSG:${srs}`;
  if (String(row.organization).toUpperCase() === 'EPSG') return `EPSG:${row.organization_coordsys_id}`;
  const definition = String(row.definition ?? '');
  return definition === '' || definition === 'undefined' ? null : definition;
}

function quoted(name: string): string {
  return `"${name.replaceAll('"', '""')}"`;
}

function* rowsOf(database: Database, { name, column }: PackageLayer): Generator<SourceFeature> {
  const key = database.all(`PRAGMA table_info(${quoted(name)})`).find((info) => Number(info.pk) === 1)?.name;
  const statement = database.prepare(`SELECT * FROM ${quoted(name)}`);
  try {
    for (const row of statement.iterate()) yield featureOf(row as Row, column, typeof key === 'string' ? key : null);
  } finally {
    statement.finalize();
  }
}

function featureOf(row: Row, column: string, key: string | null): SourceFeature {
  const properties: Record<string, unknown> = {};
  let blob: unknown = null;
  for (const [name, value] of Object.entries(row)) {
    if (name.toLowerCase() === column.toLowerCase()) blob = value;
    else if (!(value instanceof Uint8Array)) properties[name] = typeof value === 'bigint' ? String(value) : value;
  }
  const id = key === null || row[key] === null ? null : String(row[key]);
  if (!(blob instanceof Uint8Array)) return { geometry: null, properties, id };
  try {
    return { geometry: geometryOfBlob(blob), properties, id };
  } catch (error) {
    const message = `The geometry cannot be read: ${(error as Error).message}.`;
    return {
      geometry: null,
      properties,
      id,
      fault: { code: 'bad-geometry', message, advice: 'Draw it again, or export the layer again.' },
    };
  }
}

/** GeoJSON geometry of a GeoPackage value: a header with an optional envelope, then WKB. Null when it is empty. */
function geometryOfBlob(blob: Uint8Array): unknown {
  if (blob.length < 8 || blob[0] !== 0x47 || blob[1] !== 0x50) throw new Error('it has no GeoPackage header');
  const flags = blob[3];
  const envelope = ENVELOPE_BYTES[(flags >> 1) & 7];
  if (envelope === undefined) throw new Error('its envelope is of an unknown kind');
  if ((flags >> 4) & 1) return null;
  const geometry = geometryOfWkb(blob.subarray(8 + envelope));
  return isEmptyGeometry(geometry) ? null : geometry;
}
