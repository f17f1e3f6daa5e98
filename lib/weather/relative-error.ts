/**
 * How far a carried series is off, as a share of its own size: from leaving one site out, and from the years on record.
 */
import { distanceBetween, inverseDistanceOf, type NearSite, type PlacedSites, placeSites } from './interpolation.ts';
import type { Site } from './variable.ts';

/** A relative error with its memory. NaN where nothing could be compared. */
export interface RelativeError {
  /** root of the mean squared error over the mean value */
  readonly deviation: number;
  /** correlation of the errors of two days in a row, 0–1 */
  readonly persistence: number;
  /** values compared */
  readonly n: number;
}

const NOTHING: RelativeError = { deviation: Number.NaN, persistence: Number.NaN, n: 0 };

/** Most sites left out, spread over the list: enough to tell an error, and done in a moment. */
const MOST_LEFT_OUT = 60;

/** A day in a row's memory stays below this: an error that never changes could not be drawn day by day. */
const MOST_PERSISTENCE = 0.98;

/**
 * Error of a series at sites that are left out in turn and estimated from the others by inverse distance.
 *
 * A constant bias of a site counts as error that persists: the correlation is taken about zero, not about the mean. Sites lie further from each other
 * than parcels from their sites, so the error is rather too wide.
 *
 * @param values [site × day], NaN where missing
 * @param how exponent of the distance and most sites
 * Source: leave-one-out as in `cross-validation.ts`; the correlation is the lag-1 product moment over the pairs of days.
 */
export function leaveOneOutError(
  sites: readonly Site[],
  values: Float64Array,
  dayCount: number,
  how: { readonly power: number; readonly maximumSites: number },
): RelativeError {
  const placed = placeSites(sites);
  const step = Math.max(1, Math.ceil(sites.length / MOST_LEFT_OUT));
  const sums = emptySums();
  const errors = new Float64Array(dayCount);
  for (let left = 0; left < sites.length; left += step) {
    const near = others(placed, left);
    if (near.length === 0) continue;
    for (let day = 0; day < dayCount; day++) {
      const own = values[left * dayCount + day];
      errors[day] = estimateOf(near, values, dayCount, day, how) - own;
      if (!Number.isNaN(errors[day])) sums.total += own;
    }
    addErrors(sums, errors);
  }
  return errorOf(sums);
}

/** Sites with a known place but this one, nearest first. */
function others(placed: PlacedSites, left: number): NearSite[] {
  return placed.sites
    .map((_, site) => ({ site, distance: distanceBetween(placed, left, site) }))
    .filter(({ site, distance }) => site !== left && !Number.isNaN(distance))
    .sort((a, b) => a.distance - b.distance || a.site - b.site);
}

/** From the nearest that report on the day; NaN where none does. */
function estimateOf(
  near: readonly NearSite[],
  values: Float64Array,
  dayCount: number,
  day: number,
  { power, maximumSites }: { readonly power: number; readonly maximumSites: number },
): number {
  const reporting = near.filter(({ site }) => !Number.isNaN(values[site * dayCount + day])).slice(0, maximumSites);
  if (reporting.length === 0) return Number.NaN;
  return inverseDistanceOf(reporting, power).reduce((sum, { site, weight }) => sum + weight * values[site * dayCount + day], 0);
}

/**
 * Spread of the years about their mean on each calendar day: what a normal of the day misses by.
 *
 * @param years each [day], the same calendar days of different years; NaN where a year has none. Days with fewer than two years are left out
 * Source: unbiased variance between years (n − 1), pooled over the days.
 */
export function spreadOfYears(years: readonly Float64Array[]): RelativeError {
  if (years.length < 2) return NOTHING;
  const sums = emptySums();
  const days = years[0].length;
  const anomalies = years.map(() => new Float64Array(days).fill(Number.NaN));
  for (let day = 0; day < days; day++) {
    const known = years.filter((year) => !Number.isNaN(year[day]));
    if (known.length < 2) continue;
    const mean = known.reduce((sum, year) => sum + year[day], 0) / known.length;
    const widened = Math.sqrt(known.length / (known.length - 1));
    years.forEach((year, index) => {
      anomalies[index][day] = widened * (year[day] - mean);
    });
    sums.total += mean * known.length;
  }
  for (const year of anomalies) addErrors(sums, year);
  return errorOf(sums);
}

function emptySums() {
  return { total: 0, squares: 0, count: 0, products: 0, pairSquares: 0 };
}

function addErrors(sums: ReturnType<typeof emptySums>, errors: Float64Array): void {
  for (let day = 0; day < errors.length; day++) {
    const error = errors[day];
    if (Number.isNaN(error)) continue;
    sums.squares += error * error;
    sums.count++;
    const before = day === 0 ? Number.NaN : errors[day - 1];
    if (Number.isNaN(before)) continue;
    sums.products += error * before;
    sums.pairSquares += (error * error + before * before) / 2;
  }
}

function errorOf({ total, squares, count, products, pairSquares }: ReturnType<typeof emptySums>): RelativeError {
  if (count === 0 || !(total > 0)) return NOTHING;
  const persistence = pairSquares > 0 ? Math.min(MOST_PERSISTENCE, Math.max(0, products / pairSquares)) : 0;
  return { deviation: Math.sqrt(squares / count) / (total / count), persistence, n: count };
}
