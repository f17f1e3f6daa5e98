/**
 * Crop coefficients by the surface of the reference ET they are meant for. A coefficient on tall (alfalfa) reference ET is about a fifth
 * lower than one on short (grass) reference ET; the types keep the two apart.
 */
import { heightFactor } from './climate-adjustment.ts';

declare const ofSurface: unique symbol;

/** Coefficient to multiply with short reference ET. A plain number counts as one: the run and the library are on short reference ET. */
export type ShortCoefficient = number & { readonly [ofSurface]?: 'short' };

/** Coefficient to multiply with tall reference ET. The compiler refuses it where a short one is wanted. */
export type TallCoefficient = number & { readonly [ofSurface]: 'tall' };

/** Says of a number from a table on tall reference ET that it is one. */
export function tallCoefficient(value: number): TallCoefficient {
  return value as TallCoefficient;
}

/** (h/3)^0.3 of alfalfa, h = 0.5 m (FAO-56 Eq. 68). */
const TALL_HEIGHT_FACTOR = heightFactor(0.5);

/**
 * Tall over short reference ET from the climate part of the day, `climateTerm`; the same as `tallToShortRatio` of its wind and humidity.
 *
 *   K = 1.2 + climate · (0.5/3)^0.3
 *
 * Missing: NaN gives NaN.
 *
 * @returns [1]
 * @example tallRatio(0) // 1.2
 * Source: FAO-56 Eq. 68.
 */
export function tallRatio(climate: number): number {
  return 1.2 + climate * TALL_HEIGHT_FACTOR;
}

/**
 * A coefficient on tall reference ET turned into one on short reference ET.
 *
 *   Kc short = K · Kc tall
 *
 * Missing: NaN in any input gives NaN out.
 *
 * @param coefficient on tall reference ET [1]
 * @param ratio tall over short reference ET of the day, `tallRatio` [1]
 * @returns on short reference ET [1]
 * @example shortFromTall(tallCoefficient(1), 1.2) // 1.2
 * Source: FAO-56 Eq. 67.
 */
export function shortFromTall(coefficient: TallCoefficient, ratio: number): ShortCoefficient {
  return coefficient * ratio;
}
