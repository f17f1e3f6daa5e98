/** Leave-one-out figures of a district's stations over a span of days: computed when asked for, kept until the weather behind them changes. */
import { createHash } from 'node:crypto';
import type { Tx } from '../../db/connect.ts';
import { findInterpolationCheck, saveInterpolationCheck } from '../../db/queries/interpolation-check.ts';
import { findDistrict } from '../../db/queries/run-inputs.ts';
import { dayNumber } from '../base/civil-date.ts';
import { NotFound, Refused, TooLarge } from '../base/errors.ts';
import { nullFromNaN } from '../base/missing.ts';
import { type CheckedSeries, chooseMethods, crossValidate, type PooledModel } from '../weather/cross-validation.ts';
import { carryText } from '../weather/interpolation-method.ts';
import { measuredWhere } from '../weather/measured-values.ts';
import { type CarriedSeries, COMPLETED_SERIES, type CompletedWeather, type Site } from '../weather/variable.ts';
import { loadObservations } from './observations.ts';
import { findRunSource } from './run-observations.ts';
import { usableSites } from './run-plan.ts';
import { DEFAULT_RUN_SETTINGS } from './run-settings.ts';
import { seasonWeather } from './season-weather.ts';
import { withReferenceEt } from './site-reference-et.ts';

/** Counted up when a change can move a figure: figures kept by an earlier version are made anew. */
const CHECK_VERSION = 1;
/** Most stations and days of one check: what is computed within seconds. */
const MOST_SITES = 200;
const MOST_DAYS = 400;

interface CheckWanted {
  /** name of a source; null: every set of stations */
  readonly source: string | null;
  readonly from: string;
  readonly to: string;
}

/** Errors of one way of carrying one variable, in its unit; by site in the order of the sites. */
export interface KeptMethod {
  readonly id: string;
  readonly name: string;
  readonly n: number;
  readonly bias: number | null;
  readonly rmse: number | null;
  readonly mae: number | null;
  readonly msdr: number | null;
  readonly sites: { readonly n: number[]; readonly bias: (number | null)[]; readonly rmse: (number | null)[] };
}

export interface KeptVariogram {
  readonly trend: string;
  readonly kind: string;
  readonly nugget: number;
  readonly partial_sill: number;
  readonly range_m: number | null;
  readonly classes: readonly { readonly pair_count: number; readonly distance_m: number; readonly semivariance: number }[];
}

export interface KeptVariable {
  readonly series: CarriedSeries;
  /** id of the method with the lowest RMSE; null when nothing could be compared */
  readonly chosen: string | null;
  /** fitted change with elevation [unit per m] */
  readonly gradient_per_m: number | null;
  readonly methods: readonly KeptMethod[];
  readonly variograms: readonly KeptVariogram[];
}

/** What is kept. No number in it is NaN. */
export interface KeptCheck {
  readonly sites: readonly { code: string; name: string; longitude: number; latitude: number; elevation_m: number | null }[];
  readonly variables: readonly KeptVariable[];
}

/**
 * The figures for a source and a span of days, computed now unless they are kept and the weather is still the same.
 *
 * @throws {Refused} for a grid, or fewer than two stations with weather in the span; {TooLarge} for more than 200 stations or 400 days
 */
export async function interpolationCheck(
  tx: Tx,
  districtId: string,
  wanted: CheckWanted,
): Promise<{ source: string; computedAt: Date; check: KeptCheck }> {
  const { from, to } = wanted;
  const dayCount = dayNumber(to) - dayNumber(from) + 1;
  if (dayCount > MOST_DAYS)
    throw new TooLarge(`${from} to ${to} are ${dayCount} days; one check takes at most ${MOST_DAYS}: ask for a season.`);
  const source = await findRunSource(tx, districtId, wanted.source);
  if (source.kind === 'grid') {
    throw new Refused(
      `The weather source "${source.name}" is a grid: its cells are carried by the four around a parcel, and holding them against each other tells nothing about the error there. Name a source of stations.`,
    );
  }
  const { sites, weather } = await stationWeather(tx, districtId, source.asked, { startDate: from, dayCount });
  const inputSha256 = hashOf(sites, weather);
  const key = { key: source.asked ?? '', fromDay: from, toDay: to };
  const kept = await findInterpolationCheck(tx, districtId, key);
  if (kept?.inputSha256 === inputSha256) return { source: source.name, computedAt: kept.computedAt, check: kept.result as KeptCheck };
  const check = checkOf(sites, weather);
  const computedAt = await saveInterpolationCheck(tx, districtId, key, { inputSha256, result: check });
  return { source: source.name, computedAt, check };
}

