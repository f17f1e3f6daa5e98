/** The weather of a run: its source, the observations of the season, how gaps were filled, the days to come, and the weights by which it reaches the parcels. */
import type { Tx } from '../../db/connect.ts';
import { addDays, dayNumber, isoDate } from '../base/civil-date.ts';
import { Refused } from '../base/errors.ts';
import type { SiteReferenceEt } from '../season/types.ts';
import { sameDays } from '../weather/analogue-year.ts';
import type { DaySpan } from '../weather/normal-of-day.ts';
import type { CompletedWeather, Site, SiteObservations } from '../weather/variable.ts';
import { loadObservations, type SiteKey } from './observations.ts';
import { daysToCome, nothingAhead, tellAhead } from './run-ahead.ts';
import type { AheadRecord } from './run-ahead-record.ts';
import { hasHours, hourlyReferenceEt } from './run-hours.ts';
import { findRunSource, listSourceSites, loadOtherSources, type RunWeatherSource, seasonWithMargin } from './run-observations.ts';
import { usableSites } from './run-plan.ts';
import { findLastObserved, type RunRecord, runRecord } from './run-record.ts';
import type { RunSettings } from './run-settings.ts';
import { type ParcelWeights, parcelWeights, type WeightsRecord, type WeightsWanted } from './run-weights.ts';
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
  /** first day of the season itself, where `run` begins with days stepped before it; left out: the first day of `run` */
  readonly seasonStart?: string;
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
  /** the days past the last observation, for the manifest */
  readonly ahead: AheadRecord;
  /** sentences for whoever relies on the run */
  readonly warnings: readonly string[];
}

/** Fewest measured days of a season that variograms, trends and leave-one-out errors are made of; below, a year of the record is taken. The product's own limit. */
const LEAST_FITTED_DAYS = 30;

/**
 * Weather of the season at the sites, and the weights of every parcel.
 *
 * Stations are read whole, since the normals of a day come from other years. Of a grid only the cells that a parcel listens to are read, and only the season with a
 * margin: places give the weights before any weather is read. Days past the last observation are told ahead (`run-ahead`) unless the settings refuse them.
 *
 * @throws {Refused} when there is no weather for a day, or a setting asks for what the source does not have
 */
export async function planWeather(tx: Tx, wanted: WeatherWanted): Promise<PlannedWeather> {
  const { districtId, run, parcels, settings } = wanted;
  const source = await findRunSource(tx, districtId, settings.source);
  const cells = source.kind === 'grid' ? await listenedCells(tx, wanted, source) : null;
  const stored = await loadObservations(tx, districtId, {
    source: source.asked,
    ...(cells ? { ...seasonWithMargin(run), sites: cells } : {}),
  });
  const { sites } = stored;
  requireSize(sites.length * run.dayCount, sites.length);
  const record = await runRecord(tx, districtId, { source, stored, cells });
  const lastObserved = await findLastObserved(record, stored);
  if (settings.ahead === 'refuse' && lastObserved !== null) refuseAhead(run, lastObserved);
  const days = settings.ahead === 'refuse' || lastObserved === null ? null : daysToCome(run, lastObserved);
  const kind = referenceEtOf(settings.reference_et, source, {
    ...(await variablesOf(record, stored, days ? lastObserved : null)),
    hours: settings.reference_et === 'hourly-sum' && (await hasHours(tx, districtId, source.sources, run)),
  });
  const others = settings.fill_gaps ? await loadOtherSources(tx, districtId, source.others, sites, run) : [];
  const known = { source, kind, others: others.map(({ observations }) => observations) };
  const observed = await weatherOf(tx, wanted, { ...known, stored, run });
  const weatherIn = async ({ first, dayCount }: DaySpan) => {
    const span = { startDate: isoDate(first), dayCount };
    return weatherOf(tx, wanted, { ...known, others: [], stored: await record.load({ first, dayCount }), run: span });
  };
  const told = days
    ? await tellAhead(tx, districtId, {
        ...{ settings, run, days, sites, record, weatherIn, weather: observed, referenceEt: kind },
        ...{ seasonStart: wanted.seasonStart ?? run.startDate, lastObserved: lastObserved as string },
        ...districtOf(wanted),
      })
    : { weather: observed, ahead: nothingAhead(lastObserved, run.dayCount), warnings: [] };
  const { weather, ahead, warnings } = told;
  requireEveryDay(days ? null : stored, weather, run);
  const { parcels: weights, record: weightsRecord } = parcelWeights({
    ...{ parcels, sites, settings, weather, startDate: run.startDate },
    ...(await fittedOn({ wanted, ahead, weatherIn, record })),
    grid: source.grid,
    usable: usableSites(weather),
  });
  return {
    ...{ source: source.name, sites, weather, weights, record: weightsRecord, ahead, warnings },
    referenceEt: kind ?? 'at-parcels',
    from: stored.startDate,
    to: addDays(stored.startDate, stored.dayCount - 1),
  };
}

