/** Experimental semivariograms: of one field, and of many days of a field pooled. */
import { RangeViolation, ShapeError } from '../base/errors.ts';
import { distanceBetween, type PlacedSites } from './interpolation.ts';
import type { VariogramClass } from './variogram.ts';

/** How pairs of sites are sorted by distance: `count` classes of equal width up to `cutoff`, each without its lower and with its upper end. */
export interface ClassPlan {
  /** [m, or the unit of the plane] */
  readonly cutoff: number;
  readonly count: number;
}

/**
 * Semivariogram of one field by classes of distance.
 *   γ = Σ (xi − xj)² / (2 N) over the N pairs of the class
 *
 * @param values one per site, NaN where missing
 * @returns the classes that have pairs, nearest first
 * @throws {ShapeError} when there is not one value per site; {RangeViolation} for a plan without positive cutoff and whole number of classes
 * Source: Matheron (1963), Economic Geology 58, 1246–1266 (recalled).
 */
export function experimentalVariogram(sites: PlacedSites, values: ArrayLike<number>, plan: ClassPlan): VariogramClass[] {
  return pooledVariogram(sites, { values, dayCount: 1, standardise: false }, plan).classes;
}

interface PooledField {
  /** [site × day], NaN where missing */
  readonly values: ArrayLike<number>;
  readonly dayCount: number;
  /** each day's squared differences over that day's variance, the whole times the mean variance: calm days speak as loudly as others */
  readonly standardise: boolean;
}

interface PooledVariogram {
  readonly classes: VariogramClass[];
  /** variance between the sites, mean over the days with at least three of them [unit²] */
  readonly meanVariance: number;
}

/**
 * Semivariogram pooled over the days of a field: squared differences between sites on the same day, averaged over pairs and days.
 *
 * @returns classes whose pair count is that of an average day, rounded up; semivariance [unit²]. A day on which all sites agree has nothing to standardise by
 * and takes part in the mean variance alone.
 * @throws as `experimentalVariogram`
 * Source: pooling of days after Pebesma & Wesseling (1998), Computers & Geosciences 24, 17–31 (recalled), where strata share one variogram.
 */
export function pooledVariogram(sites: PlacedSites, field: PooledField, plan: ClassPlan): PooledVariogram {
  checkField(sites, field, plan);
  const siteCount = sites.sites.length;
  const { scale, meanVariance } = dayScales(siteCount, field);
  const sums = Array.from({ length: plan.count }, () => ({ days: 0, distance: 0, square: 0 }));
  for (let a = 0; a < siteCount; a++) {
    for (let b = a + 1; b < siteCount; b++) {
      const distance = distanceBetween(sites, a, b);
      if (!(distance > 0 && distance <= plan.cutoff)) continue;
      const into = sums[Math.min(plan.count, Math.max(1, Math.ceil((distance * plan.count) / plan.cutoff))) - 1];
      addPair(field, scale, a, b, distance, into);
    }
  }
  const factor = field.standardise ? meanVariance : 1;
  const classes = sums
    .filter(({ days }) => days > 0)
    .map(({ days, distance, square }) => ({
      pairCount: Math.ceil(days / field.dayCount),
      distance: distance / days,
      semivariance: (factor * square) / (2 * days),
    }));
  return { classes, meanVariance };
}

function addPair(
  { values, dayCount }: PooledField,
  scale: Float64Array,
  a: number,
  b: number,
  distance: number,
  into: { days: number; distance: number; square: number },
): void {
  for (let day = 0; day < dayCount; day++) {
    const square = (values[a * dayCount + day] - values[b * dayCount + day]) ** 2 * scale[day];
    if (Number.isNaN(square)) continue;
    into.days++;
    into.distance += distance;
    into.square += square;
  }
}

/** 1 over the variance of each day's field, NaN for a day that cannot be standardised; 1 throughout where days are taken as they are. */
function dayScales(siteCount: number, { values, dayCount, standardise }: PooledField): { scale: Float64Array; meanVariance: number } {
  const scale = new Float64Array(dayCount).fill(1);
  let [sum, days] = [0, 0];
  for (let day = 0; day < dayCount; day++) {
    const variance = varianceOfDay(siteCount, values, dayCount, day);
    if (!Number.isNaN(variance)) {
      sum += variance;
      days++;
    }
    if (standardise) scale[day] = variance > 1e-12 ? 1 / variance : Number.NaN;
  }
  return { scale, meanVariance: days > 0 ? sum / days : Number.NaN };
}

/** Sample variance between the sites on a day; NaN with fewer than three of them. */
function varianceOfDay(siteCount: number, values: ArrayLike<number>, dayCount: number, day: number): number {
  let [count, mean, square] = [0, 0, 0];
  for (let site = 0; site < siteCount; site++) {
    const value = values[site * dayCount + day];
    if (Number.isNaN(value)) continue;
    count++;
    const step = value - mean;
    mean += step / count;
    square += step * (value - mean);
  }
  return count >= 3 ? square / (count - 1) : Number.NaN;
}

/** Fewest pairs within half the largest distance for it to be the cutoff. */
const PAIRS_WITHIN_HALF = 30;
const MOST_CLASSES = 15;
/** Pairs that a class should have on average. */
const PAIRS_PER_CLASS = 4;

/**
 * Classes for a set of sites: up to half the largest distance where 30 pairs lie within it (Journel & Huijbregts 1978, Mining Geostatistics, section
 * III.42: at least 30 pairs, and no further than half the field; recalled), up to the largest distance where sites are few.
 *
 * @returns null when fewer than two sites with a known place lie apart
 */
export function classPlan(sites: PlacedSites): ClassPlan | null {
  const distances: number[] = [];
  for (let a = 0; a < sites.sites.length; a++) {
    for (let b = a + 1; b < sites.sites.length; b++) {
      const distance = distanceBetween(sites, a, b);
      if (distance > 0) distances.push(distance);
    }
  }
  if (distances.length === 0) return null;
  const largest = distances.reduce((x, y) => Math.max(x, y));
  const half = distances.filter((distance) => distance <= largest / 2).length;
  const [cutoff, pairs] = half >= PAIRS_WITHIN_HALF ? [largest / 2, half] : [largest, distances.length];
  return { cutoff, count: Math.max(3, Math.min(MOST_CLASSES, Math.floor(pairs / PAIRS_PER_CLASS))) };
}

function checkField(sites: PlacedSites, { values, dayCount }: PooledField, { cutoff, count }: ClassPlan): void {
  if (values.length !== sites.sites.length * dayCount) {
    throw new ShapeError(`${values.length} values for ${sites.sites.length} sites × ${dayCount} days`);
  }
  if (!(cutoff > 0 && Number.isInteger(count) && count > 0)) {
    throw new RangeViolation(`${count} classes up to distance ${cutoff}: give a distance above 0 and a whole number of classes above 0`);
  }
}
