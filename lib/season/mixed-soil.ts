/**
 * One soil for a parcel that lies on several: the classes of its soil polygons, weighted by area.
 */
import type { Soil, SoilLayer } from './types.ts';

/** A soil class under a parcel, with its share of the parcel's area, 0–1. */
export interface SoilShare {
  readonly soil: string;
  readonly share: number;
}

/** A parcel takes the class itself, not a mixture, from this share of the mapped ground. Common practice, no source. */
const WHOLE = 0.995;
/** Weights are rounded to this many parts, so that parcels alike share one mixture. */
const PARTS = 1000;
/** θs where a class gives none [m³ m⁻³], as `Soil.saturation` says. */
const SATURATION = 0.45;
/** A member that only some classes have (curve number, root limit) counts when these cover at least this much of the mapped ground. */
const MOST = 0.5;

/**
 * The area-weighted mean of soil classes. The ground that the soil polygons leave out is taken to be like the rest of the parcel. Field
 * capacity, wilting point, depth of the evaporation layer, REW, TEW and curve number are means over the area: common practice, no source.
 * A curve number or root limit that some of the classes lack is the mean of those that have it when they cover half of the ground or
 * more, and missing (NaN) otherwise.
 *
 * Layers are mixed by depth: between any two depths at which no class changes, the means of what the classes hold there. Texture and
 * properties of capillary rise cannot be averaged: the class that covers most of the ground gives them (the latter, among those that have them, when these cover
 * half of it).
 *
 * @param shares of the parcel, 0–1; classes that `soils` does not have are left out
 * @returns null when no class is left
 * @example mixedSoil([{ soil: 'loam', share: 0.75 }, { soil: 'clay', share: 0.25 }], { loam, clay })?.name // '75 % Loam + 25 % Clay'
 */
export function mixedSoil(shares: readonly SoilShare[], soils: Readonly<Record<string, Soil>>): Soil | null {
  const parts = shares
    .filter(({ soil, share }) => share > 0 && Object.hasOwn(soils, soil))
    .map(({ soil, share }) => ({ soil: soils[soil], share }))
    .sort((a, b) => b.share - a.share || (a.soil.code < b.soil.code ? -1 : 1));
  const mapped = parts.reduce((sum, { share }) => sum + share, 0);
  if (parts.length === 0) return null;
  if (parts[0].share >= WHOLE * mapped) return parts[0].soil;
  const rounded = parts.map(({ soil, share }) => ({ soil, part: Math.round((share / mapped) * PARTS) })).filter(({ part }) => part > 0);
  const all = rounded.reduce((sum, { part }) => sum + part, 0);
  const weighed = rounded.map(({ soil, part }) => ({ soil, weight: part / all }));
  const mean = (value: (soil: Soil) => number) => weighed.reduce((sum, { soil, weight }) => sum + weight * value(soil), 0);
  return {
    code: weighed.map(({ soil, weight }) => `${soil.code} ${weight.toFixed(3)}`).join(' + '),
    name: weighed.map(({ soil, weight }) => `${percent(weight)} % ${soil.name}`).join(' + '),
    fieldCapacity: mean((soil) => soil.fieldCapacity),
    wiltingPoint: mean((soil) => soil.wiltingPoint),
    evaporationDepth: mean((soil) => soil.evaporationDepth),
    readilyEvaporableWater: mean((soil) => soil.readilyEvaporableWater),
    totalEvaporableWater: mean((soil) => soil.totalEvaporableWater),
    curveNumber: meanOfThoseWith(weighed, (soil) => soil.curveNumber),
    rootLimit: meanOfThoseWith(weighed, (soil) => soil.rootLimit),
    ...depthMembers(weighed),
  };
}

type Weighed = readonly { readonly soil: Soil; readonly weight: number }[];

