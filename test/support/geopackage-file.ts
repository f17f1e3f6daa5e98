/** A GeoPackage made for a test, as the encoding standard (OGC 12-128) asks, with as much of it as a reader looks at. */
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import sqlite from 'node-sqlite3-wasm';
import type { ImportFile } from '../../lib/files/reading.ts';

interface PackageLayer {
  readonly name: string;
  readonly type: string;
  readonly srs?: number;
  /** geometry blobs; null for a row without geometry */
  readonly rows: readonly (Uint8Array | null)[];
}

/** @param statements further SQL, run last */
export function geoPackage(layers: readonly PackageLayer[], statements: readonly string[] = []): ImportFile {
  const folder = mkdtempSync(join(tmpdir(), 'test-geopackage-'));
  const path = join(folder, 'made.gpkg');
  const database = new sqlite.Database(path);
  try {
    database.exec(`CREATE TABLE gpkg_spatial_ref_sys (srs_name TEXT, srs_id INTEGER PRIMARY KEY, organization TEXT, organization_coordsys_id INTEGER, definition TEXT);
      INSERT INTO gpkg_spatial_ref_sys VALUES ('WGS 84', 4326, 'EPSG', 4326, ''), ('RD New', 28992, 'EPSG', 28992, ''), ('undefined', -1, 'NONE', -1, 'undefined');
      CREATE TABLE gpkg_contents (table_name TEXT PRIMARY KEY, data_type TEXT, min_x REAL, min_y REAL, max_x REAL, max_y REAL, srs_id INTEGER);
      CREATE TABLE gpkg_geometry_columns (table_name TEXT, column_name TEXT, geometry_type_name TEXT, srs_id INTEGER, z INTEGER, m INTEGER);`);
    for (const { name, type, srs = 4326, rows } of layers) {
      const quoted = `"${name.replaceAll('"', '""')}"`;
      database.exec(`CREATE TABLE ${quoted} (fid INTEGER PRIMARY KEY, shape BLOB, label TEXT)`);
      database.run("INSERT INTO gpkg_contents VALUES (?, 'features', NULL, NULL, NULL, NULL, ?)", [name, srs]);
      database.run("INSERT INTO gpkg_geometry_columns VALUES (?, 'shape', ?, ?, 0, 0)", [name, type, srs]);
      for (const [index, row] of rows.entries())
        database.run(`INSERT INTO ${quoted} (shape, label) VALUES (?, ?)`, [row, `row ${index + 1}`]);
    }
    for (const statement of statements) database.exec(statement);
    database.close();
    return { name: 'made.gpkg', bytes: new Uint8Array(readFileSync(path)) };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

interface BlobOptions {
  readonly envelope?: boolean;
  readonly empty?: boolean;
  readonly big?: boolean;
  /** adds a height of 7 to each position */
  readonly heights?: boolean;
}

/** Geometry blob of a polygon of one ring. */
export function polygonBlob(ring: readonly (readonly number[])[], { envelope, empty, big, heights }: BlobOptions = {}): Uint8Array {
  const header = Buffer.alloc(8 + (envelope ? 32 : 0));
  header.write('GP', 'latin1');
  header.writeUInt8((envelope ? 2 : 0) | 1 | (empty ? 16 : 0), 3);
  header.writeInt32LE(4326, 4);
  const dimensions = heights ? 3 : 2;
  const body = Buffer.alloc(13 + ring.length * dimensions * 8);
  const view = new DataView(body.buffer, body.byteOffset, body.byteLength);
  view.setUint8(0, big ? 0 : 1);
  view.setUint32(1, heights ? 1003 : 3, !big);
  view.setUint32(5, 1, !big);
  view.setUint32(9, ring.length, !big);
  ring.forEach((position, k) => {
    [...position, ...(heights ? [7] : [])].forEach((value, j) => {
      view.setFloat64(13 + (k * dimensions + j) * 8, value, !big);
    });
  });
  return new Uint8Array(Buffer.concat([header, body]));
}
