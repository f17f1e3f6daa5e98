/**
 * The layer that dries by evaporation: its water, and the evaporation coefficient it allows.
 */

/** Rain [mm d⁻¹] above which the whole surface is wetted. Source: FAO-56, text of Eq. 75 (3 … 4 mm). */
export const WETTING_RAIN = 3;

/**
 * Total evaporable water of the surface layer.
 *
 *   TEW = 1000 (θFC − 0.5 θWP) Ze
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param fieldCapacity θFC [m³ m⁻³]
 * @param wiltingPoint θWP [m³ m⁻³]
 * @param depth Ze [m]
 * @returns [mm]
 * @example totalEvaporableWater(0.25, 0.1, 0.1) // 20
 * Source: FAO-56 Eq. 73.
 */
export function totalEvaporableWater(fieldCapacity: number, wiltingPoint: number, depth: number): number {
  return 1000 * (fieldCapacity - 0.5 * wiltingPoint) * depth;
}

/**
 * Evaporation reduction coefficient of the drying surface layer.
 *
 *   Kr = 1 while De ≤ REW, then (TEW − De) / (TEW − REW), not below 0
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param depletion De at the start of the drying [mm]
 * @param readily REW [mm]
 * @param total TEW [mm]
 * @returns 0 … 1
 * @example evaporationReduction(14, 8, 20) // 0.5
 * Source: FAO-56 Eq. 74.
 */
export function evaporationReduction(depletion: number, readily: number, total: number): number {
  if (depletion <= readily) return 1;
  return Math.max(0, (total - depletion) / (total - readily));
}

/** Which side of Eq. 71 sets the evaporation coefficient. */
interface EvaporationLimits {
  /** Kr [1] */
  readonly reduction: number;
  /** Kcb [1] */
  readonly basal: number;
  /** Kc max [1] */
  readonly maximum: number;
  /** few [1] */
  readonly exposedWetted: number;
}

/**
 * Soil evaporation coefficient: the energy left over by the crop, or what the exposed wet soil can pass, whichever is less.
 *
 *   Ke = min(Kr (Kc max − Kcb), few Kc max)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param limits Kr, Kcb, Kc max and few [1]
 * @returns [1]
 * @example evaporationCoefficient({ reduction: 1, basal: 0.2, maximum: 1.2, exposedWetted: 0.5 }) // 0.6
 * Source: FAO-56 Eq. 71.
 */
export function evaporationCoefficient(limits: EvaporationLimits): number {
  return Math.min(limits.reduction * (limits.maximum - limits.basal), limits.exposedWetted * limits.maximum);
}

/**
 * Depletion of the surface layer after the day's rain and irrigation; what the layer cannot hold passes through it.
 *
 *   De = max(0, De − (P − RO) − I / fw)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param depletion De before wetting [mm]
 * @param infiltration rain that entered, P − RO [mm]
 * @param irrigation net irrigation depth over the whole strip [mm]
 * @param wetted fw of the irrigation [1]
 * @returns [mm]
 * @example wettedSurfaceDepletion(18, 6, 4, 0.5) // 4
 * Source: FAO-56 Eq. 77 and 79, with the rain and irrigation early in the day.
 */
export function wettedSurfaceDepletion(depletion: number, infiltration: number, irrigation: number, wetted: number): number {
  return Math.max(0, depletion - infiltration - irrigation / wetted);
}

/**
 * Depletion of the surface layer after the day's evaporation, which leaves through the exposed wet part only.
 *
 *   De = min(TEW, De + E / few)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param depletion De after wetting [mm]
 * @param evaporation E over the whole strip [mm]
 * @param exposedWetted few [1]
 * @param total TEW [mm]
 * @returns [mm]
 * @example driedSurfaceDepletion(5, 4, 0.5, 18) // 13
 * Source: FAO-56 Eq. 77 and 78.
 */
export function driedSurfaceDepletion(depletion: number, evaporation: number, exposedWetted: number, total: number): number {
  return Math.min(total, depletion + evaporation / exposedWetted);
}
