/**
 * FlatGeobuf (version 3) → a layer, by the flatgeobuf package; a feature without geometry, or a broken one, is told and its neighbours kept.
 */

import type { Feature } from 'flatgeobuf/lib/mjs/flat-geobuf/feature.js';
import { parseProperties } from 'flatgeobuf/lib/mjs/generic/feature.js';
import { deserialize } from 'flatgeobuf/lib/mjs/generic/featurecollection.js';
import { fromGeometry } from 'flatgeobuf/lib/mjs/geojson/geometry.js';
import type { HeaderMeta } from 'flatgeobuf/lib/mjs/header-meta.js';
import type { ImportFile } from './reading.ts';
import { FEATURE_LIMIT, refusal, type SourceFeature, type VectorSource } from './vector-source.ts';

const VERSION = 3;
const MAGIC_BYTES = 8;
const HEADER_LIMIT = 64 * 1024 * 1024;

const GEOMETRY_NAMES = [null, 'Point', 'LineString', 'Polygon', 'MultiPoint', 'MultiLineString', 'MultiPolygon', 'GeometryCollection'];

/** Opens a FlatGeobuf file. @throws {Refused} for another version, or a header that makes no sense */
export async function openFlatGeobuf(file: ImportFile): Promise<VectorSource> {
  const { bytes } = file;
  const bad = (message: string, advice: string) => refusal(file.name, { code: 'flatgeobuf-unreadable', message, advice });
  if (bytes[3] !== VERSION || bytes[4] !== 0x66)
    throw bad(`The file is FlatGeobuf of version ${bytes[3]}; version ${VERSION} is read.`, 'Export it again with newer software.');
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const length = bytes.length < MAGIC_BYTES + 4 ? Number.POSITIVE_INFINITY : view.getUint32(MAGIC_BYTES, true);
  if (length > Math.min(HEADER_LIMIT, bytes.length - MAGIC_BYTES - 4))
    throw bad('The file is cut short in its header.', 'Export it again.');
  const { header, features } = await begun(bytes);
  if (header.featuresCount > FEATURE_LIMIT)
    throw bad(`The file holds ${header.featuresCount} features, more than ${FEATURE_LIMIT}.`, 'Cut it into several files.');
  const name = header.title || file.name.replace(/^.*[/\\]/, '').replace(/\.[^.]+$/, '');
  const { envelope } = header;
  return {
    format: 'flatgeobuf',
    layers: [{ name, featureCount: header.featuresCount || null, geometry: GEOMETRY_NAMES[header.geometryType] ?? null }],
    layer: name,
    crs: crsOf(header),
    box: envelope && envelope.length >= 4 ? [envelope[0], envelope[1], envelope[2], envelope[3]] : null,
    encoding: null,
    featureCount: header.featuresCount,
    features: complete(file, header, features),
  };
}

function crsOf({ crs }: HeaderMeta): string | null {
  if (!crs) return null;
  const { org, code, code_string, wkt } = crs;
  if (code > 0 && (!org || org.toUpperCase() === 'EPSG')) return `EPSG:${code}`;
  if (code_string && org) return `${org}:${code_string}`;
  return wkt || null;
}

interface Begun {
  readonly header: HeaderMeta;
  readonly features: AsyncGenerator<SourceFeature>;
}

/** Starts the package's reader, which hands out the header with its first feature. */
async function begun(bytes: Uint8Array): Promise<Begun> {
  let header: HeaderMeta | null = null;
  const headerMetaFn = (meta: HeaderMeta) => {
    header = meta;
  };
  const fromFeature = (id: number, feature: Feature, meta: HeaderMeta) => featureOf(id, feature, meta);
  const reader = deserialize(bytes, { fromFeature, headerMetaFn } as never) as unknown as AsyncGenerator<SourceFeature>;
  const first = await reader.next();
  if (header === null) throw new Error('it has no header');
  return { header, features: withFirst(first, reader) };
}

async function* withFirst(first: IteratorResult<SourceFeature>, rest: AsyncGenerator<SourceFeature>): AsyncGenerator<SourceFeature> {
  if (first.done) return;
  yield first.value;
  yield* rest;
}

/** The features, held against the count in the header: the package takes the end of the bytes for the end of the layer. */
async function* complete(file: ImportFile, header: HeaderMeta, features: AsyncGenerator<SourceFeature>): AsyncGenerator<SourceFeature> {
  let count = 0;
  for await (const feature of features) {
    count++;
    yield feature;
  }
  if (header.featuresCount > 0 && count !== header.featuresCount) {
    throw refusal(file.name, {
      code: 'flatgeobuf-unreadable',
      message: `The file holds ${count} of the ${header.featuresCount} features its header states.`,
      advice: 'It is incomplete: export it again.',
    });
  }
}

function featureOf(id: number, feature: Feature, header: HeaderMeta): SourceFeature {
  try {
    const properties = plainProperties(parseProperties(feature as never, header.columns ?? []));
    const geometry = feature.geometry();
    return { geometry: geometry ? fromGeometry(geometry as never, header.geometryType) : null, properties, id: String(id) };
  } catch (error) {
    const message = `The feature cannot be read: ${(error as Error).message}`;
    return { geometry: null, properties: {}, id: String(id), fault: { code: 'bad-feature', message, advice: 'Export the layer again.' } };
  }
}

function plainProperties(properties: Record<string, unknown>): Record<string, unknown> {
  return Object.fromEntries(Object.entries(properties).filter(([, value]) => !(value instanceof Uint8Array)));
}
