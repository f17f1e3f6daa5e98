/**
 * Weather measured over dry surroundings, brought to what it would be over a well-watered reference surface.
 *
 * Over dry land air is warmer and drier than over irrigated grass, and reference ET computed from it is too high. The adjustment lowers
 * temperature and raises the dew point until Tmin − Tdew is what a reference surface has.
 */

import { type Correction, type Layered, layeredOver } from '../weather/quality/correction.ts';
import { monthsOf, seriesOf } from '../weather/quality/flag.ts';
import { QUALITY, type SiteObservations, type WeatherVariable } from '../weather/variable.ts';
import { actualVapourPressureFromDewPoint, dewPointFromActualVapourPressure } from './humidity.ts';
import { siteReferenceEt } from './quality-reference-et.ts';
import { observedVapourPressure, type SiteSky } from './quality-sky.ts';

/** Ko [°C] where there is no reference station nearby to take it from. Source: FAO-56 Annex 6. */
export const KO_WITHOUT_REFERENCE = 2;
/** Share of reference ET that rain covers below which a month may be arid; index above which to act. Source: FAO-56 Annex 6. */
const ARID_SHARE = 0.5;
const ARIDITY_INDEX = 0.05;
/** Fewest days of a month that count. */
const LEAST_DAYS = 20;

/** The three values of a day that the adjustment changes [°C]. */
export interface AirOverReference {
  readonly airTemperatureMax: number;
  readonly airTemperatureMin: number;
  readonly dewPoint: number;
}

/**
 * Temperature and dew point of a day over a reference surface.
 *   ΔT = Tmin − Tdew;  where ΔT > Ko:  Tmax, Tmin − (ΔT − Ko)/2,  Tdew + (ΔT − Ko)/2
 *
 * @param ko Ko [°C]
 * @returns the day unchanged where ΔT ≤ Ko, or where a value is missing
 * @example airOverReference({ airTemperatureMax: 36, airTemperatureMin: 16, dewPoint: 6 }, 2).dewPoint // 10
 * Source: FAO-56 Annex 6.
 */
export function airOverReference(day: AirOverReference, ko: number): AirOverReference {
  const excess = day.airTemperatureMin - day.dewPoint - ko;
  if (!(excess > 0)) return day;
  const half = excess / 2;
  return {
    airTemperatureMax: day.airTemperatureMax - half,
    airTemperatureMin: day.airTemperatureMin - half,
    dewPoint: day.dewPoint + half,
  };
}

/** One month of a site in the test for dry surroundings. */
export interface AridMonth {
  /** offsets of its first and last day */
  readonly first: number;
  readonly last: number;
  /** mm over the days that have both */
  readonly precipitation: number;
  readonly referenceEt: number;
  /** mean Tmin − Tdew [°C] */
  readonly difference: number;
  /** ETo / ETo(Tdew = Tmin) − 1 */
  readonly index: number;
  readonly arid: boolean;
}

/**
 * Months of a site that have temperature, humidity and rain, with what the test for dry surroundings says of each: P/ETo below 0.5,
 * Tmin − Tdew above Ko, and the aridity index above 0.05.
 *
 * Source: FAO-56 Annex 6.
 */
export function aridMonths(
  observations: SiteObservations,
  sky: SiteSky,
  options: { ko: number; radiationCoefficient: number },
): AridMonth[] {
  const min = seriesOf(observations, 'air_temperature_min_c', sky.site);
  const rain = seriesOf(observations, 'precipitation_mm', sky.site);
  if (!min || !rain || !sky.dewPoint.some((value) => !Number.isNaN(value))) return [];
  const referenceEt = siteReferenceEt(observations, sky, options.radiationCoefficient);
  const saturated = siteReferenceEt(observations, sky, options.radiationCoefficient, 'saturated-at-minimum');
  return monthsOf(observations.startDate, observations.dayCount).flatMap(({ first, last }) => {
    let [count, precipitation, demand, wetDemand, difference] = [0, 0, 0, 0, 0];
    for (let day = first; day <= last; day++) {
      const gap = min[day] - sky.dewPoint[day];
      if (Number.isNaN(gap + rain[day] + referenceEt[day])) continue;
      count++;
      precipitation += rain[day];
      demand += referenceEt[day];
      wetDemand += saturated[day];
      difference += gap;
    }
    if (count < LEAST_DAYS || !(wetDemand > 0)) return [];
    const [mean, index] = [difference / count, demand / wetDemand - 1];
    const arid = precipitation / demand < ARID_SHARE && mean > options.ko && index > ARIDITY_INDEX;
    return [{ first, last, precipitation, referenceEt: demand, difference: mean, index, arid }];
  });
}

/** An adjustment for dry surroundings that is offered: never made without being asked for. */
export interface AridityOffer {
  readonly site: number;
  /** offsets of the first and last day */
  readonly first: number;
  readonly last: number;
  readonly months: number;
  readonly ko: number;
  readonly difference: number;
  readonly index: number;
  /** mm of reference ET over the period before and after */
  readonly before: number;
  readonly after: number;
}

/** Months without need between two arid ones that an offer passes over: on days that need nothing the adjustment does nothing. */
const BRIDGED_MONTHS = 6;
/** Fewest arid months that are worth an offer; the product's own. */
const LEAST_MONTHS = 2;

