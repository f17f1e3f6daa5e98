/**
 * What a soil holds between field capacity and wilting point, from the surface down to any depth, through its layers.
 */
import type { Soil } from './types.ts';

/** A soil made ready for fast look-up, see `profileOf`. Depths [m], water [mm]. */
export interface SoilProfile {
  /** lower edge of the first layer; Infinity where the soil has one layer */
  readonly topBottom: number;
  /** water held per metre of the first layer, 1000 (θFC − θWP) [mm m⁻¹] */
  readonly topPerMetre: number;
  /** upper edges of the layers */
  readonly tops: Float64Array;
  /** water held above each of these edges */
  readonly heldAbove: Float64Array;
  /** water held per metre of each layer [mm m⁻¹] */
  readonly perMetre: Float64Array;
}

const known = new WeakMap<Soil, SoilProfile>();

/**
 * The profile of a soil, made once per soil object and kept beside it.
 *
 * A soil without layers is one layer of its θFC and θWP. Below the last layer its values go on. The limit of rooting is not applied: roots end there,
 * soil does not.
 */
export function profileOf(soil: Soil): SoilProfile {
  let profile = known.get(soil);
  if (profile === undefined) {
    profile = soilProfile(soil);
    known.set(soil, profile);
  }
  return profile;
}

function soilProfile({ layers, fieldCapacity, wiltingPoint }: Soil): SoilProfile {
  const parts = layers && layers.length > 0 ? layers : [{ bottom: Number.POSITIVE_INFINITY, fieldCapacity, wiltingPoint }];
  const perMetre = Float64Array.from(parts, (layer) => 1000 * (layer.fieldCapacity - layer.wiltingPoint));
  const tops = new Float64Array(parts.length);
  const heldAbove = new Float64Array(parts.length);
  for (let k = 1; k < parts.length; k++) {
    tops[k] = parts[k - 1].bottom;
    heldAbove[k] = heldAbove[k - 1] + perMetre[k - 1] * (tops[k] - tops[k - 1]);
  }
  return { topBottom: parts.length > 1 ? tops[1] : Number.POSITIVE_INFINITY, topPerMetre: perMetre[0], tops, heldAbove, perMetre };
}

/**
 * Total available water from the surface down to a depth, through the layers.
 *
 *   TAW = Σ 1000 (θFC − θWP) Δz over the layers down to z; one layer: `totalAvailableWater`, to the last bit
 *
 * Missing: NaN depth gives NaN.
 *
 * @param depth z, 0 or more [m]
 * @returns [mm]
 * @example availableTo(profileOf({ fieldCapacity: 0.32, wiltingPoint: 0.12 }), 0.8) // 160
 * Source: FAO-56 Eq. 82, summed over layers (common practice).
 */
export function availableTo(profile: SoilProfile, depth: number): number {
  if (depth <= profile.topBottom) return profile.topPerMetre * depth;
  const { tops, heldAbove, perMetre } = profile;
  let k = tops.length - 1;
  while (k > 0 && depth < tops[k]) k--;
  return heldAbove[k] + perMetre[k] * (depth - tops[k]);
}

/**
 * Depth that holds so much available water; the inverse of `availableTo`.
 *
 * Missing: NaN gives NaN.
 *
 * @param water TAW, 0 or more [mm]
 * @returns [m]
 * @example depthHolding(profileOf({ fieldCapacity: 0.32, wiltingPoint: 0.12 }), 160) // 0.8
 * Source: as `availableTo`.
 */
export function depthHolding(profile: SoilProfile, water: number): number {
  const { tops, heldAbove, perMetre } = profile;
  let k = tops.length - 1;
  while (k > 0 && water < heldAbove[k]) k--;
  return tops[k] + (water - heldAbove[k]) / perMetre[k];
}
