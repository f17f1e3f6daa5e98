/** The forecast behind the days to come of a run, brought to its sites. */
import type { Tx } from '../../db/connect.ts';
import { findIssueDay, listForecastSources } from '../../db/queries/weather-sources.ts';
import { isoDate } from '../base/civil-date.ts';
import { completeWeather } from '../energy/complete-weather.ts';
import { moveSiteDay } from '../energy/moved-weather.ts';
import { clearSiteDay, hasDriver, putSiteDay } from '../weather/days-ahead.ts';
import { nearestFinder } from '../weather/gaps-neighbours.ts';
import type { DaySpan } from '../weather/normal-of-day.ts';
import { type CompletedWeather, FALLBACK, type Site, type SiteObservations } from '../weather/variable.ts';
import { noSuchForecast } from './ahead-settings.ts';
import { loadObservations } from './observations.ts';
import { listSourceSites } from './run-observations.ts';

/** Forecast sites tried for one site, nearest first. */
const TRIED = 3;

export interface Forecast {
  readonly source: string;
  /** day on which what it holds was last brought in; null where nothing tells */
  readonly issued: string | null;
  readonly sites: readonly Site[];
  readonly weather: CompletedWeather;
  /** reference ET that the forecast gives itself, [site × day], or null */
  readonly given: Float64Array | null;
}

interface ForecastWanted {
  /** name; null takes the first that has weather */
  readonly name: string | null;
  /** the sites of the run */
  readonly sites: readonly Site[];
  readonly days: DaySpan;
  readonly defaultElevation: number;
  readonly radiationCoefficient: number;
}

/**
 * The forecast of some days at the forecast's own sites that lie nearest to the run's.
 *
 * @returns null where the district has no forecast, or it has nothing on these days
 * @throws {Refused} when a forecast is named that is not there
 */
export async function loadForecast(tx: Tx, districtId: string, wanted: ForecastWanted): Promise<Forecast | null> {
  const all = await listForecastSources(tx, districtId);
  const source = wanted.name === null ? all.find(({ hasWeather }) => hasWeather) : all.find(({ name }) => name === wanted.name);
  if (!source) {
    if (wanted.name === null) return null;
    throw noSuchForecast(
      wanted.name,
      all.map(({ name }) => name),
    );
  }
  const { rows, sites } = await listSourceSites(tx, districtId, source.name);
  const find = nearestFinder(sites);
  const near = new Set(wanted.sites.flatMap((site) => find(site, -1).slice(0, TRIED)).map(({ site }) => site));
  const { first, dayCount } = wanted.days;
  const observations = await loadObservations(tx, districtId, {
    ...{ source: source.name, from: isoDate(first), to: isoDate(first + dayCount - 1) },
    sites: rows.filter((_, index) => near.has(index)),
  });
  if (observations.dayCount === 0) return null;
  const issued = await findIssueDay(tx, districtId, source.sourceId);
  return { source: source.name, issued, ...completed(observations, wanted) };
}

function completed(observations: SiteObservations, { defaultElevation, radiationCoefficient }: ForecastWanted) {
  const weather = completeWeather(observations, { defaultElevation, radiationCoefficient });
  return { sites: observations.sites, weather, given: observations.values.reference_et_given_mm ?? null };
}

interface PlaceOfForecast {
  readonly forecast: Forecast;
  readonly sites: readonly Site[];
  /** offset of the first day to come in `weather` */
  readonly offset: number;
  readonly dayCount: number;
  readonly lapseRate: number;
  readonly defaultElevation: number;
  /** true: the run goes by reference ET that its source gives */
  readonly isGiven: boolean;
}

/**
 * Puts the forecast on the days to come of every site: of the nearest forecast site that has the day, its temperatures moved to the site's elevation
 * by the lapse rate. A mean error of the forecast is not taken off: nothing on record tells what it had said of days that have passed.
 *
 * Reference ET is written only where the run's source gives it and the forecast does; else it is left for the caller.
 *
 * @param weather of the run; written
 * @returns 1 on the days to come on which some site has no forecast [day]
 */
export function putForecast(weather: CompletedWeather, place: PlaceOfForecast): Uint8Array {
  const { forecast, sites, offset, dayCount } = place;
  const find = nearestFinder(forecast.sites);
  const open = new Uint8Array(dayCount);
  sites.forEach((site, index) => {
    const near = find(site, -1).slice(0, TRIED);
    for (let day = 0; day < dayCount; day++) {
      const at = index * weather.dayCount + offset + day;
      clearSiteDay(weather, at);
      if (!near.some((one) => putFrom(weather, at, day, { ...place, own: site, other: one.site }))) open[day] = 1;
    }
  });
  return open;
}

interface OneForecast extends PlaceOfForecast {
  readonly own: Site;
  readonly other: number;
}

function putFrom(weather: CompletedWeather, at: number, day: number, one: OneForecast): boolean {
  const { forecast, other, own, lapseRate, defaultElevation, isGiven } = one;
  const from = other * forecast.weather.dayCount + day;
  const given = isGiven ? (forecast.given?.[from] ?? Number.NaN) : Number.NaN;
  if (!hasDriver(forecast.weather, from) && Number.isNaN(given)) return false;
  putSiteDay(weather, at, forecast.weather, from, FALLBACK.aheadFromForecast);
  const height = ({ elevation }: Site) => (Number.isNaN(elevation) ? defaultElevation : elevation);
  moveSiteDay(weather, at, height(own) - height(forecast.sites[other]), lapseRate);
  if (Number.isNaN(weather.precipitation[at])) {
    weather.precipitation[at] = 0;
    weather.flags[at] |= FALLBACK.precipitationAssumedZero;
  }
  if (weather.referenceEt) weather.referenceEt[at] = given;
  return true;
}
