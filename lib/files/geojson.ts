/**
 * GeoJSON (RFC 7946, and the coordinate system member of its forerunner of 2008) → a layer. The features are parsed one by one.
 */
import { shown } from './finding-list.ts';
import { featureSpans, JSON_DEPTH_LIMIT } from './json-features.ts';
import type { FeatureFault } from './raw-feature.ts';
import type { ImportFile } from './reading.ts';
import { decodeText, detectEncoding, looksBinary } from './text-encoding.ts';
import { FEATURE_LIMIT, refusal, type SourceFeature, type VectorSource, WGS84_NAME } from './vector-source.ts';

const BYTE_LIMIT = 1024 * 1024 * 1024;

/** Names of the legacy `crs` member that mean WGS 84 longitude and latitude. */
const WGS84_NAMES = /(^|[:/])(CRS:?84|EPSG:+(4326|0:4326)|EPSG\/0\/4326)$|OGC:1\.3:CRS84$|EPSG::4326$/i;

type Json = Record<string, unknown>;

function isObject(value: unknown): value is Json {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}

/** Opens a GeoJSON file. @throws {Refused} when it is no GeoJSON or beyond a limit */
export function openGeoJson(file: ImportFile): VectorSource {
  const { text, encoding } = textOf(file);
  const refuse = (code: string, message: string, advice: string, limit?: string) => refusal(file.name, { code, message, advice, limit });
  const found = featureSpans(text, FEATURE_LIMIT);
  if (found === 'too-deep')
    throw refuse('json-too-deep', 'The JSON is nested too deeply.', 'Check that the file is GeoJSON.', `${JSON_DEPTH_LIMIT} levels`);
  const tooMany = `The file holds more than ${FEATURE_LIMIT} features.`;
  if (found === 'too-many') throw refuse('too-many-features', tooMany, 'Cut it into several files.');
  const frame = parsed(found ? found.frame : text.toString('utf-8'), file);
  if (!isObject(frame))
    throw refuse('not-geojson', 'The file is JSON but not GeoJSON: its top level is not an object.', 'Export the layer as GeoJSON.');
  const crs = crsOf(frame);
  const kept = Array.isArray(frame.features) && frame.features.length === 0 && found ? found : null;
  const list = featuresOf(frame);
  if (typeof list === 'string') throw refuse('not-geojson', list, 'Export the layer as a FeatureCollection.');
  const count = kept ? kept.count : list.length;
  if (count === 0) throw refuse('no-features', 'The file holds no features.', 'Export the layer with its features.');
  if (count > FEATURE_LIMIT)
    throw refuse('too-many-features', `The file holds ${count} features; the limit is ${FEATURE_LIMIT}.`, 'Cut it into several files.');
  const name = typeof frame.name === 'string' ? frame.name : stem(file.name);
  return {
    format: 'geojson',
    layers: [{ name, featureCount: count, geometry: null }],
    layer: name,
    crs,
    encoding,
    featureCount: count,
    features: kept ? eachSpan(text, kept.spans, file) : list.map(sourceFeature),
  };
}

function* eachSpan(text: Buffer, spans: Float64Array, file: ImportFile): Generator<SourceFeature> {
  for (let k = 0; k < spans.length; k += 2) yield sourceFeature(parsed(text.toString('utf-8', spans[k], spans[k + 1]), file));
}

function parsed(text: string, file: ImportFile): unknown {
  try {
    return JSON.parse(text);
  } catch (error) {
    throw refusal(
      file.name,
      {
        code: 'not-json',
        message: `The file is not valid JSON: ${shown((error as Error).message)}`,
        advice: 'Check that the file is complete.',
      },
      error,
    );
  }
}

/** The bytes of the file as UTF-8. */
function textOf(file: ImportFile): { text: Buffer; encoding: string } {
  const { bytes } = file;
  const refuse = (code: string, message: string, advice: string, limit?: string) => refusal(file.name, { code, message, advice, limit });
  if (bytes.length === 0) throw refuse('empty-file', 'The file is empty.', 'Choose a file with features.');
  if (bytes.length > BYTE_LIMIT)
    throw refuse('file-too-large', `The file has ${bytes.length} bytes.`, 'Cut it into several files.', `${BYTE_LIMIT} bytes`);
  const encoding = detectEncoding(bytes);
  if (looksBinary(bytes, encoding))
    throw refuse('binary-file', 'The file is not text: it holds zero bytes.', 'Export the layer as GeoJSON.');
  if (encoding.name === 'windows-1252') throw refuse('not-utf-8', 'The file is not valid UTF-8, as JSON must be.', 'Save it as UTF-8.');
  const text =
    encoding.name === 'utf-8'
      ? Buffer.from(bytes.buffer, bytes.byteOffset + encoding.skip, bytes.byteLength - encoding.skip)
      : Buffer.from(decodeText(bytes, encoding), 'utf-8');
  return { text, encoding: encoding.name };
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

/** WGS 84, as RFC 7946 has it, unless the file has the `crs` member of the older GeoJSON. */
function crsOf(value: Json): string {
  if (value.crs === undefined || value.crs === null) return WGS84_NAME;
  const properties = isObject(value.crs) && isObject(value.crs.properties) ? value.crs.properties : {};
  const name = String(properties.name ?? properties.href ?? properties.code ?? 'unnamed').trim();
  return WGS84_NAMES.test(name) ? WGS84_NAME : name;
}

function sourceFeature(feature: unknown): SourceFeature {
  const properties = isObject(feature) && isObject(feature.properties) ? feature.properties : {};
  const fail = (code: string, message: string, advice: string): SourceFeature => {
    const fault: FeatureFault = { code, message, advice };
    return { geometry: null, properties, id: null, fault };
  };
  if (!isObject(feature) || feature.type !== 'Feature')
    return fail('not-a-feature', 'The entry is not a GeoJSON Feature.', 'Export the layer again.');
  if (feature.properties !== null && feature.properties !== undefined && !isObject(feature.properties))
    return fail('bad-properties', 'The properties of the feature are not an object.', 'Export the layer again.');
  const { geometry, id } = feature;
  if (geometry !== null && geometry !== undefined && !isObject(geometry))
    return fail('bad-geometry', 'The geometry of the feature has no type.', 'Export the layer again.');
  if (typeof id !== 'string' && typeof id !== 'number') return { geometry: geometry ?? null, properties, id: null };
  return { geometry: geometry ?? null, properties: 'id' in properties ? properties : { id, ...properties }, id: String(id) };
}

/** A file's name without folder and ending. */
function stem(name: string): string {
  return name.replace(/^.*[/\\]/, '').replace(/\.[^.]+$/, '');
}
