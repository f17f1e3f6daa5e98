/**
 * GeoParquet → a layer: row groups are read one after the other, so that a large file is never whole in memory.
 */
import { type AsyncBuffer, asyncBufferFromFile, type FileMetaData, parquetMetadataAsync, parquetReadObjects } from 'hyparquet';
import { compressors } from 'hyparquet-compressors';
import type { FindingList } from './finding-list.ts';
import { type GeometryColumn, geometryColumn } from './geoparquet-metadata.ts';
import { nestedGeometry } from './geoparquet-nested.ts';
import { StatedGeometry } from './geoparquet-stated.ts';
import type { ImportFile } from './reading.ts';
import { FEATURE_LIMIT, refusal, type SourceFeature, type VectorSource } from './vector-source.ts';
import { geometryOfWkb, isEmptyGeometry } from './wkb.ts';

/** Most rows read at once. */
const ROWS_AT_ONCE = 50_000;
/** Geometry stays bytes: it is decoded feature by feature, so that a broken one does not take the others with it. */
const PARSERS = {
  geometryFromBytes: (bytes: Uint8Array | undefined) => bytes,
  geographyFromBytes: (bytes: Uint8Array | undefined) => bytes,
};

/** Opens a GeoParquet file. @throws {Refused} when it is damaged or holds no geometry */
export async function openGeoParquet(file: ImportFile, _options: unknown, findings: FindingList): Promise<VectorSource> {
  const buffer = await bufferOf(file);
  const metadata = await metadataOf(buffer, file);
  const column = geometryColumn(metadata, file, findings);
  const count = Number(metadata.num_rows);
  if (count > FEATURE_LIMIT) throw damaged(file, `it holds ${count} features, more than ${FEATURE_LIMIT}`);
  const name = file.name.replace(/^.*[/\\]/, '').replace(/\.[^.]+$/, '');
  return {
    format: 'geoparquet',
    layers: [{ name, featureCount: count, geometry: column.types.join(', ') || null }],
    layer: name,
    crs: column.crs,
    box: column.box,
    encoding: null,
    featureCount: count,
    features: featuresOf({ buffer, metadata, column, file }, findings),
  };
}

function damaged(file: ImportFile, why: string, cause?: unknown) {
  const text = {
    code: 'geoparquet-unreadable',
    message: `The Parquet file cannot be read: ${why}.`,
    advice: 'It is damaged or incomplete: export it again.',
  };
  return refusal(file.name, text, cause);
}

async function bufferOf(file: ImportFile): Promise<AsyncBuffer> {
  if (file.path !== undefined) return asyncBufferFromFile(file.path);
  const { bytes } = file;
  const slice = (start: number, end = bytes.byteLength) => new Uint8Array(bytes.subarray(start, end)).buffer as ArrayBuffer;
  return { byteLength: bytes.byteLength, slice };
}

async function metadataOf(buffer: AsyncBuffer, file: ImportFile): Promise<FileMetaData> {
  try {
    if (buffer.byteLength < 12) throw new Error('it is shorter than its frame');
    return await parquetMetadataAsync(buffer, { geoparquet: false });
  } catch (error) {
    throw damaged(file, (error as Error).message, error);
  }
}

interface Opened {
  readonly buffer: AsyncBuffer;
  readonly metadata: FileMetaData;
  readonly column: GeometryColumn;
  readonly file: ImportFile;
}

async function* featuresOf({ buffer, metadata, column, file }: Opened, findings: FindingList): AsyncGenerator<SourceFeature> {
  const stated = new StatedGeometry(column);
  const total = Number(metadata.num_rows);
  const shared = collectionValues(metadata);
  const columns = topColumns(metadata).filter((name) => !column.boxColumns.includes(name));
  let ends = 0;
  const groups = metadata.row_groups.map(({ num_rows }) => (ends += Number(num_rows)));
  for (let start = 0; start < total; ) {
    const groupEnd = groups.find((end) => end > start) ?? total;
    const rowEnd = Math.min(groupEnd, start + ROWS_AT_ONCE);
    const rows = await rowsOf({ buffer, metadata, column, file }, { columns, rowStart: start, rowEnd });
    if (rows.length !== rowEnd - start) throw damaged(file, `rows ${start + 1} to ${rowEnd} are not all there`);
    for (const row of rows) yield featureOf({ ...shared, ...row }, column, stated);
    start = rowEnd;
  }
  stated.report(file.name, findings);
}

async function rowsOf(
  { buffer, metadata, file }: Opened,
  range: { columns: string[]; rowStart: number; rowEnd: number },
): Promise<Record<string, unknown>[]> {
  try {
    return await parquetReadObjects({ file: buffer, metadata, compressors, utf8: false, parsers: PARSERS as never, ...range });
  } catch (error) {
    throw damaged(file, (error as Error).message, error);
  }
}

/** Values that hold for every row, as field-boundary collections keep them in the file's metadata under "collection" (Vecorel specification). */
function collectionValues({ key_value_metadata }: FileMetaData): Record<string, unknown> {
  const text = key_value_metadata?.find(({ key }) => key === 'collection')?.value;
  try {
    const value: unknown = text === undefined ? {} : JSON.parse(text);
    const pairs = typeof value === 'object' && value !== null ? Object.entries(value) : [];
    return Object.fromEntries(pairs.filter(([, item]) => ['string', 'number', 'boolean'].includes(typeof item)));
  } catch {
    return {};
  }
}

function topColumns({ schema }: FileMetaData): string[] {
  const names: string[] = [];
  const skip = (index: number): number => {
    let next = index + 1;
    for (let k = 0; k < (schema[index].num_children ?? 0); k++) next = skip(next);
    return next;
  };
  for (let index = 1; index < schema.length; index = skip(index)) names.push(schema[index].name);
  return names;
}

function featureOf(row: Record<string, unknown>, column: GeometryColumn, stated: StatedGeometry): SourceFeature {
  const properties: Record<string, unknown> = {};
  for (const [name, value] of Object.entries(row)) {
    if (name !== column.name && !(value instanceof Uint8Array)) properties[name] = plainValue(value);
  }
  const value = row[column.name];
  if (value === null || value === undefined) return { geometry: null, properties, id: null };
  try {
    const geometry = value instanceof Uint8Array ? geometryOfWkb(value) : nestedGeometry(value, column.encoding);
    stated.take(geometry, value instanceof Uint8Array ? value : null);
    return { geometry: isEmptyGeometry(geometry) ? null : geometry, properties, id: null };
  } catch (error) {
    const message = `The geometry cannot be read: ${(error as Error).message}.`;
    return { geometry: null, properties, id: null, fault: { code: 'bad-geometry', message, advice: 'Export the layer again.' } };
  }
}

/** Values as JSON has them: large whole numbers as text, days and moments as ISO text. */
function plainValue(value: unknown): unknown {
  if (typeof value === 'bigint') return Number.isSafeInteger(Number(value)) ? Number(value) : String(value);
  if (value instanceof Date) return value.toISOString().replace('T00:00:00.000Z', '');
  if (Array.isArray(value)) return value.map(plainValue);
  if (ArrayBuffer.isView(value)) return null;
  if (typeof value !== 'object' || value === null) return value;
  return Object.fromEntries(Object.entries(value).map(([name, item]) => [name, plainValue(item)]));
}
