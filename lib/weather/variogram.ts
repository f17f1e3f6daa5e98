/**
 * Semivariograms: how the difference between two places grows with their distance. Models and their fit to experimental classes.
 *
 * Conventions, which differ between texts: `range` is the parameter a of the formula. The spherical model reaches its sill at a; the exponential
 * one, 1 − exp(−h/a), comes within 5 % of it at 3a (texts that write 1 − exp(−3h/a) call 3a the range); the Gaussian one, 1 − exp(−(h/a)²), at √3 a.
 * The linear model has no sill: the partial sill is its rise at a.
 *
 * Source: Cressie (1993), Statistics for Spatial Data, section 2.3 (recalled).
 */
import { RangeViolation } from '../base/errors.ts';

export const VARIOGRAM_KINDS = ['nugget', 'linear', 'spherical', 'exponential', 'gaussian'] as const;
export type VariogramKind = (typeof VARIOGRAM_KINDS)[number];

/** A semivariogram model. Nugget and partial sill [unit² of the series], range [m, or the unit of the plane]; `nugget` has no range: NaN. */
export interface VariogramModel {
  readonly kind: VariogramKind;
  readonly nugget: number;
  readonly partialSill: number;
  readonly range: number;
}

/** Pairs of sites about as far apart: how many, their mean distance [m], and half their mean squared difference [unit²]. */
export interface VariogramClass {
  readonly pairCount: number;
  readonly distance: number;
  readonly semivariance: number;
}

/** A model with how well it fits: Σ w (γ class − γ model)² with w = N/h². */
export interface VariogramFit {
  readonly model: VariogramModel;
  readonly weightedSse: number;
}

/** Share of the partial sill that is reached at a distance in ranges, h/a. */
const SHAPES: Record<VariogramKind, (reach: number) => number> = {
  nugget: () => 0,
  linear: (reach) => reach,
  spherical: (reach) => (reach >= 1 ? 1 : 1.5 * reach - 0.5 * reach ** 3),
  exponential: (reach) => 1 - Math.exp(-reach),
  gaussian: (reach) => 1 - Math.exp(-(reach ** 2)),
};

/**
 * Semivariance of a model at a distance.
 *   γ(0) = 0; γ(h) = nugget + partial sill · f(h/a)
 *
 * @param distance h [m, or the unit of the plane], ≥ 0
 * @returns γ [unit²]
 */
export function semivariance({ kind, nugget, partialSill, range }: VariogramModel, distance: number): number {
  if (distance === 0) return 0;
  return kind === 'nugget' ? nugget : nugget + partialSill * SHAPES[kind](distance / range);
}

/**
 * Fits one kind of model to classes by least squares with weights N/h², nugget and partial sill held at or above 0. For a given range the
 * model is linear in the two others, so the search is over the range alone: a scan, then a golden section around its least value.
 *
 * @param classes at least one with pairs; as from `experimentalVariogram`
 * @throws {RangeViolation} when no class has pairs at a distance above 0
 * Source: weights after Cressie (1985), Mathematical Geology 17, 563–586, as N/h² (recalled); variable projection after Golub & Pereyra (1973), SIAM
 * Journal on Numerical Analysis 10, 413–432 (recalled).
 */
export function fitVariogram(classes: readonly VariogramClass[], kind: VariogramKind): VariogramFit {
  const used = classes.filter(({ pairCount, distance, semivariance: gamma }) => pairCount > 0 && distance > 0 && Number.isFinite(gamma));
  if (used.length === 0)
    throw new RangeViolation('no class of the semivariogram has pairs of sites apart: give at least two sites at different places');
  const distances = used.map(({ distance }) => distance);
  const [least, greatest] = [Math.min(...distances), Math.max(...distances)];
  const at = (range: number) => fitSills(used, kind, range);
  if (kind === 'nugget') return at(Number.NaN);
  if (kind === 'linear') return at(greatest);
  return leastOverRange(at, least / 5, 12 * greatest);
}

