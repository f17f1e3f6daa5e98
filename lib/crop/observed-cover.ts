/**
 * From a vegetation index seen from above to cover, and from cover to a basal coefficient; and the curve that follows what was observed.
 */
import { densityCoefficient, fullCoverBasalInClimate } from './canopy.ts';
import { BARE_SOIL_COEFFICIENT } from './cover.ts';

/**
 * Fraction of ground covered from the normalised difference vegetation index.
 *
 *   fc = 1.26 NDVI − 0.18, held in 0 … 1
 *
 * Found on row and tree crops of the San Joaquin Valley with surface reflectance of Landsat; other sensors, and indices without correction for the
 * atmosphere, have other lines. Valid: NDVI 0.14 (bare) to about 0.94.
 * Missing: NaN gives NaN.
 *
 * @param index NDVI of surface reflectance [1]
 * @returns 0 … 1
 * @example coverFromIndex(0.5) // 0.45
 * Source: Johnson & Trout (2012), Remote Sensing 4, 439–455 (recalled, not re-read).
 */
export function coverFromIndex(index: number): number {
  return Math.min(1, Math.max(0, 1.26 * index - 0.18));
}

export interface ObservedCanopy {
  /** fc [1] */
  readonly cover: number;
  /** h [m] */
  readonly height: number;
  /** Fr of stomatal control; left out: 1 */
  readonly stomatalFactor?: number;
}

/**
 * Basal coefficient from observed cover.
 *
 *   Kcb = Kc min + Kd (Fr Kcb full − Kc min), Kd = min(1, 2 fc, fc^(1 / (1 + h)))
 *
 * Missing: NaN in any input gives NaN out. Accuracy: the authors give 10 to 15 % for field crops (recalled); a dry or ageing canopy transpires less than
 * its cover says.
 *
 * @param canopy cover and height, stomatal factor for trees
 * @param climate `climateTerm` of the days around the image; 0 in the standard climate
 * @returns [1]
 * @example basalFromCover({ cover: 0, height: 1 }) // 0.15
 * Source: Allen & Pereira (2009), Irrigation Science 28, 17–34, Eq. 5 and 10 (recalled); FAO-56 Eq. 98 and 99 (recalled).
 */
export function basalFromCover(canopy: ObservedCanopy, climate = 0): number {
  const full = (canopy.stomatalFactor ?? 1) * fullCoverBasalInClimate(canopy.height, climate);
  const above = Math.max(0, full - BARE_SOIL_COEFFICIENT);
  return BARE_SOIL_COEFFICIENT + densityCoefficient(Math.min(1, Math.max(0, canopy.cover)), canopy.height) * above;
}

/** Values on days, ascending; offsets from the first day of the run. */
export interface Observed {
  readonly days: readonly number[];
  readonly values: readonly number[];
}

/**
 * Lays observed basal coefficients over the curve of a planting that stands on days `from … to − 1`.
 *
 * Between observations: linear. Before the first: the calendar's curve, moved by the difference on that day, which fades to nothing at
 * the planting; after the last likewise to the harvest. Observations outside the planting do not count; with none the curve stays. Never below 0.
 *
 * @param basal curve of the calendar [day], changed in place
 * @returns number of observations used
 * Source: linear between images is common practice, no source; the bridging at both ends is a choice of ours.
 */
export function layObserved(basal: Float64Array, from: number, to: number, observed: Observed): number {
  const { days, values } = observed;
  let first = 0;
  while (first < days.length && days[first] < from) first++;
  let end = first;
  while (end < days.length && days[end] < to) end++;
  if (end === first) return 0;
  const [start, stop] = [Math.max(0, from), Math.min(basal.length, to)];
  const last = end - 1;
  bridge(basal, { from: start, to: Math.min(stop, days[first]), zero: from, full: days[first] }, values[first] - at(basal, days[first]));
  bridge(basal, { from: Math.max(start, days[last] + 1), to: stop, zero: to, full: days[last] }, values[last] - at(basal, days[last]));
  for (let k = first; k <= last; k++) {
    const next = Math.min(k + 1, last);
    const span = days[next] - days[k];
    for (let d = Math.max(start, days[k]); d <= Math.min(stop - 1, days[next]); d++) {
      const share = span > 0 ? (d - days[k]) / span : 0;
      basal[d] = values[k] + share * (values[next] - values[k]);
    }
  }
  return end - first;
}

/** The curve on a day; a day outside the run has its nearest day's. */
function at(basal: Float64Array, day: number): number {
  return basal[Math.min(basal.length - 1, Math.max(0, day))];
}

/** Adds a difference that is whole on day `full` and nothing on day `zero`. */
function bridge(
  basal: Float64Array,
  { from, to, zero, full }: { from: number; to: number; zero: number; full: number },
  difference: number,
): void {
  for (let d = from; d < to; d++) basal[d] = Math.max(0, basal[d] + (difference * (d - zero)) / (full - zero));
}