/** Offers for stretches of arid months, with what each would do to reference ET. */
export function aridityOffers(
  observations: SiteObservations,
  sky: SiteSky,
  options: { ko: number; radiationCoefficient: number },
): AridityOffer[] {
  const stretches = aridStretches(aridMonths(observations, sky, options));
  if (stretches.length === 0) return [];
  const { site } = sky;
  const variable = 'air_temperature_min_c';
  const spans = stretches.map((months) => ({ months, first: months[0].first, last: months[months.length - 1].last }));
  const acts = spans.map(
    ({ first, last }): Correction => ({ site, variable, firstDay: first, lastDay: last, act: 'aridity', amount: options.ko }),
  );
  const own = onlySite(observations, site);
  const ownSky = { ...sky, site: 0 };
  const before = siteReferenceEt(own, ownSky, options.radiationCoefficient);
  const adjusted = layAridity(
    own,
    acts.map((act) => ({ ...act, site: 0 })),
    sky.elevation,
  );
  const after = siteReferenceEt(adjusted, ownSky, options.radiationCoefficient);
  return spans.map(({ months, first, last }) => ({
    ...{
      site,
      first,
      last,
      months: months.length,
      ko: options.ko,
      before: sumOver(before, first, last),
      after: sumOver(after, first, last),
    },
    difference: meanOf(months.map((month) => month.difference)),
    index: meanOf(months.map((month) => month.index)),
  }));
}

function aridStretches(months: readonly AridMonth[]): AridMonth[][] {
  const stretches: AridMonth[][] = [];
  let since = Number.POSITIVE_INFINITY;
  for (const month of months) {
    if (!month.arid) since++;
    else {
      if (since <= BRIDGED_MONTHS) stretches[stretches.length - 1].push(month);
      else stretches.push([month]);
      since = 0;
    }
  }
  return stretches.filter((stretch) => stretch.length >= LEAST_MONTHS);
}

/** The record of one site alone, as views. */
export function onlySite(observations: SiteObservations, site: number): SiteObservations {
  const { dayCount, sites } = observations;
  const cut = <Series extends { subarray(from: number, to: number): Series }>(all: Partial<Record<WeatherVariable, Series>> = {}) =>
    Object.fromEntries(Object.entries(all).map(([name, series]) => [name, series?.subarray(site * dayCount, (site + 1) * dayCount)]));
  return { ...observations, sites: [sites[site]], values: cut(observations.values), quality: cut(observations.quality) };
}

function sumOver(series: Float64Array, first: number, last: number): number {
  return series.subarray(first, last + 1).reduce((total, value) => total + (Number.isNaN(value) ? 0 : value), 0);
}

function meanOf(values: readonly number[]): number {
  return values.reduce((total, value) => total + value, 0) / values.length;
}

const CHANGED: readonly WeatherVariable[] = [
  'air_temperature_max_c',
  'air_temperature_min_c',
  'air_temperature_mean_c',
  'dew_point_c',
  'vapour_pressure_kpa',
];

/**
 * Lays adjustments for dry surroundings over observations: after every other decision, and on what those made of the values. On adjusted days
 * the vapour pressure carries the raised dew point, whatever humidity the site reports; the reported humidity itself stays as it was.
 *
 * @param corrections only those of act `aridity` are laid; of two on one day the later one
 * Source: FAO-56 Annex 6.
 */
export function layAridity(observations: SiteObservations, corrections: readonly Correction[], defaultElevation: number): SiteObservations {
  const acts = corrections.filter(({ act }) => act === 'aridity');
  if (acts.length === 0) return observations;
  const { dayCount, sites } = observations;
  const present = CHANGED.filter((variable) => observations.values[variable]);
  const layered = layeredOver(observations, present);
  const values = layered.values as Record<string, Float64Array>;
  const quality = layered.quality as Record<string, Uint8Array>;
  values.vapour_pressure_kpa ??= new Float64Array(sites.length * dayCount).fill(Number.NaN);
  quality.vapour_pressure_kpa ??= new Uint8Array(sites.length * dayCount);
  for (const site of new Set(acts.map((act) => act.site))) {
    const { elevation } = sites[site];
    const vapour = observedVapourPressure(observations, site, Number.isNaN(elevation) ? defaultElevation : elevation);
    const ko = new Float64Array(dayCount).fill(Number.NaN);
    for (const act of acts) if (act.site === site) ko.fill(act.amount, Math.max(0, act.firstDay), Math.max(0, act.lastDay + 1));
    for (let day = 0; day < dayCount; day++) {
      if (!Number.isNaN(ko[day])) adjustDay(observations, layered, { at: site * dayCount + day, ko: ko[day], vapour: vapour[day] });
    }
  }
  return layered;
}

function adjustDay(observations: SiteObservations, into: Layered, { at, ko, vapour }: { at: number; ko: number; vapour: number }): void {
  const before: AirOverReference = {
    airTemperatureMax: observations.values.air_temperature_max_c?.[at] ?? Number.NaN,
    airTemperatureMin: observations.values.air_temperature_min_c?.[at] ?? Number.NaN,
    dewPoint: vapour > 0 ? dewPointFromActualVapourPressure(vapour) : Number.NaN,
  };
  const after = airOverReference(before, ko);
  if (after === before) return;
  const lowered = before.airTemperatureMin - after.airTemperatureMin;
  const put = (variable: WeatherVariable, value: number) => {
    const own = into.values[variable];
    if (!own || Number.isNaN(value)) return;
    own[at] = value;
    (into.quality[variable] as Uint8Array)[at] = QUALITY.corrected;
  };
  put('air_temperature_max_c', after.airTemperatureMax);
  put('air_temperature_min_c', after.airTemperatureMin);
  put('air_temperature_mean_c', (observations.values.air_temperature_mean_c?.[at] ?? Number.NaN) - lowered);
  if (!Number.isNaN(observations.values.dew_point_c?.[at] ?? Number.NaN)) put('dew_point_c', after.dewPoint);
  put('vapour_pressure_kpa', actualVapourPressureFromDewPoint(after.dewPoint));
}
