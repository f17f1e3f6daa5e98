/**
 * Leave-one-out: every site in turn is estimated from the others, by each way of carrying weather, and held against what it measured.
 *
 * Nothing is fitted again without the site but the elevation trend; the semivariogram is that of all sites. Only measured values are held against:
 * a filled or estimated value takes part in the estimates, as it does in a run, but says nothing about their error. Every way is judged on the same site-days.
 *
 * Source: leave-one-out and the mean squared deviation ratio after Webster & Oliver (2007), Geostatistics for Environmental Scientists, section 8.6 (recalled).
 */
import { type ElevationTrend, elevationTrend, takesElevationTrend } from './elevation-trend.ts';
import { distanceBetween, inverseDistanceOf, type NearSite, type PlacedSites, placeSites } from './interpolation.ts';
import { type Carry, carriesToCheck, carryId, FEWEST_KRIGING_SITES } from './interpolation-method.ts';
import { krigingWeights, prepareKriging } from './kriging.ts';
import type { CarriedSeries, Site, SiteWeight } from './variable.ts';
import type { VariogramClass } from './variogram.ts';
import { chooseVariogram, type VariogramFit } from './variogram.ts';
import { type ClassPlan, classPlan, pooledVariogram } from './variogram-classes.ts';

/** Most sites that kriging takes. */
export const KRIGING_SITES = 8;

export interface SeriesToCheck {
  readonly series: CarriedSeries;
  /** [site × day], NaN where missing */
  readonly values: Float64Array;
  /** 1 where the value was measured, [site × day]; left out: every value */
  readonly measured?: Uint8Array;
}

export interface CrossValidationInput {
  readonly sites: readonly Site[];
  readonly dayCount: number;
  readonly series: readonly SeriesToCheck[];
  /** most sites of inverse distance, 1–8 */
  readonly maximumSites: number;
  /** Γ [°C m⁻¹], positive when it gets colder upwards */
  readonly lapseRate: number;
  /** places of the sites where they are not those of their longitude and latitude: points of a plane */
  readonly placed?: PlacedSites;
}

/** Errors of estimate less measurement, in the unit of the series. NaN where nothing could be compared. */
export interface CarryErrors {
  /** values compared */
  readonly n: number;
  readonly bias: number;
  readonly rmse: number;
  readonly mae: number;
}

export interface CheckedCarry extends CarryErrors {
  readonly carry: Carry;
  readonly id: string;
  /** mean of squared error over kriging variance, 1 where the variance tells the error rightly; NaN for other methods */
  readonly msdr: number;
  /** the same by site, in the order of the sites */
  readonly sites: readonly CarryErrors[];
}

/** The semivariogram behind kriging with one trend, of what the trend leaves. */
export interface PooledModel {
  readonly trend: Carry['trend'];
  readonly classes: readonly VariogramClass[];
  readonly fit: VariogramFit;
}

export interface CheckedSeries {
  readonly series: CarriedSeries;
  /** fitted change with elevation [unit per m]; NaN when there is none */
  readonly gradient: number;
  readonly methods: readonly CheckedCarry[];
  readonly variograms: readonly PooledModel[];
}

/**
 * Every way of carrying each series, checked by leaving out one site at a time.
 *
 * @throws {RangeViolation} from the weights when no site has a known place
 */
export function crossValidate(input: CrossValidationInput): CheckedSeries[] {
  const placed = input.placed ?? placeSites(input.sites);
  const near = neighbours(placed);
  const plan = placedCount(near) >= FEWEST_KRIGING_SITES ? classPlan(placed) : null;
  return input.series.map((series) => checkSeries({ input, placed, near, plan }, series));
}

/** The other sites of each site, nearest first; none where its own place is unknown. */
function neighbours(placed: PlacedSites): NearSite[][] {
  const { sites } = placed;
  return sites.map((_, from) =>
    sites
      .map((_, site) => ({ site, distance: distanceBetween(placed, from, site) }))
      .filter(({ site, distance }) => site !== from && !Number.isNaN(distance))
      .sort((a, b) => a.distance - b.distance || (sites[a.site].code < sites[b.site].code ? -1 : 1)),
  );
}

