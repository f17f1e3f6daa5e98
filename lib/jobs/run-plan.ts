/** From the district's rows to the inputs of a season: weather completed, weights made, every parcel with its soil, method and plantings. */

import type { listLibraries, listRunParcels, listSeasonPlantings } from '../../db/queries/run-inputs.ts';
import { dayNumber, isoDate } from '../base/civil-date.ts';
import { Refused } from '../base/errors.ts';
import { nanFromNull } from '../base/missing.ts';
import { completeWeather } from '../energy/complete-weather.ts';
import type { ApplicationMethod, Crop, CropCalendar, ParcelInput, SeasonInput, Soil } from '../season/types.ts';
import { fillTemperatureGaps } from '../weather/gaps.ts';
import { inverseDistanceWeights, nearestWeights } from '../weather/interpolation.ts';
import type { CompletedWeather, Site, SiteObservations, SiteWeight } from '../weather/variable.ts';
import { type RunSettings, seasonSettings } from './run-settings.ts';

type ParcelRow = Awaited<ReturnType<typeof listRunParcels>>[number];
type PlantingRow = Awaited<ReturnType<typeof listSeasonPlantings>>[number];
type LibraryRows = Awaited<ReturnType<typeof listLibraries>>;

/** The libraries of a run, by code. */
export interface Libraries {
  readonly soils: Readonly<Record<string, Soil>>;
  readonly methods: Readonly<Record<string, ApplicationMethod>>;
  readonly crops: Readonly<Record<string, Crop>>;
  readonly calendars: Readonly<Record<string, CropCalendar>>;
}

/** One parcel of a run with its tables by code: what is frozen beside the run. */
export interface FrozenParcel {
  readonly area: number;
  readonly latitude: number;
  readonly longitude: number;
  readonly elevation: number;
  readonly soil: string;
  readonly method: string;
  readonly weights: readonly SiteWeight[];
  readonly plantings: readonly {
    readonly crop: string;
    readonly calendar: string;
    readonly plantingDate: string;
    readonly harvestDate: string | null;
    readonly cutDates: readonly string[];
    readonly areaShare: number;
  }[];
}

export function librariesOf(rows: LibraryRows): Libraries {
  return {
    soils: byCode(rows.soils, (row) => ({ ...row, curveNumber: nanFromNull(row.curveNumber), rootLimit: nanFromNull(row.rootLimit) })),
    methods: byCode(rows.methods, (row) => row),
    crops: byCode(rows.crops, (row) => cropFromJson(row.definition)),
    calendars: byCode(rows.calendars, (row) => ({ ...(row.definition as CropCalendar), code: row.code, name: row.name })),
  };
}

/** JSON has no NaN: a crop without a published yield response comes back with one. */
export function cropFromJson(definition: unknown): Crop {
  const crop = definition as Crop;
  return { ...crop, yieldResponse: nanFromNull(crop.yieldResponse) };
}

function byCode<Row extends { code: string }, Value>(rows: readonly Row[], value: (row: Row) => Value): Record<string, Value> {
  return Object.fromEntries(rows.map((row) => [row.code, value(row)]));
}

/**
 * Weather of the season at the sites, completed by the published fallbacks.
 *
 * @throws Refused naming the days on which no site has air temperature
 */
export function seasonWeather(
  stored: SiteObservations,
  span: { startDate: string; dayCount: number },
  options: { defaultElevation: number; radiationCoefficient: number },
): CompletedWeather {
  const observations = coveringDays(stored, span);
  refuseUnobserved(observations, span);
  const whole = completeWeather(observations, { ...options, temperatures: fillTemperatureGaps(observations) });
  const offset = dayNumber(span.startDate) - dayNumber(observations.startDate);
  const weather = windowOf(whole, offset, span.dayCount);
  const empty = daysWithoutTemperature(weather);
  if (empty.length > 0) {
    const first = dayNumber(span.startDate);
    const shown = rangesOf(empty.map((day) => first + day));
    throw new Refused(
      `No site has air temperature on ${empty.length} of ${span.dayCount} days (${shown}), and no other year gives a normal for them. Import weather for these days, or shorten the season.`,
    );
  }
  return weather;
}

/** Observations over at least the days of the season, so that days past the record's end are filled by the same rule as gaps within it. */
function coveringDays(observations: SiteObservations, span: { startDate: string; dayCount: number }): SiteObservations {
  const [first, seasonFirst] = [dayNumber(observations.startDate), dayNumber(span.startDate)];
  const from = Math.min(first, seasonFirst);
  const to = Math.max(first + observations.dayCount, seasonFirst + span.dayCount);
  const dayCount = to - from;
  if (dayCount === observations.dayCount) return observations;
  const values = Object.entries(observations.values).map(([variable, old]) => {
    const wide = new Float64Array(observations.sites.length * dayCount).fill(Number.NaN);
    for (let site = 0; site < observations.sites.length; site++) {
      wide.set(old.subarray(site * observations.dayCount, (site + 1) * observations.dayCount), site * dayCount + first - from);
    }
    return [variable, wide];
  });
  return { sites: observations.sites, startDate: isoDate(from), dayCount, values: Object.fromEntries(values) };
}

