/** The sun by the clock. */
import { seasonalTimeCorrection } from './sun.ts';

/**
 * Clock time of solar noon.
 *   t = 12 − [0.06667 (Lm − Lz) + Sc], longitudes east, Lz = 15 × zone
 *
 * @param longitude of the place [degrees east]
 * @param zoneHours standard time [h east of UTC]
 * @returns standard clock time [h]
 * Source: FAO-56 Eq. 31 for ω = 0, there with longitudes counted west.
 */
export function solarNoon(dayOfYear: number, longitude: number, zoneHours: number): number {
  return 12 - (0.06667 * (longitude - 15 * zoneHours) + seasonalTimeCorrection(dayOfYear));
}
