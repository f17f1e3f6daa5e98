/**
 * Change of a series with elevation, fitted to the sites themselves. The trend moves a site's value to the elevation of the parcel; it does
 * not change how much the site weighs.
 */
import { ShapeError } from '../base/errors.ts';
import type { CarriedSeries } from './variable.ts';

/** Fewest sites with a known elevation for a slope. With fewer, one odd site makes it (common practice, no source). */
export const FEWEST_TREND_SITES = 4;
/** Least spread of their elevations [m]: a slope over less is reading noise as height (common practice, no source). */
export const LEAST_ELEVATION_SPREAD = 50;

/**
 * Series that can be moved along an elevation trend by adding to them. Rain cannot: an amount added by height would fall on dry days too.
 */
export function takesElevationTrend(series: CarriedSeries): boolean {
  return series !== 'precipitation';
}

export interface TrendField {
  /** one per site [m]; NaN when unknown */
  readonly elevations: ArrayLike<number>;
  /** [site × day], NaN where missing */
  readonly values: ArrayLike<number>;
  readonly dayCount: number;
}

/** A fitted slope, and the slopes without each site, for its cross-check. */
export interface ElevationTrend {
  /** [unit of the series per m]; NaN when there is none to fit */
  readonly gradient: number;
  /** gradient fitted without each site in turn, [site] */
  readonly without: Float64Array;
}

/**
 * Slope of a series on elevation, over all days together: each day has its own level, so the weather of the day does not enter.
 *   g = Σd Σs (z − z̄d)(x − x̄d) / Σd Σs (z − z̄d)², means over the sites with a value on the day
 *
 * @returns NaN for a slope with fewer than four sites of known elevation, or elevations within 50 m
 * @throws {ShapeError} when values are not sites × days
 * Source: least squares with a level per day (within-group regression), textbook algebra.
 */
export function elevationTrend({ elevations, values, dayCount }: TrendField): ElevationTrend {
  const siteCount = elevations.length;
  if (values.length !== siteCount * dayCount) throw new ShapeError(`${values.length} values for ${siteCount} sites × ${dayCount} days`);
  const whole = { above: 0, below: 0 };
  const without = Array.from({ length: siteCount }, () => ({ above: 0, below: 0 }));
  for (let day = 0; day < dayCount; day++) addDay({ elevations, values, dayCount }, day, whole, without);
  const gradient = isSpread(elevations, -1) ? slopeOf(whole) : Number.NaN;
  return {
    gradient,
    without: Float64Array.from(without, (sums, site) => (isSpread(elevations, site) ? slopeOf(sums) : Number.NaN)),
  };
}

interface Sums {
  above: number;
  below: number;
}

function slopeOf({ above, below }: Sums): number {
  return below > 0 ? above / below : Number.NaN;
}

function addDay({ elevations, values, dayCount }: TrendField, day: number, whole: Sums, without: Sums[]): void {
  const sums = { n: 0, z: 0, x: 0, zz: 0, zx: 0 };
  // counted from the first site's elevation, so that the squares stay small
  const base = firstKnown(elevations);
  const has = (site: number) => !Number.isNaN(elevations[site]) && !Number.isNaN(values[site * dayCount + day]);
  for (let site = 0; site < without.length; site++) if (has(site)) add(sums, elevations[site] - base, values[site * dayCount + day], 1);
  addCentred(whole, sums);
  for (let site = 0; site < without.length; site++) {
    if (!has(site)) {
      addCentred(without[site], sums);
      continue;
    }
    const [z, x] = [elevations[site] - base, values[site * dayCount + day]];
    add(sums, z, x, -1);
    addCentred(without[site], sums);
    add(sums, z, x, 1);
  }
}

function add(sums: { n: number; z: number; x: number; zz: number; zx: number }, z: number, x: number, sign: 1 | -1): void {
  sums.n += sign;
  sums.z += sign * z;
  sums.x += sign * x;
  sums.zz += sign * z * z;
  sums.zx += sign * z * x;
}

function addCentred(into: Sums, { n, z, x, zz, zx }: { n: number; z: number; x: number; zz: number; zx: number }): void {
  if (n < 2) return;
  into.above += zx - (z * x) / n;
  into.below += zz - (z * z) / n;
}

function firstKnown(elevations: ArrayLike<number>): number {
  for (let site = 0; site < elevations.length; site++) if (!Number.isNaN(elevations[site])) return elevations[site];
  return 0;
}

/** Whether the sites, one left out, are enough and far enough apart in height for a slope. */
function isSpread(elevations: ArrayLike<number>, leftOut: number): boolean {
  let [count, low, high] = [0, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
  for (let site = 0; site < elevations.length; site++) {
    if (site === leftOut || Number.isNaN(elevations[site])) continue;
    count++;
    low = Math.min(low, elevations[site]);
    high = Math.max(high, elevations[site]);
  }
  return count >= FEWEST_TREND_SITES - (leftOut < 0 ? 0 : 1) && high - low >= LEAST_ELEVATION_SPREAD;
}
