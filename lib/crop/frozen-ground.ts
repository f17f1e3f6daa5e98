/**
 * Whether the ground is frozen: an index that cold feeds, warmth draws down and snow slows.
 */

/** Daily decay A of the index [1]. Source: Molnau & Bissell 1983 (recalled, not re-read). */
const DECAY = 0.97;
/** Snow reduction coefficient K while it freezes and while it thaws [cm⁻¹]. Source: Molnau & Bissell 1983 (recalled, not re-read). */
const SNOW_FREEZING = 0.08;
const SNOW_THAWING = 0.5;
/** Centimetres of snow for a millimetre of water: density 0.25. Common practice for settled snow, no source. */
const SNOW_DEPTH_PER_WATER = 0.1 / 0.25;

/**
 * The index at which ground counts as frozen, and under which it counts as thawed [°C d]; between them it stays as it was. Molnau & Bissell call the
 * range between a transition; that it keeps its state is a choice of the product.
 * Source: Molnau & Bissell 1983 (recalled, not re-read).
 */
export const FROZEN_FROM = 83;
export const THAWED_BELOW = 56;

/**
 * Continuous frozen ground index of a day.
 *
 *   CFGI = 0.97 CFGI before − T exp(−0.4 K D), not below 0; K = 0.08 cm⁻¹ where T < 0 °C, else 0.5 cm⁻¹
 *
 * D is the depth of the snow [cm], from its water at density 0.25.
 * Missing: NaN in any input gives NaN.
 *
 * @param before index of the day before [°C d]
 * @param airTemperatureMean T [°C]
 * @param snowWater water of the snow that lay on the ground as the day began [mm]
 * @returns [°C d]
 * @example frozenGroundIndex(50, -10, 0) // 58.5
 * Source: Molnau & Bissell 1983, A continuous frozen ground index for flood forecasting, Proc. Western Snow Conference 51 (recalled, not re-read).
 */
export function frozenGroundIndex(before: number, airTemperatureMean: number, snowWater: number): number {
  const reduction = airTemperatureMean < 0 ? SNOW_FREEZING : SNOW_THAWING;
  const passed = snowWater === 0 ? 1 : Math.exp(-0.4 * reduction * SNOW_DEPTH_PER_WATER * snowWater);
  return Math.max(0, DECAY * before - airTemperatureMean * passed);
}

/**
 * Whether the ground is frozen, from the index and the day before.
 *
 * @param wasFrozen whether it was the day before
 * @example isGroundFrozen(60, true) // true
 * Source: Molnau & Bissell 1983 for the two limits (recalled, not re-read).
 */
export function isGroundFrozen(index: number, wasFrozen: boolean): boolean {
  return index >= FROZEN_FROM || (wasFrozen && index >= THAWED_BELOW);
}
