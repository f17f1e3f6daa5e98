/**
 * A file of features, whatever its format: the contract between the format readers (GeoJSON, Shapefile, GeoPackage, FlatGeobuf, GeoParquet,
 * KML) and the readers of parcels, canals, turnouts and areas, which know what the features mean.
 */
import type { Geometry } from 'geojson';
import type { FeatureFault } from './raw-feature.ts';
import type { FileFormat, UnderstoodLayer } from './reading.ts';

/** One feature in WGS 84, longitude first; heights may remain. */
export interface VectorFeature {
  /** number of the feature in its layer, from 1 */
  readonly row: number;
  /** null where the file has none, or where it cannot be used: then `fault` says why */
  readonly geometry: Geometry | null;
  readonly fault: FeatureFault | null;
  readonly properties: Readonly<Record<string, unknown>>;
  /** id the format gives the feature, outside its properties */
  readonly id: string | null;
}

/** An opened layer. */
export interface VectorLayer {
  readonly format: FileFormat;
  /** layers of the file; one for single-layer formats */
  readonly layers: readonly UnderstoodLayer[];
  /** the one that is read */
  readonly layer: string;
  /** as told to the user: "EPSG:28992 Amersfoort / RD New" */
  readonly crs: string;
  /** how coordinates were brought to WGS 84 and how far that can be trusted; null when they were WGS 84 already */
  readonly transformation: string | null;
  /** text encoding of the properties, where the format has one */
  readonly encoding: string | null;
  readonly featureCount: number;
  readonly features: AsyncIterable<VectorFeature>;
}
