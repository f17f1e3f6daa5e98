/** Every decision laid over the raw record: single variables first, then adjustments for dry surroundings. */
import { type Correction, layCorrections } from '../weather/quality/correction.ts';
import type { SiteObservations } from '../weather/variable.ts';
import { layAridity } from './quality-aridity.ts';

/**
 * The record as decided: corrected values and their quality. The raw observations are never changed, and without decisions they are
 * returned as they are.
 *
 * @param corrections standing ones, in the order in which they were made
 * @param defaultElevation of a site that does not state its own [m]
 */
export function applyCorrections(
  observations: SiteObservations,
  corrections: readonly Correction[],
  defaultElevation: number,
): SiteObservations {
  if (corrections.length === 0) return observations;
  return layAridity(layCorrections(observations, corrections), corrections, defaultElevation);
}
