/**
 * What a reader of one vector format hands over: a layer as it stands in the file, before its coordinates are brought to WGS 84.
 */
import type { Geometry } from 'geojson';
import { Refused } from '../base/errors.ts';
import type { FeatureFault } from './raw-feature.ts';
import type { FileFormat, UnderstoodLayer } from './reading.ts';

/** Most features of one layer. */
export const FEATURE_LIMIT = 1_000_000;

/** One feature in the coordinates of the file; easting or longitude first, as all these formats store it. */
export interface SourceFeature {
  /** GeoJSON geometry, not yet checked; null where there is none */
  readonly geometry: unknown;
  readonly properties: Readonly<Record<string, unknown>>;
  readonly id: string | null;
  /** why the feature as a whole cannot be used */
  readonly fault?: FeatureFault;
}

export interface VectorSource {
  readonly format: FileFormat;
  readonly layers: readonly UnderstoodLayer[];
  readonly layer: string;
  /** coordinate system as the file states it: a code, a name, WKT or PROJJSON; null where it states none */
  readonly crs: string | null;
  /** [west, south, east, north] in the coordinates of the file, where it is cheap to know */
  readonly box?: readonly [number, number, number, number] | null;
  readonly encoding: string | null;
  readonly featureCount: number;
  readonly features: AsyncIterable<SourceFeature> | Iterable<SourceFeature>;
  /** frees what the reader holds; called once, after the last feature or in its stead */
  readonly close?: () => void;
}

export const WGS84_NAME = 'OGC:CRS84';

interface RefusalText {
  readonly code: string;
  readonly message: string;
  readonly advice?: string;
  readonly limit?: string;
  readonly value?: string;
}

/** A file that cannot be used as a whole, with the finding that says why. */
export function refusal(file: string, text: RefusalText, cause?: unknown): Refused {
  return new Refused(text.message, [{ severity: 'error', file, ...text }], { cause });
}

/** What a reader is told of the layer that is wanted. */
export interface LayerWish {
  readonly layer?: string;
  /** geometry types that can be used */
  readonly wanted?: readonly Geometry['type'][];
}

/**
 * The layer asked for; else the first that has features of a type that is wanted, as far as the file states types; else the first that has
 * features, or the first at all. Refused when the one asked for is not there.
 */
export function chooseLayer<Layer extends UnderstoodLayer>(file: string, layers: readonly Layer[], { layer, wanted }: LayerWish): Layer {
  const named = layers.find(({ name }) => name === layer) ?? layers.find(({ name }) => name.toLowerCase() === layer?.toLowerCase());
  if (layer !== undefined && !named) {
    throw refusal(file, {
      code: 'unknown-layer',
      message: `The file has no layer "${layer.slice(0, 80)}".`,
      limit: layers
        .slice(0, 50)
        .map(({ name }) => name.slice(0, 80))
        .join(', '),
      advice: 'Choose one of its layers in the options.',
    });
  }
  const filled = layers.filter(({ featureCount }) => featureCount !== 0);
  return named ?? filled.find(({ geometry }) => mayHold(geometry, wanted)) ?? filled[0] ?? layers[0];
}

/** True unless the stated geometry type ("MULTIPOLYGON Z", "Polygon, MultiPolygon") is none of those wanted. */
function mayHold(stated: string | null, wanted: LayerWish['wanted']): boolean {
  if (stated === null || !wanted) return true;
  const type = stated.toLowerCase();
  if (type.startsWith('geometry')) return true;
  const known = ['point', 'linestring', 'polygon'].filter((name) => type.includes(name));
  return known.length === 0 || known.some((name) => wanted.some((one) => one.toLowerCase().includes(name)));
}
