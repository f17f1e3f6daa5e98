/**
 * One soil for a parcel that lies on several: the classes of its soil polygons, weighted by area.
 */
import type { Soil } from './types.ts';

/** A soil class under a parcel, with its share of the parcel's area, 0–1. */
export interface SoilShare {
  readonly soil: string;
  readonly share: number;
}

/** A parcel takes the class itself, not a mixture, from this share of the mapped ground. Common practice, no source. */
const WHOLE = 0.995;
/** Weights are rounded to this many parts, so that parcels alike share one mixture. */
const PARTS = 1000;
/** A member that only some classes have (curve number, root limit) counts when these cover at least this much of the mapped ground. */
const MOST = 0.5;

/**
 * The area-weighted mean of soil classes. The ground that the soil polygons leave out is taken to be like the rest of the parcel. Field
 * capacity, wilting point, depth of the evaporation layer, REW, TEW and curve number are means over the area: common practice, no source.
 * A curve number or root limit that some of the classes lack is the mean of those that have it when they cover half of the ground or
 * more, and missing (NaN) otherwise.
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
  };
}

function meanOfThoseWith(weighed: readonly { soil: Soil; weight: number }[], value: (soil: Soil) => number): number {
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
