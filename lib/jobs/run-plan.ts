/** From the district's rows to the inputs of a season: weather completed, weights made, every parcel with its soil, method and plantings. */

import type { listLibraries } from '../../db/queries/run-inputs.ts';
import type { listPlantingsOf, listRunParcelPage } from '../../db/queries/run-land.ts';
import { Refused } from '../base/errors.ts';
import { nanFromNull } from '../base/missing.ts';
import type { ApplicationMethod, Crop, CropCalendar, ParcelInput, Planting, SeasonInput, SeasonSettings, Soil } from '../season/types.ts';
import type { CompletedWeather, Site, SiteWeight } from '../weather/variable.ts';
import type { WaterSpan } from './run-deliveries.ts';
import type { ParcelRecords } from './run-records.ts';
import { type RunSettings, seasonSettings } from './run-settings.ts';
import type { ParcelWeights } from './run-weights.ts';

type ParcelRow = Awaited<ReturnType<typeof listRunParcelPage>>[number];
type PlantingRow = Awaited<ReturnType<typeof listPlantingsOf>>[number];
type LibraryRows = Awaited<ReturnType<typeof listLibraries>>;
type SoilRow = LibraryRows['soils'][number];
type MethodRow = LibraryRows['methods'][number];

/** The libraries of a run, by code. */
export interface Libraries {
  readonly soils: Readonly<Record<string, Soil>>;
  readonly methods: Readonly<Record<string, ApplicationMethod>>;
  readonly crops: Readonly<Record<string, Crop>>;
  readonly calendars: Readonly<Record<string, CropCalendar>>;
}

/** A planting with crop and calendar by code. */
interface FrozenPlanting extends Omit<Planting, 'crop' | 'calendar'> {
  readonly crop: string;
  readonly calendar: string;
}

/** Members of a parcel that come from the district's records; each is there only where the run takes it. */
const RECORDED = ['deliveries', 'efficiency', 'salinity', 'waterTable', 'initialWater', 'observedBasal'] as const;
type Recorded = Pick<ParcelInput, (typeof RECORDED)[number]>;

/** One parcel of a run with its tables by code: what is frozen beside the run. Everything in it is as JSON has it. */
export interface FrozenParcel extends Recorded {
  readonly area: number;
  readonly latitude: number;
  readonly longitude: number;
  readonly elevation: number;
  readonly soil: string;
  readonly method: string;
  readonly weights: readonly SiteWeight[];
  readonly series?: ParcelInput['series'];
  readonly plantings: readonly FrozenPlanting[];
  /** plantings of earlier seasons that stand in the days before this one; they follow its own in the season's input */
  readonly earlier?: readonly FrozenPlanting[];
}

export function librariesOf(rows: LibraryRows): Libraries {
  return {
    soils: byCode(rows.soils, soilFromRow),
    methods: byCode(rows.methods, methodFromRow),
    crops: byCode(rows.crops, (row) => cropFromJson(row.definition)),
    calendars: byCode(rows.calendars, (row) => ({ ...(row.definition as CropCalendar), code: row.code, name: row.name })),
  };
}

function soilFromRow({ districtId: _district, source: _source, profile, ...row }: SoilRow): Soil {
  return { ...row, curveNumber: nanFromNull(row.curveNumber), rootLimit: nanFromNull(row.rootLimit), ...profile };
}

function methodFromRow({ districtId: _district, source: _source, system, ...row }: MethodRow): ApplicationMethod {
  return { ...row, ...system };
}

/** JSON has no NaN: a crop without a published yield response comes back with one. */
export function cropFromJson(definition: unknown): Crop {
  const crop = definition as Crop;
  return { ...crop, yieldResponse: nanFromNull(crop.yieldResponse) };
}

function byCode<Row extends { code: string }, Value>(rows: readonly Row[], value: (row: Row) => Value): Record<string, Value> {
  return Object.fromEntries(rows.map((row) => [row.code, value(row)]));
}

/** Indexes of the sites that have what a parcel needs on at least one day: air temperature, or reference ET where it is carried. */
export function usableSites({ siteCount, dayCount, airTemperatureMax, referenceEt }: CompletedWeather): number[] {
  const reports = (row: Float64Array, site: number) =>
    row.subarray(site * dayCount, (site + 1) * dayCount).some((value) => !Number.isNaN(value));
  const sites = Array.from({ length: siteCount }, (_, site) => site);
  return sites.filter((site) => reports(airTemperatureMax, site) || (referenceEt ? reports(referenceEt, site) : false));
}

