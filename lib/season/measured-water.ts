/**
 * Soil water as it was measured, told as what the soil lacks to field capacity.
 */
import { availableTo, profileOf } from './soil-profile.ts';
import type { DepletionProfile, Soil } from './types.ts';

/** Volumetric water content θ [m³ m⁻³] of the soil from the bottom of the reading above (or the surface) down to `bottom` [m]. */
export interface WaterContentReading {
  readonly bottom: number;
  readonly content: number;
}

/**
 * Water that a soil holds at field capacity from the surface down to a depth, through its layers.
 *
 *   W = Σ 1000 θFC Δz; below the last layer its value goes on
 *
 * Missing: NaN depth gives NaN.
 *
 * @param depth z, 0 or more [m]
 * @returns [mm]
 * @example heldAtFieldCapacity({ fieldCapacity: 0.32 }, 0.5) // 160
 * Source: FAO-56, text of Eq. 82.
 */
export function heldAtFieldCapacity({ fieldCapacity, layers }: Pick<Soil, 'fieldCapacity' | 'layers'>, depth: number): number {
  if (!layers || layers.length === 0) return 1000 * fieldCapacity * depth;
  let sum = 0;
  let from = 0;
  for (const [k, layer] of layers.entries()) {
    const to = k === layers.length - 1 ? depth : Math.min(depth, layer.bottom);
    if (!(to <= from)) sum += 1000 * layer.fieldCapacity * (to - from);
    from = Math.max(from, to);
  }
  return sum;
}

/**
 * Depletion of the soil from water contents by depth.
 *
 *   D = Σ (1000 θFC Δz) − 1000 θ Δz for each reading, held in 0 … TAW of its piece
 *
 * A piece wetter than field capacity counts as at field capacity: what is above it drains. One drier than wilting point counts as at wilting point.
 *
 * @param readings by depth, ascending, each bottom once
 * @returns one piece for each reading
 * @example profileFromContents({ fieldCapacity: 0.3, wiltingPoint: 0.1 }, [{ bottom: 0.5, content: 0.2 }]) // [{ bottom: 0.5, depletion: 50 }]
 * Source: FAO-56 Eq. 87 by pieces.
 */
export function profileFromContents(soil: Soil, readings: readonly WaterContentReading[]): DepletionProfile {
  const profile = profileOf(soil);
  let from = 0;
  return readings.map(({ bottom, content }) => {
    const full = heldAtFieldCapacity(soil, bottom) - heldAtFieldCapacity(soil, from);
    const most = availableTo(profile, bottom) - availableTo(profile, from);
    const depletion = Math.min(most, Math.max(0, full - 1000 * content * (bottom - from)));
    from = bottom;
    return { bottom, depletion };
  });
}

/**
 * Depletion of a root zone as one piece of soil, held in 0 … TAW of it.
 *
 * @param depletion Dr [mm]
 * @param bottom depth of the root zone it holds for [m]
 * @example profileFromDepletion({ fieldCapacity: 0.3, wiltingPoint: 0.1 }, 60, 1) // [{ bottom: 1, depletion: 60 }]
 */
export function profileFromDepletion(soil: Soil, depletion: number, bottom: number): DepletionProfile {
  return [{ bottom, depletion: Math.min(availableTo(profileOf(soil), bottom), Math.max(0, depletion)) }];
}