/** Normals stand in for missing days of a season, not for a season. */
function refuseUnobserved(observations: SiteObservations, span: { startDate: string; dayCount: number }): void {
  const from = dayNumber(span.startDate) - dayNumber(observations.startDate);
  const observed = (['air_temperature_max_c', 'air_temperature_mean_c'] as const).some((variable) => {
    const all = observations.values[variable];
    return observations.sites.some((_, site) =>
      all
        ?.subarray(site * observations.dayCount + from, site * observations.dayCount + from + span.dayCount)
        .some((value) => !Number.isNaN(value)),
    );
  });
  if (observed) return;
  const to = isoDate(dayNumber(span.startDate) + span.dayCount - 1);
  throw new Refused(`No site has air temperature on any day of the season, ${span.startDate} to ${to}. Import weather of these days.`);
}

function windowOf(whole: CompletedWeather, offset: number, dayCount: number): CompletedWeather {
  const cut = <A extends Float64Array | Uint16Array>(source: A, fill: number): A => {
    const out = new (source.constructor as new (length: number) => A)(whole.siteCount * dayCount).fill(fill) as A;
    for (let site = 0; site < whole.siteCount; site++) {
      for (let day = 0; day < dayCount; day++) {
        const from = day + offset;
        if (from >= 0 && from < whole.dayCount) out[site * dayCount + day] = source[site * whole.dayCount + from];
      }
    }
    return out;
  };
  return {
    siteCount: whole.siteCount,
    dayCount,
    airTemperatureMax: cut(whole.airTemperatureMax, Number.NaN),
    airTemperatureMin: cut(whole.airTemperatureMin, Number.NaN),
    actualVapourPressure: cut(whole.actualVapourPressure, Number.NaN),
    solarRadiation: cut(whole.solarRadiation, Number.NaN),
    windSpeed2m: cut(whole.windSpeed2m, Number.NaN),
    precipitation: cut(whole.precipitation, Number.NaN),
    flags: cut(whole.flags, 0),
  };
}

function daysWithoutTemperature(weather: CompletedWeather): number[] {
  const empty: number[] = [];
  for (let day = 0; day < weather.dayCount; day++) {
    let found = false;
    for (let site = 0; site < weather.siteCount && !found; site++)
      found = !Number.isNaN(weather.airTemperatureMax[site * weather.dayCount + day]);
    if (!found) empty.push(day);
  }
  return empty;
}

/** Day numbers as text ranges, the first few. */
function rangesOf(days: readonly number[]): string {
  const ranges: string[] = [];
  let from = days[0];
  for (let i = 0; i < days.length; i++) {
    if (days[i + 1] === days[i] + 1) continue;
    ranges.push(from === days[i] ? isoDate(from) : `${isoDate(from)} to ${isoDate(days[i])}`);
    from = days[i + 1];
  }
  return ranges.length > 6 ? `${ranges.slice(0, 6).join(', ')} and ${ranges.length - 6} more` : ranges.join(', ');
}

/** Site weights of one place by the run's settings, over sites that have any temperature at all in the season. */
function siteWeights(
  place: { longitude: number; latitude: number },
  sites: readonly Site[],
  usable: readonly number[],
  settings: RunSettings,
) {
  const candidates = usable.map((index) => sites[index]);
  const weights =
    settings.interpolation === 'nearest'
      ? nearestWeights([place.longitude, place.latitude], candidates)
      : inverseDistanceWeights({
          longitude: place.longitude,
          latitude: place.latitude,
          sites: candidates,
          power: settings.power,
          maximumSites: settings.maximum_sites,
        });
  return weights.map((entry) => ({ site: usable[entry.site], weight: entry.weight }));
}

/** Indexes of the sites that have air temperature on at least one day. */
function usableSites(weather: CompletedWeather): number[] {
  return Array.from({ length: weather.siteCount }, (_, site) => site).filter((site) => {
    const row = weather.airTemperatureMax.subarray(site * weather.dayCount, (site + 1) * weather.dayCount);
    return row.some((value) => !Number.isNaN(value));
  });
}