/**
 * Every parcel with its codes resolved to the district's defaults where it brings none. `soils` and `weights` are one for each parcel; `records` by code,
 * parcels without any left out.
 */
export function frozenParcels(options: {
  parcels: readonly ParcelRow[];
  plantings: readonly PlantingRow[];
  sites: readonly Site[];
  soils: readonly string[];
  weights: readonly ParcelWeights[];
  settings: RunSettings;
  defaultElevation: number;
  records?: ReadonlyMap<string, ParcelRecords>;
}): FrozenParcel[] {
  const plantingsOf = new Map<string, PlantingRow[]>();
  for (const row of options.plantings) plantingsOf.set(row.parcelCode, [...(plantingsOf.get(row.parcelCode) ?? []), row]);
  return options.parcels.map((parcel, index) => {
    const { weights, series } = options.weights[index];
    const records = options.records?.get(parcel.code);
    return {
      area: parcel.area,
      latitude: parcel.latitude,
      longitude: parcel.longitude,
      elevation: parcel.elevation ?? elevationFromSites(weights, options.sites, options.defaultElevation),
      soil: options.soils[index],
      method: parcel.methodCode ?? options.settings.default_method,
      weights,
      ...(series ? { series } : {}),
      plantings: (plantingsOf.get(parcel.code) ?? []).map(frozenPlanting),
      ...(records ? recordedOf(records) : {}),
      ...(records?.earlier ? { earlier: records.earlier.map(frozenPlanting) } : {}),
    };
  });
}

function frozenPlanting(row: PlantingRow): FrozenPlanting {
  return {
    crop: row.cropCode,
    calendar: row.calendarCode,
    plantingDate: row.plantingDate,
    harvestDate: row.harvestDate,
    cutDates: row.cutDates,
    areaShare: row.areaShare,
    ...row.practice,
  };
}

/** The recorded members that are there; those that are not stay away, so that the JSON of most parcels is short. */
function recordedOf(from: Recorded): Recorded {
  return Object.fromEntries(RECORDED.flatMap((name) => (from[name] === undefined ? [] : [[name, from[name]]])));
}

/** A parcel without an elevation of its own lies at the weighted elevation of its sites: no lapse is then applied. */
function elevationFromSites(weights: readonly SiteWeight[], sites: readonly Site[], fallback: number): number {
  let sum = 0;
  for (const { site, weight } of weights) sum += weight * (Number.isNaN(sites[site].elevation) ? fallback : sites[site].elevation);
  return sum;
}

/**
 * The numeric rooms' form of frozen parcels. Weather and start date are those of the first day stepped; `span` says how many days come before the season,
 * and how days are watered.
 *
 * @throws Refused when a code names nothing in the libraries
 */
export function seasonInput(options: {
  startDate: string;
  settings: RunSettings;
  sites: readonly Site[];
  weather: CompletedWeather;
  libraries: Libraries;
  parcels: readonly { code: string; input: FrozenParcel }[];
  span?: WaterSpan;
}): SeasonInput {
  const { libraries, span } = options;
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
      ...(input.series ? { series: seriesFromJson(input.series) } : {}),
      ...recordedOf(input),
      plantings: [...input.plantings, ...(input.earlier ?? [])].map((planting) => ({
        ...planting,
        crop: known(libraries.crops, planting.crop, 'crop', code),
        calendar: known(libraries.calendars, planting.calendar, 'crop calendar', code),
      })),
    }),
  );
  return {
    startDate: options.startDate,
    dayCount: options.weather.dayCount,
    settings: { ...seasonSettings(options.settings), ...wateredAs(span) },
    sites: options.sites,
    weather: options.weather,
    parcels,
    ...(span && span.leadDays > 0 ? { leadDays: span.leadDays } : {}),
  };
}

function wateredAs(span: WaterSpan | undefined): Pick<SeasonSettings, 'water' | 'recordedUntil'> {
  if (!span) return {};
  return { water: span.water, ...(span.recordedUntil === undefined ? {} : { recordedUntil: span.recordedUntil }) };
}

/** JSON has no NaN: a series without a kriging variance comes back with one. */
function seriesFromJson(series: NonNullable<ParcelInput['series']>): NonNullable<ParcelInput['series']> {
  const entries = Object.entries(series).map(([name, own]) => [name, { ...own, variance: nanFromNull(own.variance) }]);
  return Object.fromEntries(entries);
}

function known<Value>(table: Readonly<Record<string, Value>>, code: string, what: string, parcel: string): Value {
  const value = table[code];
  if (value === undefined)
    throw new Refused(`Parcel ${parcel} names ${what} "${code}", which the district's library does not have. Add it or change the parcel.`);
  return value;
}
