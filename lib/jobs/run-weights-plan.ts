/** Which series are carried with weights or a gradient of their own in a run, and why. */
import { nullFromNaN } from '../base/missing.ts';
import { type CheckedCarry, chooseMethods, crossValidate, isTemperature, withoutGradient } from '../weather/cross-validation.ts';
import { elevationTrend, takesElevationTrend } from '../weather/elevation-trend.ts';
import { type PlacedSites, placeSites } from '../weather/interpolation.ts';
import { type Carry, type CarryTrend, carryId, FEWEST_KRIGING_SITES, NO_TREND, TOO_FEW_TO_KRIGE } from '../weather/interpolation-method.ts';
import { type Kriging, prepareKriging } from '../weather/kriging.ts';
import { measuredWhere } from '../weather/measured-values.ts';
import { type CarriedSeries, COMPLETED_SERIES, type CompletedWeather, type GridShape, type Site } from '../weather/variable.ts';
import { chooseVariogram, type VariogramFit } from '../weather/variogram.ts';
import { classPlan, pooledVariogram } from '../weather/variogram-classes.ts';
import type { RunSettings } from './run-settings.ts';

/** One series with a way of its own. */
export interface SeriesPlan {
  readonly series: CarriedSeries;
  /** null: the shared weights, with the gradient of this plan */
  readonly carry: Carry | null;
  /** change with elevation [unit of the series per m] */
  readonly gradient: number;
  readonly kriging: Kriging | null;
  /** chosen, and no other than the shared weights with the lapse rate: nothing has to be kept per parcel */
  readonly asShared: boolean;
  readonly record: SeriesRecord;
}

/** What the manifest says of a series. Semivariances in unit² of the series, errors in its unit. */
export interface SeriesRecord {
  readonly method: string;
  readonly gradient_per_m: number;
  readonly variogram: { kind: string; nugget: number; partial_sill: number; range_m: number | null } | null;
  readonly leave_one_out: { n: number; bias: number | null; rmse: number | null; mae: number | null; msdr: number | null } | null;
}

interface PlanWanted {
  readonly sites: readonly Site[];
  /** indexes of the sites that may speak for a parcel */
  readonly usable: readonly number[];
  /** the sites, those that may not speak without a place */
  readonly placed: PlacedSites;
  readonly grid: GridShape | null;
  readonly settings: Pick<RunSettings, 'interpolation' | 'elevation_trend' | 'power' | 'maximum_sites' | 'lapse_rate_c_per_m'>;
  readonly weather: CompletedWeather | null;
  /** takes sentences on what could not be done as asked */
  readonly notes: string[];
}

/** With the sites that may speak for a parcel by themselves. */
interface PlanInput extends PlanWanted {
  readonly candidates: readonly Site[];
  readonly candidatesPlaced: PlacedSites;
}

/** The series with a way of their own; none where every series goes by the shared weights and the lapse rate. */
export function planSeries(wanted: PlanWanted): SeriesPlan[] {
  const { settings, grid, weather, notes } = wanted;
  const { interpolation, elevation_trend } = settings;
  if (!weather) {
    if (elevation_trend === 'fitted') notes.push('No elevation trend was fitted: the weights were made before the weather was read.');
    return [];
  }
  if (interpolation !== 'kriging' && elevation_trend !== 'fitted' && (interpolation !== 'automatic' || grid)) return [];
  const candidates = wanted.usable.map((index) => wanted.sites[index]);
  const input = { ...wanted, candidates, candidatesPlaced: placeSites(candidates) };
  if (interpolation === 'automatic' && !grid) return automaticPlans(input, weather);
  if (interpolation === 'kriging') return krigingPlans(input, weather);
  return trendPlans(input, weather);
}

function carriedSeries(weather: CompletedWeather): CarriedSeries[] {
  return weather.referenceEt ? [...COMPLETED_SERIES, 'referenceEt'] : [...COMPLETED_SERIES];
}

/** One series over the candidates, [candidate × day]. */
function valuesOf({ usable }: PlanInput, weather: CompletedWeather, series: CarriedSeries): Float64Array {
  return rowsOf(weather[series] as Float64Array, usable, weather.dayCount);
}

function rowsOf(from: Float64Array, usable: readonly number[], dayCount: number): Float64Array {
  const rows = new Float64Array(usable.length * dayCount);
  usable.forEach((site, index) => {
    rows.set(from.subarray(site * dayCount, (site + 1) * dayCount), index * dayCount);
  });
  return rows;
}

/** Per series the way with the lowest leave-one-out error. */
function automaticPlans(input: PlanInput, weather: CompletedWeather): SeriesPlan[] {
  const { candidates, candidatesPlaced, placed, settings, usable, notes } = input;
  const { dayCount } = weather;
  const flags = rowsOf(Float64Array.from(weather.flags), usable, dayCount);
  const checked = crossValidate({
    sites: candidates,
    placed: candidatesPlaced,
    dayCount,
    maximumSites: settings.maximum_sites,
    lapseRate: settings.lapse_rate_c_per_m,
    series: carriedSeries(weather).map((series) => ({
      series,
      values: valuesOf(input, weather, series),
      measured: measuredWhere(flags, series),
    })),
  });
  const chosen = chooseMethods(checked);
  return checked.flatMap(({ series, gradient, variograms }) => {
    const best = chosen[series];
    if (!best) {
      notes.push(`No site could be held against another for ${series}: it goes by inverse distance.`);
      return [];
    }
    const fit = best.carry.method === 'kriging' ? variograms.find(({ trend }) => trend === best.carry.trend)?.fit : undefined;
    return [
      planOf({
        series,
        carry: best.carry,
        gradient: gradientOf(best.carry.trend, gradient, settings),
        fit,
        placed,
        errors: best,
        settings,
      }),
    ];
  });
}

