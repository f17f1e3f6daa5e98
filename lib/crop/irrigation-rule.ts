/**
 * When and how much water is put on: the depletion that calls for it, and the depth of an application.
 */

/** Depletion [mm] at or below which an irrigation counts as finished, and none is started. Choice of the product. */
export const REFILLED = 0.5;

/**
 * Depletion at which an irrigation starts.
 *
 *   D,start = f p TAW,s; for applications of a fixed depth not more than that depth
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param share f, share of the readily available water [1]
 * @param fraction p [1]
 * @param held water the soil holds down to the scheduling depth, TAW,s [mm]
 * @param fixedDepth depth of an application [mm], 0 for a refill
 * @returns [mm]
 * @example startingDepletion(0.8, 0.5, 120, 0) // 48
 * Source: FAO-56 Eq. 83 and text of Eq. 86 (irrigate before the readily available water is gone); f by method or rule.
 */
export function startingDepletion(share: number, fraction: number, held: number, fixedDepth: number): number {
  const readily = share * fraction * held;
  return fixedDepth > 0 ? Math.min(fixedDepth, readily) : readily;
}

/**
 * Depletion that calls for water: that of the soil down to the scheduling depth, less the dryness of the bare surface.
 *
 *   Dc = max(0, Ds − few De)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param depletion Ds, depletion down to the scheduling depth [mm]
 * @param exposedWetted few of the day before [1]
 * @param surface De after rain [mm]
 * @returns [mm]
 * @example callingDepletion(30, 0.5, 10) // 25
 * Source: common practice, no source: watering a bare surface feeds evaporation alone.
 */
export function callingDepletion(depletion: number, exposedWetted: number, surface: number): number {
  return Math.max(0, depletion - exposedWetted * surface);
}

/**
 * Whether the crop running short starts an irrigation by itself. It does, unless the rule lets it run short on purpose.
 *
 *   f ≤ 1 and Dr > p TAW
 *
 * @param share f of the rule [1]
 * @param depletion Dr after rain [mm]
 * @param readily p TAW of the root zone [mm]
 * @example runsShort(1.4, 90, 60) // false
 * Source: FAO-56 Eq. 83 and 84 (stress begins where Dr passes RAW).
 */
export function runsShort(share: number, depletion: number, readily: number): boolean {
  return share <= 1 && depletion > readily;
}

/**
 * Depth to apply so that a refill stays in the soil and the leaching requirement passes the root zone.
 *
 *   I = R / (1 − LR); of I the share LR passes the root zone, (1 − LR) I stays
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param refill R [mm]
 * @param leaching LR, below 1
 * @returns [mm]
 * @example appliedDepth(36, 0.1) // 40
 * Source: FAO-29 rev. 1, chapter 2 (recalled).
 */
export function appliedDepth(refill: number, leaching: number): number {
  return refill / (1 - leaching);
}