/** Sites with a known place, those at one place counted once. */
function placedCount(near: readonly (readonly NearSite[])[]): number {
  return near.filter((others, site) => others.length > 0 && !others.some((other) => other.distance === 0 && other.site < site)).length;
}

interface Setting {
  readonly input: CrossValidationInput;
  readonly placed: PlacedSites;
  readonly near: readonly (readonly NearSite[])[];
  readonly plan: ClassPlan | null;
}

function checkSeries(setting: Setting, series: SeriesToCheck): CheckedSeries {
  const { input, plan } = setting;
  const elevations = input.sites.map((site) => site.elevation);
  const trend = elevationTrend({ elevations, values: series.values, dayCount: input.dayCount });
  const temperature = isTemperature(series.series);
  const carries = carriesToCheck({
    temperature,
    fitted: takesElevationTrend(series.series) && !Number.isNaN(trend.gradient),
    kriging: plan !== null,
  });
  const trends = [...new Set(carries.map((carry) => carry.trend))];
  const variograms = plan ? trends.flatMap((name) => pooledModel(setting, series, plan, name, gradientOf(name, trend, input)) ?? []) : [];
  const modelled = new Set(variograms.map((variogram) => variogram.trend));
  const methods = carries
    .filter(({ method, trend: name }) => method !== 'kriging' || modelled.has(name))
    .map((carry) => checkCarry(setting, series, carry, trend, variograms));
  return { series: series.series, gradient: takesElevationTrend(series.series) ? trend.gradient : Number.NaN, methods, variograms };
}

export function isTemperature(series: CarriedSeries): boolean {
  return series === 'airTemperatureMax' || series === 'airTemperatureMin';
}

/** Change with elevation that a trend stands for [unit per m]. */
function gradientOf(name: Carry['trend'], trend: ElevationTrend, input: CrossValidationInput): number {
  return { none: 0, 'lapse-rate': -input.lapseRate, fitted: trend.gradient }[name];
}

/** The field with a gradient taken off; a site of unknown elevation keeps its values. */
export function withoutGradient(values: Float64Array, sites: readonly Site[], gradient: number): Float64Array {
  if (gradient === 0) return values;
  const dayCount = values.length / sites.length;
  return values.map((value, i) => {
    const { elevation } = sites[Math.floor(i / dayCount)];
    return Number.isNaN(elevation) ? value : value - gradient * elevation;
  });
}

function pooledModel(
  { input, placed }: Setting,
  series: SeriesToCheck,
  plan: ClassPlan,
  trend: Carry['trend'],
  gradient: number,
): PooledModel | null {
  const values = withoutGradient(series.values, input.sites, gradient);
  const { classes } = pooledVariogram(placed, { values, dayCount: input.dayCount, standardise: true }, plan);
  return classes.length < 2 || classes.some(({ semivariance }) => Number.isNaN(semivariance))
    ? null
    : { trend, classes, fit: chooseVariogram(classes) };
}

function checkCarry(
  setting: Setting,
  series: SeriesToCheck,
  carry: Carry,
  trend: ElevationTrend,
  variograms: readonly PooledModel[],
): CheckedCarry {
  const { input, near } = setting;
  const kriged = krigedWith(setting, carry, variograms);
  const perSite = near.map((others, site) => {
    const sums = { n: 0, error: 0, square: 0, absolute: 0, ratio: 0 };
    if (others.length === 0) return sums;
    const { weights, variance } = weightsFor(carry, others, input.maximumSites, kriged);
    const gradient = carry.trend === 'fitted' ? trend.without[site] : gradientOf(carry.trend, trend, input);
    addErrors(
      { input, series, site, others, least: kriged ? LEAST_KRIGED_SHARE : 0 },
      weights,
      Number.isNaN(gradient) ? 0 : gradient,
      sums,
    );
    sums.ratio = sums.square / variance;
    return sums;
  });
  const total = perSite.reduce((a, b) => ({
    n: a.n + b.n,
    error: a.error + b.error,
    square: a.square + b.square,
    absolute: a.absolute + b.absolute,
    ratio: a.ratio + (b.n > 0 ? b.ratio : 0),
  }));
  return { carry, id: carryId(carry), ...errorsOf(total), msdr: kriged ? total.ratio / total.n : Number.NaN, sites: perSite.map(errorsOf) };
}