/** Completed weather of the stations that have any in the span, with reference ET at each. */
async function stationWeather(tx: Tx, districtId: string, source: string | null, span: { startDate: string; dayCount: number }) {
  const district = await findDistrict(tx, districtId);
  if (!district) throw new NotFound('There is no such district.');
  const stored = await loadObservations(tx, districtId, { source });
  const { defaultElevation, radiationCoefficient } = district;
  const daily = seasonWeather(stored, span, { defaultElevation, radiationCoefficient, fillGaps: true, others: [] });
  const common = { sites: stored.sites, startDate: span.startDate, method: DEFAULT_RUN_SETTINGS.method, defaultElevation };
  const weather = withReferenceEt({ ...common, weather: daily, values: null });
  const usable = usableSites(daily);
  if (usable.length < 2) {
    throw new Refused(
      `${usable.length === 0 ? 'No station has' : 'One station alone has'} air temperature between the days asked for: leaving one out needs two. Import weather, or ask for other days.`,
    );
  }
  if (usable.length > MOST_SITES) {
    throw new TooLarge(`${usable.length} stations have weather here; one check takes at most ${MOST_SITES}: name one source.`);
  }
  return { sites: usable.map((index) => stored.sites[index]), weather: rowsOf(weather, usable) };
}

type StationWeather = Record<CarriedSeries, Float64Array> & { flags: Uint32Array; dayCount: number };

function rowsOf(weather: CompletedWeather, usable: readonly number[]): StationWeather {
  const { dayCount } = weather;
  const cut = <A extends Float64Array | Uint32Array>(from: A, into: A): A => {
    usable.forEach((site, row) => {
      into.set(from.subarray(site * dayCount, (site + 1) * dayCount), row * dayCount);
    });
    return into;
  };
  const length = usable.length * dayCount;
  const series = [...COMPLETED_SERIES, 'referenceEt' as const];
  const rows = Object.fromEntries(series.map((name) => [name, cut(weather[name] as Float64Array, new Float64Array(length))]));
  return { ...(rows as Record<CarriedSeries, Float64Array>), flags: cut(weather.flags, new Uint32Array(length)), dayCount };
}

function hashOf(sites: readonly Site[], weather: StationWeather): string {
  const hash = createHash('sha256').update(JSON.stringify([CHECK_VERSION, DEFAULT_RUN_SETTINGS, sites, weather.dayCount]));
  for (const name of COMPLETED_SERIES) hash.update(bytesOf(weather[name]));
  return hash.update(bytesOf(weather.flags)).digest('hex');
}

function bytesOf({ buffer, byteOffset, byteLength }: Float64Array | Uint32Array): Uint8Array {
  return new Uint8Array(buffer, byteOffset, byteLength);
}

/** The figures of a set of stations over the days of their weather. */
export function checkOf(sites: readonly Site[], weather: StationWeather): KeptCheck {
  const checked = crossValidate({
    sites,
    dayCount: weather.dayCount,
    maximumSites: DEFAULT_RUN_SETTINGS.maximum_sites,
    lapseRate: DEFAULT_RUN_SETTINGS.lapse_rate_c_per_m,
    series: [...COMPLETED_SERIES, 'referenceEt' as const].map((series) => ({
      series,
      values: weather[series],
      measured: measuredWhere(weather.flags, series),
    })),
  });
  const chosen = chooseMethods(checked);
  return {
    sites: sites.map(({ code, name, longitude, latitude, elevation }) => ({
      ...{ code, name, longitude, latitude },
      elevation_m: nullFromNaN(elevation),
    })),
    variables: checked.map((series) => keptVariable(series, chosen[series.series]?.id ?? null)),
  };
}

/** Six significant figures: what the weather behind them holds. */
function kept(value: number): number | null {
  return Number.isFinite(value) ? Number(value.toPrecision(6)) : null;
}

function keptVariable({ series, gradient, methods, variograms }: CheckedSeries, chosen: string | null): KeptVariable {
  return {
    series,
    chosen,
    gradient_per_m: kept(gradient),
    methods: methods.map(({ id, carry, n, bias, rmse, mae, msdr, sites }) => ({
      ...{ id, name: carryText(carry), n },
      ...{ bias: kept(bias), rmse: kept(rmse), mae: kept(mae), msdr: kept(msdr) },
      sites: { n: sites.map((site) => site.n), bias: sites.map((site) => kept(site.bias)), rmse: sites.map((site) => kept(site.rmse)) },
    })),
    variograms: variograms.map(keptVariogram),
  };
}

function keptVariogram({ trend, classes, fit: { model } }: PooledModel): KeptVariogram {
  return {
    ...{ trend, kind: model.kind, range_m: kept(model.range) },
    nugget: kept(model.nugget) ?? 0,
    partial_sill: kept(model.partialSill) ?? 0,
    classes: classes.map(({ pairCount, distance, semivariance }) => ({
      pair_count: pairCount,
      distance_m: kept(distance) ?? 0,
      semivariance: kept(semivariance) ?? 0,
    })),
  };
}
