/**
 * The features of one or more vector files of any format, ready to be given a meaning: what readers of parcels, canals and areas start from.
 */
import type { Geometry } from 'geojson';
import type { FindingList } from './finding-list.ts';
import { shown } from './finding-list.ts';
import { openVector, reportUnreadable } from './open-vector.ts';
import type { RawFeature } from './raw-feature.ts';
import type { ImportFile, ImportOptions, Understood } from './reading.ts';
import type { VectorFeature, VectorLayer } from './vector-file.ts';
import { vectorInputs } from './vector-inputs.ts';

/** The part of what was understood that a vector file answers for. */
export type UnderstoodVector = Pick<
  Understood,
  'format' | 'layers' | 'layer' | 'crs' | 'transformation' | 'encoding' | 'rowCount' | 'featureCount'
>;

export interface LayerFeatures {
  readonly features: RawFeature[];
  /** of the first file that could be opened; counts are of all */
  readonly understood: UnderstoodVector;
}

/** Features between two looks at the clock of the caller. */
const BREATH = 2000;

/**
 * Reads the features of the files, whatever their formats. A file that cannot be used is a refusal (`findings.fatal`) and gives no features;
 * a broken feature, or one of another geometry type than is wanted, is an error of its row and comes with `geometry` null.
 *
 * @param wanted geometry types that can be used, e.g. `['Polygon', 'MultiPolygon']`
 * @param progress told the share read, 0–1
 */
export async function readLayerFeatures(
  files: readonly ImportFile[],
  wanted: readonly Geometry['type'][],
  options: ImportOptions,
  findings: FindingList,
  progress: (fraction: number) => void | Promise<void> = () => undefined,
): Promise<LayerFeatures> {
  const inputs = vectorInputs(files, findings);
  const features: RawFeature[] = [];
  let first: VectorLayer | null = null;
  for (const [index, input] of inputs.entries()) {
    const layer = await openVector(input, { ...options, wanted }, findings);
    if (!layer) continue;
    first ??= layer;
    const start = features.length;
    try {
      for await (const feature of layer.features) {
        features.push(taken(feature, input.name, wanted, findings));
        const read = features.length - start;
        if (read % BREATH === 0) await progress((index + read / Math.max(read, layer.featureCount)) / inputs.length);
      }
    } catch (error) {
      reportUnreadable(error, input.name, layer.format, findings);
      features.length = start;
      continue;
    }
    if (features.length === start)
      findings.refuse({
        code: 'no-features',
        message: 'The file holds no features.',
        file: input.name,
        advice: 'Export the layer with its features.',
      });
  }
  return { features, understood: understoodOf(first, features.length) };
}

function understoodOf(layer: VectorLayer | null, count: number): UnderstoodVector {
  return {
    format: layer?.format ?? 'unknown',
    layers: layer && layer.layers.length > 1 ? layer.layers : undefined,
    layer: layer?.layer ?? null,
    crs: layer?.crs ?? null,
    transformation: layer?.transformation ?? null,
    encoding: layer?.encoding ?? null,
    rowCount: count,
    featureCount: count,
  };
}

function taken(feature: VectorFeature, file: string, wanted: readonly Geometry['type'][], findings: FindingList): RawFeature {
  const { row, properties, geometry } = feature;
  const fault = feature.fault ?? (geometry && typeFault(geometry, wanted)) ?? null;
  if (!fault) return { row, file, properties, geometry, problem: null };
  findings.error({ ...fault, file, row });
  return { row, file, properties, geometry: null, problem: fault.message };
}

function typeFault({ type }: Geometry, wanted: readonly Geometry['type'][]) {
  if (wanted.includes(type)) return null;
  return {
    code: 'wrong-geometry',
    message: `The geometry is a ${shown(type)}.`,
    advice: 'Choose the right layer.',
    limit: wanted.join(' or '),
  };
}
