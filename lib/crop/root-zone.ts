/**
 * Water in the root zone: what it holds, how much of it is easy to take, and what happens when it runs short.
 */

/** Limits of the adjusted p. Source: FAO-56, text of Eq. 83. */
export const FRACTION_LOW = 0.1;
export const FRACTION_HIGH = 0.8;

/**
 * Total available water of a root zone.
 *
 *   TAW = 1000 (θFC − θWP) Zr
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param fieldCapacity θFC [m³ m⁻³]
 * @param wiltingPoint θWP [m³ m⁻³]
 * @param rootDepth Zr [m]
 * @returns [mm]
 * @example totalAvailableWater(0.32, 0.12, 0.8) // 160
 * Source: FAO-56 Eq. 82.
 */
export function totalAvailableWater(fieldCapacity: number, wiltingPoint: number, rootDepth: number): number {
  return 1000 * (fieldCapacity - wiltingPoint) * rootDepth;
}

/**
 * Depletion fraction of the day: the table value at ETc = 5 mm d⁻¹ moved by the day's demand.
 *
 *   p = p(table) + 0.04 (5 − ETc), held in 0.1 … 0.8
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param table p of the table [1]
 * @param cropEt ETc of the day [mm d⁻¹]
 * @returns [1]
 * @example depletionFraction(0.5, 5) // 0.5
 * Source: FAO-56 Table 22, footnote 2, and text of Eq. 83.
 */
export function depletionFraction(table: number, cropEt: number): number {
  return Math.min(FRACTION_HIGH, Math.max(FRACTION_LOW, table + 0.04 * (5 - cropEt)));
}

/**
 * Water stress coefficient from the depletion at the start of the day's water use.
 *
 *   Ks = 1 while Dr ≤ p TAW, then (TAW − Dr) / ((1 − p) TAW), not below 0
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param depletion Dr [mm]
 * @param available TAW [mm]
 * @param fraction p [1]
 * @returns 0 … 1
 * @example stressCoefficient(130, 160, 0.375) // 0.3
 * Source: FAO-56 Eq. 84.
 */
export function stressCoefficient(depletion: number, available: number, fraction: number): number {
  if (depletion <= fraction * available) return 1;
  return Math.max(0, (available - depletion) / ((1 - fraction) * available));
}

/**
 * Root-zone depletion after rain and irrigation; water above field capacity has drained (see `drainage`).
 *
 *   Dr = max(0, Dr − (P − RO) − I)
 *
 * Draining comes before the day's ET. Equation 88 read literally takes ET first, but the printed Example 38 drains first, and
 * so do we: water above field capacity is not there long enough to be used.
 * Missing: NaN in any input gives NaN out.
 *
 * @param depletion Dr at the start of the day [mm]
 * @param infiltration P − RO [mm]
 * @param irrigation net irrigation [mm]
 * @returns [mm]
 * @example refilledDepletion(30, 10, 5) // 15
 * Source: FAO-56 Eq. 85 and 88, in the order of the printed Example 38.
 */
export function refilledDepletion(depletion: number, infiltration: number, irrigation: number): number {
  return Math.max(0, depletion - infiltration - irrigation);
}

/**
 * Water that leaves the root zone downwards because it would exceed field capacity.
 *
 *   excess = max(0, (P − RO) + I − Dr)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param depletion Dr at the start of the day [mm]
 * @param infiltration P − RO [mm]
 * @param irrigation net irrigation [mm]
 * @returns [mm]
 * @example drainage(4, 10, 0) // 6
 * Source: FAO-56 Eq. 88, in the order of the printed Example 38.
 */
export function drainage(depletion: number, infiltration: number, irrigation: number): number {
  return Math.max(0, infiltration + irrigation - depletion);
}

/** Share of the mature root depth over which irrigation of a young crop is scheduled. Common practice, no source. */
export const SCHEDULE_SHARE = 0.5;

/**
 * Depth of soil over which irrigation is scheduled: the root zone, but never less than the upper half of the mature one.
 *
 * The roots of a seedling are so shallow that a bare, drying surface would call for water every few days, and each watering would only feed
 * evaporation again. A crop is watered for the soil it is about to root in.
 *   Zs = max(Zr, 0.5 Zmax)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param rootDepth Zr of the day [m]
 * @param rootDepthMax Zmax of the crop [m]
 * @returns [m]
 * @example scheduleDepth(0.3, 1.2) // 0.6
 * Source: common practice, no source.
 */
export function scheduleDepth(rootDepth: number, rootDepthMax: number): number {
  return Math.max(rootDepth, SCHEDULE_SHARE * rootDepthMax);
}

/**
 * Depletion that changes hands when the lower edge of the root zone moves.
 *
 * Growing roots take over soil from below with its depletion, 1000 (θFC − θsub) dZr: the same share of the lower store's depletion as of the water that
 * the store can hold. In soil of one layer that is its share of thickness. A shallower root zone (a new planting) gives the share back.
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param depletion depletion of the store that gives soil away [mm]
 * @param held water that store holds between field capacity and wilting point before the change [mm]
 * @param taken what of it the soil taken over holds [mm], at most `held`
 * @returns depletion that moves [mm]
 * @example movedDepletion(40, 160, 40) // 10
 * Source: FAO-56 chapter 8, text of Eq. 85 (root growth).
 */
export function movedDepletion(depletion: number, held: number, taken: number): number {
  if (taken >= held) return depletion;
  return (depletion * taken) / held;
}
