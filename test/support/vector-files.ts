/** Files of the vector formats for tests: read from test/data/vector, or made here byte by byte. */
import { readFileSync } from 'node:fs';
import { crc32, deflateRawSync } from 'node:zlib';
import type { Geometry } from 'geojson';
import { FindingList } from '../../lib/files/finding-list.ts';
import { type LayerFeatures, readLayerFeatures } from '../../lib/files/layer-features.ts';
import type { ImportFile, ImportOptions } from '../../lib/files/reading.ts';

const FOLDER = new URL('../data/vector/', import.meta.url);
const EVERY_TYPE: readonly Geometry['type'][] = ['Point', 'MultiPoint', 'LineString', 'MultiLineString', 'Polygon', 'MultiPolygon'];

/** A file of test/data/vector. */
export function vectorFile(name: string): ImportFile {
  return { name, bytes: new Uint8Array(readFileSync(new URL(name, FOLDER))) };
}

interface Read extends LayerFeatures {
  readonly findings: ReturnType<FindingList['list']>;
  readonly codes: string[];
  readonly fatal: boolean;
}

/** Reads files as a layer; every geometry type is wanted unless told otherwise. */
export async function readLayer(
  files: ImportFile | readonly ImportFile[],
  options: ImportOptions = {},
  wanted = EVERY_TYPE,
): Promise<Read> {
  const findings = new FindingList();
  const given = Array.isArray(files) ? files : [files as ImportFile];
  const read = await readLayerFeatures(given, wanted, options, findings);
  const list = findings.list();
  return { ...read, findings: list, codes: list.map(({ code }) => code), fatal: findings.fatal };
}

/** A ZIP archive of the members, packed. Format: PKWARE APPNOTE 6.3.9, sections 4.3.7, 4.3.12 and 4.3.16. */
export function zipOf(name: string, members: Readonly<Record<string, Uint8Array | string>>): ImportFile {
  const locals: Buffer[] = [];
  const central: Buffer[] = [];
  let offset = 0;
  for (const [member, content] of Object.entries(members)) {
    const data = Buffer.from(content as Uint8Array);
    const packed = deflateRawSync(data);
    const path = Buffer.from(member);
    const common = Buffer.alloc(26);
    common.writeUInt16LE(20, 0);
    common.writeUInt16LE(0x800, 2);
    common.writeUInt16LE(8, 4);
    common.writeUInt32LE(crc32(data), 10);
    common.writeUInt32LE(packed.length, 14);
    common.writeUInt32LE(data.length, 18);
    common.writeUInt16LE(path.length, 22);
    const local = Buffer.concat([Buffer.from('PK\x03\x04', 'latin1'), common, path, packed]);
    const tail = Buffer.alloc(14);
    tail.writeUInt32LE(offset, 10);
    central.push(Buffer.concat([Buffer.from('PK\x01\x02\x14\x00', 'latin1'), common, tail, path]));
    locals.push(local);
    offset += local.length;
  }
  const directory = Buffer.concat(central);
  const end = Buffer.alloc(22);
  end.write('PK\x05\x06', 'latin1');
  end.writeUInt16LE(central.length, 8);
  end.writeUInt16LE(central.length, 10);
  end.writeUInt32LE(directory.length, 12);
  end.writeUInt32LE(offset, 16);
  return { name, bytes: new Uint8Array(Buffer.concat([...locals, directory, end])) };
}

/** A .shp file of polygons, one ring each. Format: the published technical description of the shapefile (1998). */
export function shpOf(rings: readonly (readonly (readonly [number, number])[])[]): Uint8Array {
  const records = rings.map((ring, index) => {
    const record = Buffer.alloc(8 + 48 + 16 * ring.length);
    record.writeInt32BE(index + 1, 0);
    record.writeInt32BE((record.length - 8) / 2, 4);
    record.writeInt32LE(5, 8);
    boxOf(ring).forEach((value, k) => {
      record.writeDoubleLE(value, 12 + 8 * k);
    });
    record.writeInt32LE(1, 44);
    record.writeInt32LE(ring.length, 48);
    ring.forEach(([x, y], k) => {
      record.writeDoubleLE(x, 56 + 16 * k);
      record.writeDoubleLE(y, 64 + 16 * k);
    });
    return record;
  });
  const header = Buffer.alloc(100);
  header.writeInt32BE(9994, 0);
  header.writeInt32BE((100 + records.reduce((sum, record) => sum + record.length, 0)) / 2, 24);
  header.writeInt32LE(1000, 28);
  header.writeInt32LE(5, 32);
  boxOf(rings.flat()).forEach((value, k) => {
    header.writeDoubleLE(value, 36 + 8 * k);
  });
  return new Uint8Array(Buffer.concat([header, ...records]));
}

function boxOf(points: readonly (readonly [number, number])[]): [number, number, number, number] {
  const xs = points.map(([x]) => x);
  const ys = points.map(([, y]) => y);
  return [Math.min(...xs), Math.min(...ys), Math.max(...xs), Math.max(...ys)];
}

interface DbfColumn {
  /** name as it stands in the file */
  readonly name: Buffer | string;
  readonly type: string;
  readonly length: number;
}

/** A .dbf table; cells are bytes as they stand in the file. */
export function dbfOf(columns: readonly DbfColumn[], rows: readonly (readonly (Buffer | string)[])[], driver = 0): Uint8Array {
  const recordLength = 1 + columns.reduce((sum, { length }) => sum + length, 0);
  const header = Buffer.alloc(32 + 32 * columns.length + 1);
  header.writeUInt8(3, 0);
  header.writeUInt32LE(rows.length, 4);
  header.writeUInt16LE(header.length, 8);
  header.writeUInt16LE(recordLength, 10);
  header.writeUInt8(driver, 29);
  columns.forEach(({ name, type, length }, k) => {
    Buffer.from(name as Buffer).copy(header, 32 + 32 * k);
    header.write(type, 32 + 32 * k + 11, 'latin1');
    header.writeUInt8(length, 32 + 32 * k + 16);
  });
  header.writeUInt8(0x0d, header.length - 1);
  const records = rows.map((cells) => {
    const record = Buffer.alloc(recordLength, 32);
    let at = 1;
    cells.forEach((cell, k) => {
      Buffer.from(cell as Buffer).copy(record, at);
      at += columns[k].length;
    });
    return record;
  });
  return new Uint8Array(Buffer.concat([header, ...records]));
}