/** Ranges tried in the scan. */
const SCAN_STEPS = 160;

function leastOverRange(at: (range: number) => VariogramFit, low: number, high: number): VariogramFit {
  const step = (high / low) ** (1 / SCAN_STEPS);
  let best = at(low);
  for (let i = 1; i <= SCAN_STEPS; i++) {
    const fit = at(low * step ** i);
    if (fit.weightedSse < best.weightedSse) best = fit;
  }
  return goldenSection(at, best.model.range / step, best.model.range * step);
}

function goldenSection(at: (range: number) => VariogramFit, from: number, to: number): VariogramFit {
  const golden = (Math.sqrt(5) - 1) / 2;
  let [low, high] = [from, to];
  while (high - low > 1e-9 * high) {
    const third = golden * (high - low);
    if (at(high - third).weightedSse <= at(low + third).weightedSse) high = low + third;
    else low = high - third;
  }
  return at((low + high) / 2);
}

/** Nugget and partial sill, both ≥ 0, that fit best at one range: the free solution, or the better of the two with one of them at 0. */
function fitSills(classes: readonly VariogramClass[], kind: VariogramKind, range: number): VariogramFit {
  const sums = { w: 0, wf: 0, wff: 0, wg: 0, wfg: 0 };
  const shape = kind === 'nugget' ? () => 0 : (h: number) => SHAPES[kind](h / range);
  for (const { pairCount, distance, semivariance: gamma } of classes) {
    const w = pairCount / distance ** 2;
    const f = shape(distance);
    sums.w += w;
    sums.wf += w * f;
    sums.wff += w * f * f;
    sums.wg += w * gamma;
    sums.wfg += w * f * gamma;
  }
  const determinant = sums.w * sums.wff - sums.wf ** 2;
  const free =
    determinant > 1e-12 * sums.w * sums.wff
      ? [(sums.wff * sums.wg - sums.wf * sums.wfg) / determinant, (sums.w * sums.wfg - sums.wf * sums.wg) / determinant]
      : [-1, -1];
  const bounded = [
    [sums.wg / sums.w, 0],
    [0, sums.wff > 0 ? sums.wfg / sums.wff : 0],
  ];
  const candidates = free[0] >= 0 && free[1] >= 0 ? [free] : bounded;
  const fits = candidates.map(([nugget, partialSill]) => {
    const model = { kind, nugget, partialSill, range };
    return { model, weightedSse: weightedSse(classes, model) };
  });
  return fits.reduce((a, b) => (b.weightedSse < a.weightedSse ? b : a));
}

function weightedSse(classes: readonly VariogramClass[], model: VariogramModel): number {
  return classes.reduce(
    (sum, { pairCount, distance, semivariance: gamma }) => sum + (pairCount / distance ** 2) * (gamma - semivariance(model, distance)) ** 2,
    0,
  );
}

/** A Gaussian model with less nugget than this share of its sill makes kriging systems that cannot be solved in double precision. */
const LEAST_GAUSSIAN_NUGGET = 0.001;

/**
 * The kind that fits best by weighted squares, simplest first where they tie. Three-parameter kinds need at least four classes; a Gaussian model
 * needs a nugget of at least 0.1 % of its sill (common practice, no source: without one its systems are near singular).
 */
export function chooseVariogram(classes: readonly VariogramClass[]): VariogramFit {
  const kinds = classes.length >= 4 ? VARIOGRAM_KINDS : (['nugget', 'linear'] as const);
  return kinds
    .map((kind) => fitVariogram(classes, kind))
    .filter(({ model }) => model.kind !== 'gaussian' || model.nugget >= LEAST_GAUSSIAN_NUGGET * (model.nugget + model.partialSill))
    .filter(({ model }) => model.kind === 'nugget' || model.partialSill > 0)
    .reduce((a, b) => (b.weightedSse < a.weightedSse * (1 - 1e-9) ? b : a));
}
