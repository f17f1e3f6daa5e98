/**
 * Mulch on the soil: what it takes from evaporation.
 *
 * Source: FAO-56 chapter 10, effects of surface mulching (recalled, not re-read).
 */

/** Evaporation kept back by organic mulch: 5 % for each 10 % of the ground covered (FAO-56 chapter 10, recalled). */
const ORGANIC_SHARE = 0.5;

/** Single Kc under plastic that covers all: 30 % lower, the upper end of the printed 10–30 %; in proportion below (FAO-56 chapter 10, recalled). */
const PLASTIC_SINGLE = 0.3;

export interface MulchCover {
  readonly kind: 'plastic' | 'organic';
  /** fraction of the soil surface covered, 0–1 */
  readonly cover: number;
}

/**
 * Factor on the evaporation coefficient Ke under a mulch.
 *
 *   plastic: 1 − cover, only the open share evaporates; organic: 1 − 0.5 · cover
 *
 * The basal coefficient stays as it is: FAO-56 finds transpiration under plastic no lower, its printed 10–30 % are of the single Kc.
 * Missing: NaN gives NaN.
 *
 * @returns 0 … 1
 * @example mulchEvaporationShare({ kind: 'organic', cover: 0.5 }) // 0.75
 * Source: FAO-56 chapter 10 (recalled).
 */
export function mulchEvaporationShare({ kind, cover }: MulchCover): number {
  return kind === 'plastic' ? 1 - cover : 1 - ORGANIC_SHARE * cover;
}

/**
 * Share of the surface that dries under a mulch, and whose depletion the surface layer keeps account of.
 *
 *   plastic: 1 − cover, the ground under it does not dry; organic: 1, the whole surface dries, only slower
 *
 * So plastic saves evaporation for good, organic mulch delays it and saves less over a long drying.
 * Missing: NaN gives NaN for plastic.
 *
 * @returns 0 … 1
 * @example mulchOpenShare({ kind: 'plastic', cover: 0.75 }) // 0.25
 * Source: reading of FAO-56 chapter 10 (recalled); choice of ours for the surface layer.
 */
export function mulchOpenShare({ kind, cover }: MulchCover): number {
  return kind === 'plastic' ? 1 - cover : 1;
}

/**
 * Single coefficient under a mulch.
 *
 *   plastic: Kc (1 − 0.3 · cover); organic: Kcb + (Kc − Kcb)(1 − 0.5 · cover), so that only the evaporation in it falls
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param single Kc without mulch [1]
 * @param basal Kcb of the same stage [1]
 * @returns [1]
 * @example mulchedSingle(1, 0.9, { kind: 'plastic', cover: 1 }) // 0.7
 * Source: FAO-56 chapter 10 (recalled); the proportion to cover is a choice of ours.
 */
export function mulchedSingle(single: number, basal: number, mulch: MulchCover): number {
  if (mulch.kind === 'plastic') return single * (1 - PLASTIC_SINGLE * mulch.cover);
  return basal + (single - basal) * mulchEvaporationShare(mulch);
}