/** A run that refuses days to come takes none, not even as gaps of the record. */
function refuseAhead({ startDate, dayCount }: WeatherWanted['run'], lastObserved: string): void {
  const end = addDays(startDate, dayCount - 1);
  if (lastObserved >= end) return;
  throw new Refused(
    `The season runs to ${end}, the weather on record to ${lastObserved}, and the setting "ahead" refuses days to come. Import the days that are missing, or choose "normal" or "analogue".`,
  );
}

function districtOf({ district }: WeatherWanted) {
  const { defaultElevation, radiationCoefficient } = district;
  return { defaultElevation, radiationCoefficient };
}

/** What a source brings of temperature and reference ET: in what was read of the season, else in the days before the last observed one. */
async function variablesOf(record: RunRecord, stored: SiteObservations, lastObserved: string | null) {
  const has = ({ values }: SiteObservations) => ({
    given: values.reference_et_given_mm !== undefined,
    temperature: values.air_temperature_max_c !== undefined || values.air_temperature_mean_c !== undefined,
  });
  const here = has(stored);
  if (lastObserved === null || here.given || here.temperature) return here;
  return has(await record.load({ first: dayNumber(lastObserved), dayCount: 1 }));
}

interface SpanWanted {
  readonly source: RunWeatherSource;
  readonly kind: SiteReferenceEt | null;
  readonly others: readonly SiteObservations[];
  readonly stored: SiteObservations;
  readonly run: { readonly startDate: string; readonly dayCount: number };
}

/** Weather of a span at the sites: gaps filled, completed, with the reference ET that is carried from the sites. */
async function weatherOf(tx: Tx, wanted: WeatherWanted, { source, kind, others, stored, run }: SpanWanted): Promise<CompletedWeather> {
  const { districtId, settings, district } = wanted;
  const weather = seasonWeather(stored, run, { ...district, fillGaps: settings.fill_gaps, others });
  if (!kind) return weather;
  const { sites } = stored;
  const common = { ...{ sites, weather, method: settings.method, defaultElevation: district.defaultElevation }, ...run };
  const given = kind === 'given' ? givenReferenceEt(stored, run) : null;
  const { sources } = source;
  const summed =
    kind === 'hourly-sum' ? await hourlyReferenceEt(tx, districtId, { ...common, sources, timeZone: district.timeZone }) : null;
  return withReferenceEt({ ...common, values: given ?? summed });
}

/** Where the season has hardly been observed, what is fitted is fitted to the same days of the latest year that has been. */
async function fittedOn(given: {
  wanted: WeatherWanted;
  ahead: AheadRecord;
  weatherIn: (days: DaySpan) => Promise<CompletedWeather>;
  record: RunRecord;
}): Promise<Pick<WeightsWanted, 'fitted'>> {
  const { wanted, ahead, weatherIn, record } = given;
  const { run, settings } = wanted;
  const fits = settings.interpolation === 'kriging' || settings.interpolation === 'automatic' || settings.elevation_trend === 'fitted';
  if (!fits || !record.span || ahead.last_observed === null || ahead.observed_days >= Math.min(LEAST_FITTED_DAYS, run.dayCount)) return {};
  const days = { first: dayNumber(run.startDate), dayCount: run.dayCount };
  let yearsBack = 1;
  let span = sameDays(days, yearsBack);
  while (span.first + span.dayCount - 1 > dayNumber(ahead.last_observed)) span = sameDays(days, ++yearsBack);
  if (span.first < record.span.first) return {};
  return { fitted: { weather: await weatherIn(span), startDate: isoDate(span.first) } };
}

/** The cells that the parcels listen to. */
async function listenedCells(tx: Tx, { districtId, run, parcels, settings }: WeatherWanted, source: RunWeatherSource): Promise<SiteKey[]> {
  const { rows, sites } = await listSourceSites(tx, districtId, source.asked as string);
  const usable = sites.map((_, index) => index);
  const { parcels: weights } = parcelWeights({
    ...{ parcels, sites, usable, settings, startDate: run.startDate },
    grid: source.grid,
    weather: null,
  });
  const listened = new Set(weights.flatMap((parcel) => parcel.weights.map(({ site }) => site)));
  requireSize(listened.size * run.dayCount, listened.size);
  return rows.filter((_, index) => listened.has(index));
}

function requireSize(siteDays: number, siteCount: number): void {
  if (siteDays <= MOST_SITE_DAYS) return;
  throw new Refused(
    `The parcels listen to ${siteCount} weather sites or cells, ${siteDays} site-days; a run takes at most ${MOST_SITE_DAYS}. Take the nearest cell for each parcel, a coarser grid, or a shorter season.`,
  );
}
