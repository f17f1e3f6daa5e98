/**
 * Weeds on ground between crops.
 */
import { canopyBasal } from './canopy.ts';

/** Cover and height that weeds are taken to have on fallow ground. Common practice, no source: about a third of the ground, a hand high. */
export const WEED_COVER = 0.3;
export const WEED_HEIGHT = 0.2;

/**
 * Kcb of weeds on fallow ground, from their cover and height, in the standard climate.
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param cover fc [1]
 * @param height h [m]
 * @returns [1]
 * @example weedBasal(0, 0.2) // 0.15
 * Source: FAO-56 chapter 11 (weeds outside the growing season by cover, Eq. 97 and 98, recalled).
 */
export function weedBasal(cover = WEED_COVER, height = WEED_HEIGHT): number {
  return canopyBasal({ cover, height }, 0);
}
