/**
 * Wind speed brought to the 2 m over clipped grass that the reference equations ask for.
 */
import { RangeViolation } from '../base/errors.ts';

/** Lowest anemometer height for which the profile is used [m]; below it the anemometer stands in the grass layer. */
export const LOWEST_WIND_HEIGHT = 0.5;

/**
 * Factor from wind speed at a height to wind speed at 2 m, over grass, from the logarithmic profile.
 *   u2 / uz = 4.87 / ln(67.8 z − 5.42)
 *
 * @param height of the anemometer above ground [m]; NaN gives NaN
 * @returns factor [1]
 * @throws {RangeViolation} when the height is below 0.5 m
 * @example windProfileFactor(10) // 0.748
 * Source: FAO-56 Eq. 47.
 */
export function windProfileFactor(height: number): number {
  if (height < LOWEST_WIND_HEIGHT) {
    throw new RangeViolation(
      `wind height ${height} m below limit ${LOWEST_WIND_HEIGHT} m: give the height of the anemometer above ground in metres`,
    );
  }
  return height === 2 ? 1 : 4.87 / Math.log(67.8 * height - 5.42);
}

/**
 * Wind speed at 2 m from wind speed at another height.
 *
 * @param windSpeed at `height` [m s⁻¹]
 * @returns u2 [m s⁻¹]; NaN in gives NaN out
 * @throws {RangeViolation} when the height is below 0.5 m
 * @example windSpeedAt2m(3.2, 10) // 2.4
 * Source: FAO-56 Eq. 47.
 */
export function windSpeedAt2m(windSpeed: number, height: number): number {
  return windSpeed * windProfileFactor(height);
}

/**
 * Wind speed at a height from wind speed at 2 m; the inverse of `windSpeedAt2m`.
 *
 * @example windSpeedFrom2m(2.3934, 10) // 3.2
 * Source: FAO-56 Eq. 47, solved for uz.
 */
export function windSpeedFrom2m(windSpeed2m: number, height: number): number {
  return windSpeed2m / windProfileFactor(height);
}