/** The sites that have air temperature on every day: a parcel that listens to one of them needs no stand-in. */
function completeSites(weather: CompletedWeather): ReadonlySet<number> {
  const { airTemperatureMax, siteCount, dayCount } = weather;
  const isComplete = (site: number) => !airTemperatureMax.subarray(site * dayCount, (site + 1) * dayCount).some(Number.isNaN);
  return new Set(Array.from({ length: siteCount }, (_, site) => site).filter(isComplete));
}

/** Every parcel with its codes resolved to the district's defaults where it brings none. */
export function frozenParcels(options: {
  parcels: readonly ParcelRow[];
  plantings: readonly PlantingRow[];
  sites: readonly Site[];
  weather: CompletedWeather;
  settings: RunSettings;
  defaultElevation: number;
}): FrozenParcel[] {
  const usable = usableSites(options.weather);
  const complete = completeSites(options.weather);
  const plantingsOf = new Map<string, PlantingRow[]>();
  for (const row of options.plantings) plantingsOf.set(row.parcelCode, [...(plantingsOf.get(row.parcelCode) ?? []), row]);
  return options.parcels.map((parcel) => {
    const near = siteWeights(parcel, options.sites, usable, options.settings);
    const weights = near.some(({ site }) => complete.has(site)) ? near : withEveryDay(near, parcel, usable, options);
    return {
      area: parcel.area,
      latitude: parcel.latitude,
      longitude: parcel.longitude,
      elevation: parcel.elevation ?? elevationFromSites(weights, options.sites, options.defaultElevation),
      soil: parcel.soilCode ?? options.settings.default_soil,
      method: parcel.methodCode ?? options.settings.default_method,
      weights,
      plantings: (plantingsOf.get(parcel.code) ?? []).map((row) => ({
        crop: row.cropCode,
        calendar: row.calendarCode,
        plantingDate: row.plantingDate,
        harvestDate: row.harvestDate,
        cutDates: row.cutDates,
        areaShare: row.areaShare,
      })),
    };
  });
}

/** A parcel without an elevation of its own lies at the weighted elevation of its sites: no lapse is then applied. */
function elevationFromSites(weights: readonly SiteWeight[], sites: readonly Site[], fallback: number): number {
  let sum = 0;
  for (const { site, weight } of weights) sum += weight * (Number.isNaN(sites[site].elevation) ? fallback : sites[site].elevation);
  return sum;
}

/** On days when none of a parcel's sites reports, the nearest site that does stands in with a negligible standing weight. */
const STAND_IN_WEIGHT = 1e-9;

function withEveryDay(
  weights: SiteWeight[],
  place: { longitude: number; latitude: number },
  usable: readonly number[],
  options: { sites: readonly Site[]; weather: CompletedWeather; settings: RunSettings },
): SiteWeight[] {
  const { weather } = options;
  const reports = (site: number, day: number) => !Number.isNaN(weather.airTemperatureMax[site * weather.dayCount + day]);
  const result = [...weights];
  for (let day = 0; day < weather.dayCount; day++) {
    if (result.some(({ site }) => reports(site, day))) continue;
    const reporting = usable.filter((site) => reports(site, day));
    const [nearest] = siteWeights(place, options.sites, reporting, { ...options.settings, interpolation: 'nearest' });
    if (nearest) result.push({ site: nearest.site, weight: STAND_IN_WEIGHT });
  }
  return result;
}

/** The numeric rooms' form of frozen parcels. @throws Refused when a code names nothing in the libraries */
export function seasonInput(options: {
  startDate: string;
  settings: RunSettings;
  sites: readonly Site[];
  weather: CompletedWeather;
  libraries: Libraries;
  parcels: readonly { code: string; input: FrozenParcel }[];
}): SeasonInput {
  const { libraries } = options;
  const parcels = options.parcels.map(
    ({ code, input }): ParcelInput => ({
      code,
      area: input.area,
      latitude: input.latitude,
      longitude: input.longitude,
      elevation: input.elevation,
      soil: known(libraries.soils, input.soil, 'soil', code),
      method: known(libraries.methods, input.method, 'application method', code),
      weights: input.weights,
      plantings: input.plantings.map((planting) => ({
        ...planting,
        crop: known(libraries.crops, planting.crop, 'crop', code),
        calendar: known(libraries.calendars, planting.calendar, 'crop calendar', code),
      })),
    }),
  );
  return {
    startDate: options.startDate,
    dayCount: options.weather.dayCount,
    settings: seasonSettings(options.settings),
    sites: options.sites,
    weather: options.weather,
    parcels,
  };
}

function known<Value>(table: Readonly<Record<string, Value>>, code: string, what: string, parcel: string): Value {
  const value = table[code];
  if (value === undefined)
    throw new Refused(`Parcel ${parcel} names ${what} "${code}", which the district's library does not have. Add it or change the parcel.`);
  return value;
}
