/**
 * Ponded rice: one store X of water above field capacity, first the pores of the puddled soil, then the pond on top of it.
 *
 * While it holds water the surface is wet (Kr = 1), the crop is not short (Ks = 1), and the day's ET is taken from it. What seeps out of it refills the
 * soil below the roots and then is lost. When the field is drained, what is left of the store refills the soil and the rest is counted as irrigation water
 * lost: it was put on as irrigation, and counted as runoff it would make the effective rain of the day negative.
 */

/** θs where a soil has none of its own [m³ m⁻³]. Common practice for loams to clays, no source. */
export const USUAL_SATURATION = 0.45;

/** Seepage and percolation of a puddled field where a soil has none of its own [mm d⁻¹]. Common practice (3 … 5 mm d⁻¹ on heavy soils), no source. */
export const USUAL_PERCOLATION = 5;

/**
 * Water between field capacity and saturation in the puddled soil.
 *
 *   1000 (θs − θFC) z, not below 0
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param saturation θs [m³ m⁻³]
 * @param fieldCapacity θFC [m³ m⁻³]
 * @param depth puddled depth z [m]
 * @returns [mm]
 * @example pondPores(0.45, 0.35, 0.2) // 20
 * Source: definition of the water contents.
 */
export function pondPores(saturation: number, fieldCapacity: number, depth: number): number {
  return Math.max(0, 1000 * (saturation - fieldCapacity) * depth);
}

/**
 * Depth of water standing on the field.
 *
 *   max(0, X − pores)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param store X [mm]
 * @param pores of the puddled soil [mm]
 * @returns [mm]
 * @example pondDepth(60, 20) // 40
 */
export function pondDepth(store: number, pores: number): number {
  return Math.max(0, store - pores);
}

/**
 * Supply that fills the soil, its pores and the pond to its target. It starts when the pond falls below its minimum.
 *
 *   I = Dr + pores + target − X, not below 0
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param depletion Dr after rain [mm]; 0 where the store holds water
 * @param store X after rain [mm]
 * @param pores of the puddled soil [mm]
 * @param target depth the pond is filled to [mm]
 * @returns [mm]
 * @example pondSupply(0, 25, 20, 50) // 45
 * Source: common practice of continuous flooding, no source.
 */
export function pondSupply(depletion: number, store: number, pores: number, target: number): number {
  return Math.max(0, depletion + pores + target - store);
}