/** The members that only some soils have. A mixture of soils without them has none either. */
function depthMembers(weighed: Weighed): Pick<Soil, 'layers' | 'saturation' | 'texture' | 'percolationRate' | 'capillary'> {
  const layers = mixedLayers(weighed);
  const saturated = weighed.some(({ soil }) => soil.saturation !== undefined);
  const saturation = weighed.reduce((sum, { soil, weight }) => sum + weight * (soil.saturation ?? SATURATION), 0);
  const percolationRate = meanOfThoseWith(weighed, (soil) => soil.percolationRate ?? Number.NaN);
  const texture = mostCommon(weighed, (soil) => soil.texture ?? 'medium');
  const lifting = weighed.filter(({ soil }) => soil.capillary !== undefined);
  const liftingShare = lifting.reduce((sum, { weight }) => sum + weight, 0);
  return {
    ...(layers ? { layers } : {}),
    ...(saturated ? { saturation } : {}),
    ...(texture !== 'medium' ? { texture } : {}),
    ...(Number.isNaN(percolationRate) ? {} : { percolationRate }),
    ...(liftingShare >= MOST ? { capillary: lifting[0].soil.capillary } : {}),
  };
}

/** The value that covers most of the ground; the first of those that tie. */
function mostCommon<T>(weighed: Weighed, value: (soil: Soil) => T): T {
  const covered = new Map<T, number>();
  for (const { soil, weight } of weighed) covered.set(value(soil), (covered.get(value(soil)) ?? 0) + weight);
  return [...covered].reduce((best, next) => (next[1] > best[1] ? next : best))[0];
}

/** Layers between all depths at which a class changes; none when no class has layers. */
function mixedLayers(weighed: Weighed): SoilLayer[] | null {
  const edges = [...new Set(weighed.flatMap(({ soil }) => (soil.layers ?? []).map(({ bottom }) => bottom)))].sort((a, b) => a - b);
  if (edges.length === 0) return null;
  return edges.map((bottom, k) => {
    const layer = { top: k === 0 ? 0 : edges[k - 1], bottom, fieldCapacity: 0, wiltingPoint: 0 };
    for (const { soil, weight } of weighed) {
      const own = layerAt(soil, bottom);
      layer.fieldCapacity += weight * own.fieldCapacity;
      layer.wiltingPoint += weight * own.wiltingPoint;
    }
    return layer;
  });
}

/** What a soil holds just above a depth; its last layer goes on below. */
function layerAt(soil: Soil, bottom: number): Pick<SoilLayer, 'fieldCapacity' | 'wiltingPoint'> {
  const { layers } = soil;
  if (!layers || layers.length === 0) return soil;
  return layers.find((layer) => layer.bottom >= bottom) ?? layers[layers.length - 1];
}

function meanOfThoseWith(weighed: Weighed, value: (soil: Soil) => number): number {
  const having = weighed.filter(({ soil }) => !Number.isNaN(value(soil)));
  const covered = having.reduce((sum, { weight }) => sum + weight, 0);
  if (covered < MOST) return Number.NaN;
  return having.reduce((sum, { soil, weight }) => sum + (weight / covered) * value(soil), 0);
}

function percent(weight: number): string {
  return weight < 0.005 ? '< 1' : String(Math.round(weight * 100));
}

/** What a parcel says of its soil. */
export interface ParcelSoil {
  readonly soilCode: string | null;
  readonly soilShares: readonly SoilShare[] | null;
}

/**
 * The soil of each parcel: its own code before its soil polygons, these before the soil of the district.
 *
 * @returns `codes`, one for each parcel, each a key of `soils`, which has the library and the mixtures
 */
export function soilsOfParcels(
  parcels: readonly ParcelSoil[],
  library: Readonly<Record<string, Soil>>,
  defaultSoil: string,
): { readonly codes: readonly string[]; readonly soils: Readonly<Record<string, Soil>> } {
  const soils: Record<string, Soil> = { ...library };
  const codes = parcels.map(({ soilCode, soilShares }) => {
    if (soilCode !== null) return soilCode;
    const mixed = soilShares && mixedSoil(soilShares, library);
    if (!mixed) return defaultSoil;
    soils[mixed.code] ??= mixed;
    return mixed.code;
  });
  return { codes, soils };
}