function krigedWith({ placed }: Setting, { method, trend }: Carry, variograms: readonly PooledModel[]) {
  const model = variograms.find((variogram) => variogram.trend === trend);
  return method === 'kriging' && model ? prepareKriging(placed, model.fit.model) : null;
}

function weightsFor(
  { method, power }: Carry,
  others: readonly NearSite[],
  maximumSites: number,
  kriged: ReturnType<typeof krigedWith>,
): { weights: readonly SiteWeight[]; variance: number } {
  if (kriged) return krigingWeights(kriged, others.slice(0, KRIGING_SITES));
  if (method === 'nearest') return { weights: [{ site: others[0].site, weight: 1 }], variance: Number.NaN };
  return { weights: inverseDistanceOf(others.slice(0, maximumSites), power), variance: Number.NaN };
}

interface LeftOut {
  readonly input: CrossValidationInput;
  readonly series: SeriesToCheck;
  readonly site: number;
  readonly others: readonly NearSite[];
  readonly least: number;
}

/**
 * Least share of kriging's weights that must report on a day, because part of a set with negative weights may sum to nearly nothing; below it, and
 * where no site of the others reports, the nearest site with a value stands in. The product's own limit.
 */
const LEAST_KRIGED_SHARE = 0.5;

function addErrors(
  { input, series, site, others, least }: LeftOut,
  weights: readonly SiteWeight[],
  gradient: number,
  sums: { n: number; error: number; square: number; absolute: number },
): void {
  const { sites, dayCount } = input;
  const { values, measured } = series;
  const shift = (from: number) => {
    const rise = sites[site].elevation - sites[from].elevation;
    return Number.isNaN(rise) ? 0 : gradient * rise;
  };
  const shifts = weights.map((entry) => shift(entry.site));
  const floor = isTemperature(series.series) ? Number.NEGATIVE_INFINITY : 0;
  for (let day = 0; day < dayCount; day++) {
    const at = site * dayCount + day;
    if (Number.isNaN(values[at]) || measured?.[at] === 0) continue;
    let [sum, present] = [0, 0];
    for (let k = 0; k < weights.length; k++) {
      const value = values[weights[k].site * dayCount + day];
      if (Number.isNaN(value)) continue;
      sum += weights[k].weight * (value + shifts[k]);
      present += weights[k].weight;
    }
    if (!(present > least)) {
      const other = others.find((candidate) => !Number.isNaN(values[candidate.site * dayCount + day]));
      if (!other) continue;
      sum = values[other.site * dayCount + day] + shift(other.site);
      present = 1;
    }
    const error = Math.max(floor, sum / present) - values[at];
    sums.n++;
    sums.error += error;
    sums.square += error * error;
    sums.absolute += Math.abs(error);
  }
}

function errorsOf({ n, error, square, absolute }: { n: number; error: number; square: number; absolute: number }): CarryErrors {
  return { n, bias: error / n, rmse: Math.sqrt(square / n), mae: absolute / n };
}

/** RMSE nearer to the least than this share of it is a tie, which the simpler way wins. */
const TIE = 1e-9;

/**
 * The way with the lowest RMSE per series; where two tie, the simpler, which comes first in the list.
 *
 * @returns null for a series of which nothing could be compared
 */
export function chooseMethods(checked: readonly CheckedSeries[]): Partial<Record<CarriedSeries, CheckedCarry>> {
  const chosen: Partial<Record<CarriedSeries, CheckedCarry>> = {};
  for (const { series, methods } of checked) {
    const compared = methods.filter(({ n }) => n > 0);
    if (compared.length > 0) chosen[series] = compared.reduce((a, b) => (b.rmse < a.rmse * (1 - TIE) ? b : a));
  }
  return chosen;
}