function gradientOf(trend: CarryTrend, fitted: number, settings: PlanInput['settings']): number {
  return { none: 0, 'lapse-rate': -settings.lapse_rate_c_per_m, fitted }[trend];
}

/** Every series by ordinary kriging, each with its own semivariogram. */
function krigingPlans(input: PlanInput, weather: CompletedWeather): SeriesPlan[] {
  const { candidates, candidatesPlaced, placed, notes, settings } = input;
  const plan = candidates.length >= FEWEST_KRIGING_SITES ? classPlan(candidatesPlaced) : null;
  if (!plan) {
    notes.push(`There are ${candidates.length} sites: ${TOO_FEW_TO_KRIGE}. Weights are by inverse distance.`);
    return settings.elevation_trend === 'fitted' ? trendPlans(input, weather) : [];
  }
  return carriedSeries(weather).flatMap((series) => {
    const values = valuesOf(input, weather, series);
    const { trend, gradient } = trendOf(input, series, values, weather.dayCount);
    const field = { values: withoutGradient(values, candidates, gradient), dayCount: weather.dayCount, standardise: true };
    const { classes } = pooledVariogram(candidatesPlaced, field, plan);
    if (classes.length < 2 || classes.some(({ semivariance }) => Number.isNaN(semivariance))) {
      notes.push(`Too few sites report ${series} together for a semivariogram: it goes by inverse distance.`);
      return [];
    }
    return [
      planOf({ series, carry: { method: 'kriging', power: Number.NaN, trend }, gradient, fit: chooseVariogram(classes), placed, settings }),
    ];
  });
}

/** The shared weights with a fitted gradient per series. */
function trendPlans(input: PlanInput, weather: CompletedWeather): SeriesPlan[] {
  return carriedSeries(weather).flatMap((series) => {
    const { trend, gradient } = trendOf(input, series, valuesOf(input, weather, series), weather.dayCount);
    if (trend !== 'fitted') return [];
    const record = recordOf('shared weights, fitted elevation trend', gradient);
    return [{ series, carry: null, gradient, kriging: null, asShared: false, record }];
  });
}

/** Trend of a series by the settings: fitted where it can be, else the lapse rate for temperature and none for the rest. */
function trendOf(input: PlanInput, series: CarriedSeries, values: Float64Array, dayCount: number): { trend: CarryTrend; gradient: number } {
  const { settings, candidates, notes } = input;
  if (settings.elevation_trend === 'fitted' && takesElevationTrend(series)) {
    const { gradient } = elevationTrend({ elevations: candidates.map(({ elevation }) => elevation), values, dayCount });
    if (!Number.isNaN(gradient)) return { trend: 'fitted', gradient };
    notes.push(`No elevation trend could be fitted: ${NO_TREND}. Temperature keeps the lapse rate.`);
  }
  const lapse = settings.elevation_trend !== 'none' && isTemperature(series);
  return lapse ? { trend: 'lapse-rate', gradient: -settings.lapse_rate_c_per_m } : { trend: 'none', gradient: 0 };
}

interface PlanParts {
  readonly series: CarriedSeries;
  readonly carry: Carry;
  readonly gradient: number;
  readonly fit?: VariogramFit;
  readonly placed: PlacedSites;
  readonly errors?: CheckedCarry;
  readonly settings: PlanInput['settings'];
}

function planOf({ series, carry, gradient, fit, placed, errors, settings }: PlanParts): SeriesPlan {
  const kriging = fit ? prepareKriging(placed, fit.model) : null;
  const lapse = isTemperature(series) && settings.elevation_trend !== 'none' ? 'lapse-rate' : 'none';
  const asShared = carry.method === 'inverse-distance' && carry.power === settings.power && carry.trend === lapse;
  return { series, carry, gradient, kriging, asShared, record: recordOf(carryId(carry), gradient, fit, errors) };
}

function recordOf(method: string, gradient: number, fit?: VariogramFit, errors?: CheckedCarry): SeriesRecord {
  return {
    method,
    gradient_per_m: gradient,
    variogram: fit
      ? { kind: fit.model.kind, nugget: fit.model.nugget, partial_sill: fit.model.partialSill, range_m: nullFromNaN(fit.model.range) }
      : null,
    leave_one_out: errors
      ? {
          n: errors.n,
          bias: nullFromNaN(errors.bias),
          rmse: nullFromNaN(errors.rmse),
          mae: nullFromNaN(errors.mae),
          msdr: nullFromNaN(errors.msdr),
        }
      : null,
  };
}
