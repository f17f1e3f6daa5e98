/**
 * A shapefile, given by its parts → a layer. Geometry is read by the shapefile package; lengths are checked first, because it takes a file
 * that is cut short for one that ends there.
 */
import { openShp } from 'shapefile';
import { type DbfTable, openDbf } from './dbf.ts';
import type { FindingList } from './finding-list.ts';
import type { ImportFile, UnderstoodLayer } from './reading.ts';
import { decodeText, detectEncoding } from './text-encoding.ts';
import type { ShapefileParts } from './vector-inputs.ts';
import { FEATURE_LIMIT, refusal, type SourceFeature, type VectorSource } from './vector-source.ts';

const HEADER_BYTES = 100;
const MAGIC = 9994;
const SHAPES: Readonly<Record<number, string>> = { 1: 'Point', 3: 'LineString', 5: 'Polygon', 8: 'MultiPoint' };

interface ShapefileRequest {
  readonly plan?: { readonly encoding?: string };
}

/** Opens a shapefile. @throws {Refused} when its .shp cannot be used */
export async function openShapefile(parts: ShapefileParts, options: ShapefileRequest, findings: FindingList): Promise<VectorSource> {
  const shp = shapesOf(parts.shp, findings);
  const table = tableOf(parts, options, findings);
  if (table && table.count !== shp.count) reportCounts(parts.shp, table, shp.count, findings);
  if (table) warnLostTexts(parts.shp, table, findings);
  const name = parts.shp.name.replace(/^.*[/\\]/, '').replace(/\.shp$/i, '');
  const layer: UnderstoodLayer = { name, featureCount: shp.count, geometry: shp.geometry };
  return {
    format: 'shapefile',
    layers: [layer],
    layer: name,
    crs: parts.prj ? textOf(parts.prj.bytes).trim() || null : null,
    box: shp.box,
    encoding: table?.encoding.name ?? null,
    featureCount: shp.count,
    features: featuresOf(shp.bytes, table),
  };
}

interface Shapes {
  readonly bytes: Uint8Array;
  readonly count: number;
  readonly geometry: string | null;
  readonly box: readonly [number, number, number, number];
}

/** Checks the chain of records from the header to the end of the file, and counts them. */
function shapesOf(file: ImportFile, findings: FindingList): Shapes {
  const { bytes } = file;
  const bad = (message: string, limit?: string) =>
    refusal(file.name, { code: 'shp-unreadable', message, limit, advice: 'It is damaged or incomplete: export the layer again.' });
  if (bytes.length < HEADER_BYTES) throw bad('The .shp file is shorter than its header.');
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  if (view.getInt32(0, false) !== MAGIC) throw bad('The .shp file does not start as a shapefile does.');
  const stated = view.getInt32(24, false) * 2;
  if (stated > bytes.length) throw bad(`The .shp file is cut short: it has ${bytes.length} of the ${stated} bytes its header states.`);
  let count = 0;
  let at = HEADER_BYTES;
  while (at + 8 <= stated) {
    const end = at + 8 + view.getInt32(at + 4, false) * 2;
    if (end < at + 12 || end > stated) throw bad(`Record ${count + 1} of the .shp file reaches beyond the end of the file.`);
    const fault = recordFault(view, at + 8, end);
    if (fault !== null) throw bad(`Record ${count + 1} of the .shp file ${fault}.`);
    count++;
    at = end;
  }
  if (stated < bytes.length)
    findings.warn({
      code: 'shp-trailing-bytes',
      message: `The .shp file has ${bytes.length - at} bytes behind its last record, which are left out.`,
      file: file.name,
      advice: 'Check that all features are there.',
    });
  if (count === 0)
    throw refusal(file.name, {
      code: 'no-features',
      message: 'The file holds no features.',
      advice: 'Export the layer with its features.',
    });
  if (count > FEATURE_LIMIT) throw bad(`The file holds ${count} features.`, `${FEATURE_LIMIT} features`);
  const box = [36, 44, 52, 60].map((offset) => view.getFloat64(offset, true)) as [number, number, number, number];
  return { bytes: bytes.subarray(0, at), count, geometry: SHAPES[view.getInt32(32, true) % 10] ?? null, box };
}

/** Numbers of parts and points must fit into the record, or the geometry reader would believe them. */
function recordFault(view: DataView, at: number, end: number): string | null {
  const type = view.getInt32(at, true);
  if (type % 10 !== 3 && type % 10 !== 5) return null;
  if (end - at < 44) return 'is too short for its shape';
  const parts = view.getInt32(at + 36, true);
  const points = view.getInt32(at + 40, true);
  if (parts < 0 || points < 0 || 44 + parts * 4 + points * 16 > end - at) return 'states more corners than it holds';
  for (let k = 0; k < parts; k++) {
    const first = view.getInt32(at + 44 + k * 4, true);
    if (first < 0 || first > points) return 'has a part that starts outside its corners';
  }
  return null;
}

function tableOf(parts: ShapefileParts, options: ShapefileRequest, findings: FindingList): DbfTable | null {
  if (!parts.dbf) {
    findings.warn({
      code: 'no-attribute-table',
      message: 'The shapefile comes without its .dbf file: the features have no properties.',
      file: parts.shp.name,
      advice: 'Send the .dbf file with it.',
    });
    return null;
  }
  const cpg = parts.cpg ? textOf(parts.cpg.bytes) : null;
  return openDbf(parts.dbf, parts.dbf.bytes, { encoding: options.plan?.encoding, cpg });
}

function reportCounts(file: ImportFile, table: DbfTable, shapes: number, findings: FindingList): void {
  const told = {
    code: 'shapefile-counts-differ',
    message: `The .shp file holds ${shapes} shapes and the .dbf file ${table.count} records.`,
    file: file.name,
    advice: 'The parts may be of different exports: export the layer again.',
  };
  if (table.count < shapes) findings.refuse(told);
  else findings.warn(told);
}

/** Texts of question marks only: letters that an earlier program could not write, and that no encoding brings back. */
function warnLostTexts(file: ImportFile, table: DbfTable, findings: FindingList): void {
  const names = table.fields.filter(({ name }) => /^\?{2,}$/.test(name)).map(({ name }) => name);
  const first = table.count > 0 ? Object.values(table.record(0) ?? {}) : [];
  if (names.length === 0 && !first.some((value) => typeof value === 'string' && /^\?{2,}$/.test(value))) return;
  findings.warn({
    code: 'texts-lost',
    message: 'Some field names or texts are question marks only: their letters were lost when the file was written.',
    file: file.name,
    value: names.join(', ') || undefined,
    advice: 'Export the layer again in UTF-8, or choose the columns by their values.',
  });
}

async function* featuresOf(bytes: Uint8Array, table: DbfTable | null): AsyncGenerator<SourceFeature> {
  const source = await openShp(bytes);
  for (let index = 0; ; index++) {
    const { done, value } = await source.read();
    if (done) return;
    const properties = table ? table.record(index) : {};
    if (properties === null) continue;
    yield { geometry: value ?? null, properties, id: null };
  }
}

function textOf(bytes: Uint8Array): string {
  return decodeText(bytes, detectEncoding(bytes));
}
