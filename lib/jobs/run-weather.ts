/** The weather of a run: its source, the observations of the season, how gaps were filled, and the weights by which it reaches the parcels. */
import type { Tx } from '../../db/connect.ts';
import { addDays } from '../base/civil-date.ts';
import { Refused } from '../base/errors.ts';
import type { CompletedWeather, Site, SiteObservations } from '../weather/variable.ts';
import { loadObservations } from './observations.ts';
import { hasHours, hourlyReferenceEt } from './run-hours.ts';
import { findRunSource, listSourceSites, loadOtherSources, type RunWeatherSource, seasonWithMargin } from './run-observations.ts';
import { usableSites } from './run-plan.ts';
import type { RunSettings } from './run-settings.ts';
import { type ParcelWeights, parcelWeights, type WeightsRecord } from './run-weights.ts';
import { requireEveryDay, seasonWeather } from './season-weather.ts';
import { givenReferenceEt, referenceEtOf, withReferenceEt } from './site-reference-et.ts';

/** Most site-days of a run: what its weather may hold, below 1 GiB while it is made and about 180 MiB when frozen. */
const MOST_SITE_DAYS = 3_000_000;

interface WeatherWanted {
  readonly districtId: string;
  readonly run: { readonly startDate: string; readonly dayCount: number };
  readonly parcels: readonly { readonly longitude: number; readonly latitude: number }[];
  readonly district: { readonly defaultElevation: number; readonly radiationCoefficient: number; readonly timeZone: string };
  readonly settings: RunSettings;
}

export interface PlannedWeather {
  /** name of the source, or "stations" for every set of them */
  readonly source: string;
  readonly sites: readonly Site[];
  readonly weather: CompletedWeather;
  readonly weights: readonly ParcelWeights[];
  readonly record: WeightsRecord;
  readonly referenceEt: Exclude<RunSettings['reference_et'], 'automatic'>;
  /** first and last day of the observations it was made from */
  readonly from: string;
  readonly to: string;
}

/**
 * Weather of the season at the sites, and the weights of every parcel.
 *
 * Stations are read whole, since the normals of a day come from other years. Of a grid only the cells that a parcel listens to are read, and only the season with a
 * margin: places give the weights before any weather is read.
 *
 * @throws {Refused} when there is no weather for a day, or a setting asks for what the source does not have
 */
export async function planWeather(tx: Tx, wanted: WeatherWanted): Promise<PlannedWeather> {
  const { districtId, run, parcels, settings, district } = wanted;
  const source = await findRunSource(tx, districtId, settings.source);
  const stored =
    source.kind === 'grid' ? await loadCells(tx, wanted, source) : await loadObservations(tx, districtId, { source: source.asked });
  const { sites } = stored;
  requireSize(sites.length * run.dayCount, sites.length);
  const others = settings.fill_gaps ? await loadOtherSources(tx, districtId, source.others, sites, run) : [];
  const daily = seasonWeather(stored, run, {
    ...district,
    fillGaps: settings.fill_gaps,
    others: others.map(({ observations }) => observations),
  });
  const { kind, weather } = await referenceEtFrom(tx, wanted, source, stored, daily);
  requireEveryDay(stored, weather, run);
  const { parcels: weights, record } = parcelWeights({
    ...{ parcels, sites, settings, weather, startDate: run.startDate },
    grid: source.grid,
    usable: usableSites(weather),
  });
  return {
    ...{ source: source.name, sites, weather, weights, record },
    referenceEt: kind ?? 'at-parcels',
    from: stored.startDate,
    to: addDays(stored.startDate, stored.dayCount - 1),
  };
}

/** Observations of the cells that the parcels listen to. */
async function loadCells(
  tx: Tx,
  { districtId, run, parcels, settings }: WeatherWanted,
  source: RunWeatherSource,
): Promise<SiteObservations> {
  const { rows, sites } = await listSourceSites(tx, districtId, source.asked as string);
  const usable = sites.map((_, index) => index);
  const { parcels: weights } = parcelWeights({
    ...{ parcels, sites, usable, settings, startDate: run.startDate },
    grid: source.grid,
    weather: null,
  });
  const listened = new Set(weights.flatMap((parcel) => parcel.weights.map(({ site }) => site)));
  requireSize(listened.size * run.dayCount, listened.size);
  const wanted = { source: source.asked, ...seasonWithMargin(run), sites: rows.filter((_, index) => listened.has(index)) };
  return loadObservations(tx, districtId, wanted);
}

function requireSize(siteDays: number, siteCount: number): void {
  if (siteDays <= MOST_SITE_DAYS) return;
  throw new Refused(
    `The parcels listen to ${siteCount} weather sites or cells, ${siteDays} site-days; a run takes at most ${MOST_SITE_DAYS}. Take the nearest cell for each parcel, a coarser grid, or a shorter season.`,
  );
}

async function referenceEtFrom(tx: Tx, wanted: WeatherWanted, source: RunWeatherSource, stored: SiteObservations, daily: CompletedWeather) {
  const { districtId, run, settings, district } = wanted;
  const { values, sites } = stored;
  const hours = settings.reference_et === 'hourly-sum' && (await hasHours(tx, districtId, source.sources, run));
  const kind = referenceEtOf(settings.reference_et, source, {
    given: values.reference_et_given_mm !== undefined,
    temperature: values.air_temperature_max_c !== undefined || values.air_temperature_mean_c !== undefined,
    hours,
  });
  if (!kind) return { kind, weather: daily };
  const { startDate, dayCount } = run;
  const { defaultElevation, timeZone } = district;
  const { method } = settings;
  const common = { sites, startDate, dayCount, method, defaultElevation, weather: daily };
  const given = kind === 'given' ? givenReferenceEt(stored, run) : null;
  const summed = kind === 'hourly-sum' ? await hourlyReferenceEt(tx, districtId, { ...common, sources: source.sources, timeZone }) : null;
  return { kind, weather: withReferenceEt({ ...common, values: given ?? summed }) };
}
