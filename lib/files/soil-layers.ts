/**
 * What a table of soils may say beside field capacity and wilting point: layers, saturation, texture, seepage, capillary properties.
 */
import type { SoilLayer } from '../season/types.ts';
import { type FindingList, shown } from './finding-list.ts';
import type { PlainRow } from './plain-table.ts';
import type { StagedSoil } from './reading.ts';
import type { TableRole } from './table-columns.ts';

export const LAYER_ROLES: readonly TableRole[] = [
  { role: 'layer_top', names: ['layer top', 'top', 'from depth', 'upper depth', 'hzdept'], kind: 'length' },
  { role: 'layer_bottom', names: ['layer bottom', 'bottom', 'to depth', 'lower depth', 'hzdepb'], kind: 'length' },
  { role: 'saturation', names: ['saturation', 'theta s', 'theta sat', 'porosity'], kind: 'share' },
  { role: 'texture', names: ['texture', 'texture class', 'soil texture'] },
  { role: 'percolation', names: ['percolation', 'percolation rate', 'seepage', 'seepage and percolation'], kind: 'depth' },
  { role: 'capillary_class', names: ['capillary class', 'capillary', 'hydraulic class'] },
];

/** Texture classes as written in files, the class of their capillary properties (a texture of the crop room), and how they shift the depletion fraction: sands coarse, clays fine. Grouping: common practice, no source. */
const TEXTURES: Readonly<
  Record<string, { readonly capillary: StagedSoil['capillaryClass'] | null; readonly shift: StagedSoil['texture'] }>
> = {
  sand: { capillary: 'sand', shift: 'coarse' },
  'loamy sand': { capillary: 'loamy-sand', shift: 'coarse' },
  'sandy loam': { capillary: 'sandy-loam', shift: 'medium' },
  loam: { capillary: 'loam', shift: 'medium' },
  'silt loam': { capillary: 'silt-loam', shift: 'medium' },
  silt: { capillary: null, shift: 'medium' },
  'sandy clay loam': { capillary: 'sandy-clay-loam', shift: 'medium' },
  'clay loam': { capillary: 'clay-loam', shift: 'medium' },
  'silty clay loam': { capillary: 'silty-clay-loam', shift: 'medium' },
  'sandy clay': { capillary: 'sandy-clay', shift: 'fine' },
  'silty clay': { capillary: 'silty-clay', shift: 'fine' },
  clay: { capillary: 'clay', shift: 'fine' },
  coarse: { capillary: null, shift: 'coarse' },
  medium: { capillary: null, shift: 'medium' },
  fine: { capillary: null, shift: 'fine' },
};

/** Deepest lower edge of a layer [m]. */
const DEEPEST = 10;
/** Edges closer than this are one [m]: rounding of the file. */
const SAME_DEPTH = 1e-4;

/** Edges of the layer a row is of [m]; `top` null where the file does not say. */
export interface LayerEdges {
  readonly top: number | null;
  readonly bottom: number;
}

/** The layer of a row; null where it has no lower edge. */
export function layerOf(row: PlainRow): LayerEdges | null {
  const top = row.number('layer_top', { low: 0, high: DEEPEST, unit: 'm' });
  const bottom = row.number('layer_bottom', { low: 0.01, high: DEEPEST, unit: 'm' });
  if (bottom === null) {
    if (top !== null && row.good)
      row.fail({
        code: 'layer-without-bottom',
        message: 'The row has the top of a layer and no bottom.',
        role: 'layer_bottom',
        advice: 'Give the lower edge of the layer.',
      });
    return null;
  }
  if (top !== null && top >= bottom)
    row.fail({
      code: 'layer-upside-down',
      message: `The layer goes from ${top} m to ${bottom} m.`,
      role: 'layer_bottom',
      limit: `above ${top} m`,
      advice: 'Check that the columns are not exchanged, and their unit.',
    });
  return { top, bottom };
}

/** Texture, seepage and capillary properties of a row. @param counts told of texture texts that name no class */
export function groundMembers(
  row: PlainRow,
  counts: { unknownTextures: number },
): Pick<StagedSoil, 'texture' | 'percolationRate' | 'capillaryClass'> {
  const texture = row.text('texture');
  const known = texture === null ? undefined : TEXTURES[textureKey(texture)];
  if (texture !== null && !known) counts.unknownTextures++;
  const percolationRate = row.number('percolation', { low: 0, high: 200, unit: 'mm/d' });
  const named = row.text('capillary_class');
  const lifting = named === null ? known : TEXTURES[textureKey(named)];
  if (named !== null && !lifting?.capillary)
    row.fail({
      code: 'unknown-class',
      message: `"${shown(named)}" is not a texture class with capillary properties.`,
      role: 'capillary_class',
      limit: Object.entries(TEXTURES)
        .filter(([, { capillary }]) => capillary !== null)
        .map(([name]) => name)
        .join(', '),
      advice: 'Name one of them, or leave the cell empty.',
    });
  return {
    ...(known && known.shift !== 'medium' ? { texture: known.shift } : {}),
    ...(percolationRate === null ? {} : { percolationRate }),
    ...(lifting?.capillary ? { capillaryClass: lifting.capillary } : {}),
  };
}

function textureKey(text: string): string {
  return text
    .toLowerCase()
    .replace(/[\s_-]+/g, ' ')
    .replace(/^silt clay/, 'silty clay')
    .trim();
}

/** A soil as one row tells it. */
export interface SoilRow {
  readonly soil: StagedSoil;
  readonly edges: LayerEdges | null;
  readonly row: number;
}

/**
 * The soil that the rows of one code make: one row the soil itself; rows with edges its layers, from the surface down. What is not of a layer (name, REW,
 * curve number …) is that of the topmost, and so are field capacity and wilting point of the soil as a whole.
 *
 * @returns null, with an error, where the layers do not lie one on the other
 */
export function soilOfRows(rows: readonly SoilRow[], findings: FindingList): StagedSoil | null {
  const [first] = rows;
  if (first.edges === null) return first.soil;
  const sorted = [...rows].sort((a, b) => (a.edges as LayerEdges).bottom - (b.edges as LayerEdges).bottom);
  const layers: SoilLayer[] = [];
  let from = 0;
  for (const { soil, edges, row } of sorted) {
    const { top, bottom } = edges as LayerEdges;
    if (bottom - from < SAME_DEPTH || (top !== null && Math.abs(top - from) > SAME_DEPTH)) {
      findings.error({
        code: 'layers-not-joined',
        message: `Soil ${shown(soil.code)}: the layer to ${bottom} m begins at ${top ?? from} m, the one above it ends at ${from} m; the soil is left out.`,
        row,
        column: 'layer_top',
        value: String(top ?? ''),
        limit: `${from} m`,
        advice: 'Give layers from the surface (0) down, without gaps and without overlaps.',
      });
      return null;
    }
    layers.push({ top: from, bottom, fieldCapacity: soil.fieldCapacity, wiltingPoint: soil.wiltingPoint });
    from = bottom;
  }
  return { ...sorted[0].soil, layers };
}
