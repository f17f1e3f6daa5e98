/**
 * A vector file of any format → a layer in WGS 84. The format is told by content; the coordinate system by the file, or by the options.
 */
import type { Geometry } from 'geojson';
import type { Finding } from '../base/errors.ts';
import { TillwaterError } from '../base/errors.ts';
import { type ContentKind, contentKind, contentWords } from './content-kind.ts';
import { isCrsFault, type Projection, projectionOf } from './crs.ts';
import { headOf } from './file-head.ts';
import { type FindingList, shown } from './finding-list.ts';
import { openFlatGeobuf } from './flatgeobuf.ts';
import { openGeoJson } from './geojson.ts';
import { openGeoPackage } from './geopackage.ts';
import { openGeoParquet } from './geoparquet.ts';
import { openKml } from './kml.ts';
import { placedFeatures } from './placed-features.ts';
import type { FileFormat, ImportFile, ImportOptions } from './reading.ts';
import { openShapefile } from './shapefile.ts';
import { openVectorArchive } from './vector-archive.ts';
import type { VectorLayer } from './vector-file.ts';
import type { VectorInput } from './vector-inputs.ts';
import { refusal, type VectorSource, WGS84_NAME } from './vector-source.ts';

export interface VectorOptions extends Pick<ImportOptions, 'layer' | 'crs'> {
  readonly plan?: ImportOptions['plan'];
  /** geometry types that are wanted: among layers, one that can hold them goes first */
  readonly wanted?: readonly Geometry['type'][];
}

const FORMAT_WORDS: Partial<Record<FileFormat, string>> = {
  geojson: 'GeoJSON',
  shapefile: 'a shapefile',
  geopackage: 'a GeoPackage',
  flatgeobuf: 'FlatGeobuf',
  geoparquet: 'GeoParquet',
  kml: 'KML',
};

/**
 * Opens a vector file. What is wrong with the file as a whole is a refusal in `findings`, and the answer null. Features are read as they are
 * asked for; a reader that fails on the way throws, which `reportUnreadable` turns into a refusal.
 */
export async function openVector(
  input: VectorInput | ImportFile,
  options: VectorOptions,
  findings: FindingList,
): Promise<VectorLayer | null> {
  const { file, parts, name } = 'file' in input ? input : { file: input, parts: undefined, name: input.name };
  let source: VectorSource | null = null;
  try {
    source = parts ? await openShapefile(parts, options, findings) : await openByContent(file, options, findings);
    return layerOf(source, name, options, findings);
  } catch (error) {
    source?.close?.();
    reportUnreadable(error, name, source?.format ?? 'unknown', findings);
    return null;
  }
}

/** Reports why a file cannot be read as a whole: its own finding when the reader made one, else the reader's words. */
export function reportUnreadable(error: unknown, file: string, format: FileFormat, findings: FindingList): void {
  const told: readonly Finding[] = error instanceof TillwaterError && 'findings' in error ? (error.findings as readonly Finding[]) : [];
  for (const { severity: _severity, ...finding } of told) findings.refuse({ file, ...finding });
  if (told.length > 0) return;
  if (error instanceof TillwaterError && error.status >= 500) throw error;
  const words = FORMAT_WORDS[format];
  findings.refuse({
    code: 'file-unreadable',
    message: `The file cannot be read${words ? ` as ${words}` : ''}: ${shown(error instanceof Error ? error.message : String(error))}`,
    file,
    advice: 'It is damaged or incomplete: export it again.',
  });
}

async function openByContent(file: ImportFile, options: VectorOptions, findings: FindingList): Promise<VectorSource> {
  const head = headOf(file);
  const kind = contentKind(head, file.name);
  if (kind === 'zip') return openVectorArchive(file, options, findings, openByContent);
  const opener = OPENERS[kind];
  if (opener) return opener(file, options, findings);
  if (/\.(geo)?json$/i.test(file.name) || kind === 'empty') return openGeoJson(file);
  throw refusal(file.name, {
    code: 'not-a-vector-file',
    message: `The file is ${contentWords(head, file.name)}, not a file of features.`,
    limit: 'GeoJSON, zipped Shapefile, GeoPackage, FlatGeobuf, GeoParquet, KML or KMZ',
    advice: 'Export the layer in one of these formats.',
  });
}

type Opener = (file: ImportFile, options: VectorOptions, findings: FindingList) => VectorSource | Promise<VectorSource>;

const OPENERS: Partial<Record<ContentKind, Opener>> = {
  json: openGeoJson,
  xml: openKml,
  sqlite: openGeoPackage,
  flatgeobuf: openFlatGeobuf,
  parquet: openGeoParquet,
  'shapefile-part': (file, options, findings) => openShapefile({ shp: file }, options, findings),
};

function layerOf(source: VectorSource, file: string, options: VectorOptions, findings: FindingList): VectorLayer {
  const projection = chosenProjection(source, file, options, findings);
  tellTransformation(projection, file, findings);
  const { format, layers, layer, encoding, featureCount } = source;
  return {
    ...{ format, layers, layer, encoding, featureCount },
    crs: projection.name,
    transformation: projection.transformation,
    features: placedFeatures(source, projection.toWgs84),
  };
}

function chosenProjection(source: VectorSource, file: string, { crs }: VectorOptions, findings: FindingList): Projection {
  const stated = crs ?? source.crs;
  if (stated !== null) {
    const projection = projectionOf(stated);
    if (isCrsFault(projection)) throw refusal(file, projection);
    return projection;
  }
  if (source.box && !looksLikeDegrees(source.box)) {
    throw refusal(file, {
      code: 'no-crs',
      message: 'The file does not say in which coordinate system its coordinates are, and they are no longitudes and latitudes.',
      value: source.box.map((value) => Math.round(value)).join(', '),
      advice:
        'Name the coordinate system in the options (for example EPSG:32633), or export the layer with it (a shapefile needs its .prj file).',
    });
  }
  findings.warn({
    code: 'crs-assumed',
    message: 'The file does not say in which coordinate system its coordinates are; they are taken as longitudes and latitudes on WGS 84.',
    file,
    advice: 'Look at the map, or name the coordinate system in the options.',
  });
  return { ...(projectionOf(WGS84_NAME) as Projection), name: 'WGS 84 (assumed)' };
}

function looksLikeDegrees([west, south, east, north]: readonly [number, number, number, number]): boolean {
  return Math.max(Math.abs(west), Math.abs(east)) <= 180 && Math.max(Math.abs(south), Math.abs(north)) <= 90;
}

/** Error from which a transformation is a warning [m]: more than the width of a ditch between parcels. Our choice. */
const ERROR_WARNED = 5;

function tellTransformation({ name, transformation, accuracy, gridAccuracy }: Projection, file: string, findings: FindingList): void {
  if (transformation === null) return;
  const told = { file, value: name, message: `The coordinates are brought from ${name} to WGS 84: ${transformation}.` };
  if (accuracy === null || accuracy > ERROR_WARNED)
    findings.warn({
      code: 'datum-shift-coarse',
      ...told,
      limit: `${ERROR_WARNED} m`,
      advice: 'Reproject the layer to WGS 84 with software that has the grid-shift file of the country, and import that.',
    });
  else findings.note({ code: gridAccuracy === null ? 'reprojected' : 'grid-shift-not-used', ...told });
}
