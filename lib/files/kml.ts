/**
 * KML → a layer: Placemarks of one folder, with their extended data as properties. XML with a document type or entities is refused, so that
 * nothing can be expanded or fetched.
 */
import { type Folder, kmlWithFolders, type Root } from '@tmcw/togeojson';
import { DOMParser } from '@xmldom/xmldom';
import type { Feature, Geometry } from 'geojson';
import type { FindingList } from './finding-list.ts';
import type { ImportFile } from './reading.ts';
import { decodeText, detectEncoding } from './text-encoding.ts';
import { tellLayer } from './vector-archive.ts';
import { chooseLayer, type LayerWish, refusal, type SourceFeature, type VectorSource, WGS84_NAME } from './vector-source.ts';

/** Largest KML text; its document takes about ten times that in memory [bytes]. */
const BYTE_LIMIT = 64 * 1024 * 1024;
const DEPTH_LIMIT = 64;
/** Longest description that is kept [characters]. */
const TEXT_LIMIT = 10_000;
/** Properties that say how a feature is drawn, not what it is. */
const DRAWN = /^(stroke|fill|icon|label|style|marker|visibility$|open$|@)/;

interface KmlLayer {
  readonly name: string;
  readonly featureCount: number;
  readonly geometry: null;
  readonly features: readonly Feature<Geometry | null>[];
}

/** Opens the folder asked for, or the first that has Placemarks. @throws {Refused} when it is no KML, or has a document type or entities */
export function openKml(file: ImportFile, options: LayerWish, findings: FindingList): VectorSource {
  const layers = layersOf(documentOf(file), file);
  const layer = chooseLayer(file.name, layers, options);
  const understood = layers.map(({ name, featureCount, geometry }) => ({ name, featureCount, geometry }));
  tellLayer(file, understood, layer.name, options, findings);
  return {
    format: 'kml',
    layers: understood,
    layer: layer.name,
    crs: WGS84_NAME,
    encoding: 'utf-8',
    featureCount: layer.featureCount,
    features: layer.features.map(sourceFeature),
  };
}

function documentOf(file: ImportFile): Root {
  const { bytes } = file;
  const bad = (message: string, advice = 'Export the layer as KML again.') =>
    refusal(file.name, { code: 'kml-unreadable', message, advice });
  if (bytes.length > BYTE_LIMIT)
    throw bad(`The file has ${bytes.length} bytes; the limit for KML is ${BYTE_LIMIT}.`, 'Export the layer as GeoPackage.');
  const text = decodeText(bytes, detectEncoding(bytes));
  if (/<!(DOCTYPE|ENTITY)/i.test(text)) throw bad('The file declares a document type or entities, which are not allowed in an import.');
  if (deepestElement(text) > DEPTH_LIMIT) throw bad(`Its elements are nested more than ${DEPTH_LIMIT} levels deep.`);
  if (!/<(?:[\w.-]+:)?kml[\s>]/i.test(text.slice(0, 4096)))
    throw bad('The file is XML, but not KML.', 'Export the layer as KML, or in another format.');
  const faults: string[] = [];
  try {
    const document = new DOMParser({ onError: (level, message) => level !== 'warning' && faults.push(String(message)) }).parseFromString(
      text,
      'text/xml',
    );
    if (faults.length > 0) throw new Error(faults[0]);
    return kmlWithFolders(document as never);
  } catch (error) {
    throw bad(`The file is not well-formed XML: ${(error as Error).message.split('\n')[0].slice(0, 120)}`);
  }
}

/** Deepest nesting of elements; stops past the limit, and where a tag or comment has no end. One pass, whatever the text. */
function deepestElement(text: string): number {
  let depth = 0;
  let deepest = 0;
  for (let at = text.indexOf('<'); at >= 0 && deepest <= DEPTH_LIMIT; at = text.indexOf('<', at)) {
    const ending = text.startsWith('<!--', at) ? '-->' : text.startsWith('<![CDATA[', at) ? ']]>' : '>';
    const end = text.indexOf(ending, at + 1);
    if (end < 0) break;
    const next = text[at + 1];
    if (next === '/') depth--;
    else if (next !== '!' && next !== '?' && text[end - 1] !== '/') deepest = Math.max(deepest, ++depth);
    at = end + ending.length;
  }
  return deepest;
}

/** The folders with Placemarks of their own, named by their path; Placemarks outside folders are a layer named after the document. */
function layersOf(root: Root, file: ImportFile): KmlLayer[] {
  const layers = new Map<string, Feature<Geometry | null>[]>();
  const visit = (node: Root | Folder, path: readonly string[]) => {
    for (const child of node.children) {
      if (child.type === 'folder') visit(child, [...path, String(child.meta.name ?? 'folder')]);
      else {
        const name = path.join('/') || file.name.replace(/^.*[/\\]/, '').replace(/\.[^.]+$/, '');
        layers.set(name, [...(layers.get(name) ?? []), child]);
      }
    }
  };
  visit(root, []);
  if (layers.size === 0)
    throw refusal(file.name, {
      code: 'no-features',
      message: 'The file holds no Placemarks.',
      advice: 'Export the layer with its features.',
    });
  return [...layers].map(([name, features]) => ({ name, featureCount: features.length, geometry: null, features }));
}

function sourceFeature({ geometry, properties, id }: Feature<Geometry | null>): SourceFeature {
  const kept: Record<string, unknown> = {};
  for (const [name, value] of Object.entries(properties ?? {})) if (!DRAWN.test(name)) kept[name] = plainValue(value);
  return { geometry, properties: kept, id: id === undefined ? null : String(id) };
}

/** A description may be HTML; its tags are dropped. */
function plainValue(value: unknown): unknown {
  if (typeof value !== 'object' || value === null || !('value' in value)) return value;
  return String(value.value)
    .slice(0, TEXT_LIMIT)
    .replace(/<[^>]*>/g, ' ')
    .replace(/\s+/g, ' ')
    .trim();
}
