/**
 * Ordinary kriging: the weights that make the expected squared error least under a semivariogram, with the error they leave.
 *
 *   [Γ 1; 1ᵀ 0] [w; μ] = [γ; 1],  σ² = Σ wi γi + μ
 *
 * Γ between the sites, γ from the sites to the place. At most the eight nearest sites are taken. The matrix depends on the set of sites alone, so its inverse
 * is kept per set: many parcels share few sets.
 *
 * Source: Isaaks & Srivastava (1989), An Introduction to Applied Geostatistics, chapter 12 (recalled); Cressie (1993), Statistics for Spatial Data, section 3.2 (recalled).
 */
import { inverse, Matrix } from 'ml-matrix';
import { distanceBetween, inverseDistanceOf, MAXIMUM_SITES, type NearSite, ON_SITE, type PlacedSites } from './interpolation.ts';
import type { SiteWeight } from './variable.ts';
import { semivariance, type VariogramModel } from './variogram.ts';

/** Weights of one place. The variance is in unit² of the series, NaN where the system could not be solved. */
export interface KrigingWeights {
  readonly weights: SiteWeight[];
  readonly variance: number;
  /** false: the system could not be solved and the weights are by inverse distance, power 2 */
  readonly solved: boolean;
}

/** A set of sites under one model, with the inverses made so far. */
export interface Kriging {
  readonly sites: PlacedSites;
  readonly model: VariogramModel;
  readonly inverses: Map<SiteSet, Float64Array | null>;
  readonly sets: SiteSets;
}

/** Places that stand in one system, by the site that stands for each, in the order of the sites. */
interface SiteSet {
  readonly sites: readonly number[];
}

/** What does not depend on the model, shared by every series of a set of sites. */
interface SiteSets {
  readonly limit: number;
  readonly known: Map<string, SiteSet>;
  last: Neighbourhood | null;
}

/** The sites near one place: those at one place together, and the set they make. */
interface Neighbourhood {
  readonly near: readonly NearSite[];
  /** nearest first */
  readonly groups: readonly (readonly NearSite[])[];
  /** place of each group in the set */
  readonly position: readonly number[];
  readonly set: SiteSet;
}

const setsOf = new WeakMap<PlacedSites, SiteSets>();

/** Makes ready to weigh many places. Series of the same placed sites share what depends on places alone. */
export function prepareKriging(sites: PlacedSites, model: VariogramModel): Kriging {
  const sets = setsOf.get(sites) ?? { limit: sites.on === 'sphere' ? ON_SITE : 0, known: new Map(), last: null };
  setsOf.set(sites, sets);
  return { sites, model, sets, inverses: new Map() };
}

/**
 * Ordinary kriging weights of a place over the sites near it.
 *
 * Sites that share one place (less than 1 m apart) stand in the system once and share its weight equally. A place within 1 m of a site is on it and has it alone, with
 * variance 0. Weights may be negative and sum to 1. A system that is singular in double precision falls to inverse distance, power 2.
 *
 * @param near the sites to take, nearest first, at most 8, from `nearSites`
 */
export function krigingWeights(kriging: Kriging, near: readonly NearSite[]): KrigingWeights {
  const around = neighbourhood(kriging, near);
  const { groups, position } = around;
  if (near[0].distance <= kriging.sets.limit) return { weights: shared([], groups[0], 1), variance: 0, solved: true };
  const matrix = inverseOf(kriging, around.set);
  const variance = matrix ? solve(kriging.model, around, matrix) : Number.NaN;
  if (Number.isNaN(variance)) return { weights: inverseDistanceOf(near, 2), variance: Number.NaN, solved: false };
  const weights: SiteWeight[] = [];
  for (let i = 0; i < groups.length; i++) shared(weights, groups[i], scratch.weights[position[i]]);
  return { weights, variance, solved: true };
}

function neighbourhood({ sites, sets }: Kriging, near: readonly NearSite[]): Neighbourhood {
  if (sets.last?.near === near) return sets.last;
  const groups = groupByPlace(sites, near, sets.limit);
  const order = groups.map((_, index) => index).sort((a, b) => groups[a][0].site - groups[b][0].site);
  const key = order.map((index) => groups[index][0].site).join();
  const set = sets.known.get(key) ?? { sites: order.map((index) => groups[index][0].site) };
  sets.known.set(key, set);
  const position = new Array<number>(order.length);
  order.forEach((group, at) => {
    position[group] = at;
  });
  sets.last = { near, groups, position, set };
  return sets.last;
}

/** Sites of one place together, nearest first. Sites at one place are equally far from any other, so only neighbours in the list can be. */
function groupByPlace(sites: PlacedSites, near: readonly NearSite[], limit: number): NearSite[][] {
  const groups: NearSite[][] = [];
  for (const site of near) {
    const group = groups.find(
      ([first]) => site.distance - first.distance <= limit && distanceBetween(sites, first.site, site.site) <= limit,
    );
    if (group) group.push(site);
    else groups.push([site]);
  }
  return groups;
}

function shared(into: SiteWeight[], group: readonly NearSite[], weight: number): SiteWeight[] {
  for (const { site } of group) into.push({ site, weight: weight / group.length });
  return into;
}

/** Inverse of the bordered matrix of a set of places, [(n + 1) × (n + 1)]; null where it is singular. */
function inverseOf({ sites, model, inverses }: Kriging, set: SiteSet): Float64Array | null {
  const known = inverses.get(set);
  if (known !== undefined) return known;
  const n = set.sites.length;
  // semivariances over their scale, so that the border of ones is of the same size as they are
  const scale = scaleOf(model);
  const matrix = Matrix.ones(n + 1, n + 1);
  for (let a = 0; a < n; a++) {
    matrix.set(a, a, 0);
    for (let b = 0; b < a; b++) {
      const value = semivariance(model, distanceBetween(sites, set.sites[a], set.sites[b])) / scale;
      matrix.set(a, b, value);
      matrix.set(b, a, value);
    }
  }
  matrix.set(n, n, 0);
  const made = inverted(matrix);
  inverses.set(set, made);
  return made;
}

function inverted(matrix: Matrix): Float64Array | null {
  try {
    const made = inverse(matrix);
    const residual = Matrix.sub(matrix.mmul(made), Matrix.eye(matrix.rows)).norm();
    return residual < 1e-6 ? Float64Array.from(made.to1DArray()) : null;
  } catch {
    // the library throws for a singular matrix; the caller falls to inverse distance and says so
    return null;
  }
}

function scaleOf({ nugget, partialSill }: VariogramModel): number {
  const sill = nugget + partialSill;
  return sill > 0 ? sill : 1;
}

/** Semivariances to the sites and weights of the place in hand; overwritten by the next one. */
const scratch = { right: new Float64Array(MAXIMUM_SITES + 1), weights: new Float64Array(MAXIMUM_SITES + 1) };

/** Weights by place in the set are left in `scratch.weights`. @returns the variance; NaN where the numbers are none */
function solve(model: VariogramModel, { groups, position }: Neighbourhood, matrix: Float64Array): number {
  const n = groups.length;
  const { right, weights } = scratch;
  const scale = scaleOf(model);
  for (let i = 0; i < n; i++) right[position[i]] = semivariance(model, groups[i][0].distance) / scale;
  right[n] = 1;
  let variance = 0;
  for (let row = 0; row <= n; row++) {
    let sum = 0;
    for (let column = 0; column <= n; column++) sum += matrix[row * (n + 1) + column] * right[column];
    weights[row] = sum;
    variance += sum * right[row];
  }
  return Number.isFinite(variance) ? Math.max(0, variance * scale) : Number.NaN;
}
