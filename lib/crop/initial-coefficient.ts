/**
 * Single crop coefficient of the initial stage from how often the bare soil is wetted (the numerical form of the charts of FAO-56).
 */

/** Energy-limited evaporation of wet bare soil over reference ET (FAO-56 Annex 7). */
const WET_SOIL_RATIO = 1.15;

export type SoilTexture = 'coarse' | 'medium-fine';

interface Wetting {
  /** mean interval between wettings tw [d] */
  readonly interval: number;
  /** mean reference ET of the stage [mm d⁻¹] */
  readonly referenceEt: number;
}

/**
 * Kc ini for light wettings, 10 mm or less, on any soil.
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param wetting interval [d] and reference ET [mm d⁻¹]
 * @returns at most 1.15 [1]
 * @example initialCoefficientLight({ interval: 0.1, referenceEt: 4 }) // 1.15
 * Source: FAO-56 Annex 7, TEW 10 mm and REW = min(max(2.5, 6 / √ETo), 7).
 */
export function initialCoefficientLight(wetting: Wetting): number {
  return averageOverInterval(wetting, 10, Math.min(7, Math.max(2.5, 6 / Math.sqrt(wetting.referenceEt))));
}

/**
 * Kc ini for heavy wettings, 40 mm or more.
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param wetting interval [d] and reference ET [mm d⁻¹]
 * @param texture coarse, or medium and fine
 * @returns at most 1.15 [1]
 * @example initialCoefficientHeavy({ interval: 1, referenceEt: 4 }, 'coarse') // 1.15
 * Source: FAO-56 Annex 7: TEW min(15, 7 √ETo), REW min(6, TEW − 0.01) coarse; TEW min(28, 13 √ETo), REW min(9, TEW − 0.01) medium and fine.
 */
export function initialCoefficientHeavy(wetting: Wetting, texture: SoilTexture): number {
  const root = Math.sqrt(wetting.referenceEt);
  const total = texture === 'coarse' ? Math.min(15, 7 * root) : Math.min(28, 13 * root);
  return averageOverInterval(wetting, total, Math.min(texture === 'coarse' ? 6 : 9, total - 0.01));
}

/**
 * Kc ini for wettings between light and heavy.
 *
 *   Kc = Kc light + (I − 10) / (40 − 10) · (Kc heavy − Kc light)
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param wetting interval [d] and reference ET [mm d⁻¹]
 * @param texture coarse, or medium and fine
 * @param depth mean depth of a wetting [mm]; held in 10 … 40
 * @returns [1]
 * @example initialCoefficient({ interval: 0.1, referenceEt: 4 }, 'coarse', 25) // 1.15
 * Source: FAO-56 Eq. 59.
 */
export function initialCoefficient(wetting: Wetting, texture: SoilTexture, depth: number): number {
  const light = initialCoefficientLight(wetting);
  const heavy = initialCoefficientHeavy(wetting, texture);
  return light + ((Math.min(40, Math.max(10, depth)) - 10) / 30) * (heavy - light);
}

function averageOverInterval(wetting: Wetting, total: number, readily: number): number {
  const potential = WET_SOIL_RATIO * wetting.referenceEt;
  const stageOne = readily / potential;
  if (wetting.interval <= stageOne) return WET_SOIL_RATIO;
  const decay = Math.exp((-(wetting.interval - stageOne) * potential * (1 + readily / (total - readily))) / total);
  return Math.min(WET_SOIL_RATIO, (total - (total - readily) * decay) / (wetting.interval * wetting.referenceEt));
}
