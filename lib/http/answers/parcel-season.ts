/** One parcel's season day by day, and the derivation of any day of it. */

import type { Tx } from '../../../db/connect.ts';
import { listParcels } from '../../../db/queries/land-read.ts';
import { listRunParcelDays, type RunHead, type RunParcelDays } from '../../../db/queries/run-read.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { addDays } from '../../base/civil-date.ts';
import { NotFound } from '../../base/errors.ts';
import { nullFromNaN, roundOrNull } from '../../base/missing.ts';
import { depthToVolume } from '../../base/units.ts';
import { geodesicDistance } from '../../geo/geodesic.ts';
import { loadFrozenSeason } from '../../jobs/frozen-season.ts';
import { plantingStages, type StageSpan } from '../../season/calendar.ts';
import { DAILY_VARIABLES, type DailyVariable, type ParcelInput, type SeasonInput } from '../../season/types.ts';
import { explainDay } from '../../season/working.ts';
import type { CarriedSeries, SeriesWeights } from '../../weather/variable.ts';
import type { ParcelDay, ParcelSeason, WorkingAnswer } from '../contract/run.ts';
import { isStorable } from '../storable-text.ts';
import { practiceMembers } from './practice.ts';
import { dayOffset, readFinishedRun } from './run.ts';
import { DayReader } from './run-parcels.ts';

interface Found {
  readonly run: RunHead;
  readonly parcel: RunParcelDays;
  readonly season: SeasonInput;
  readonly name: string | null;
}

/** @throws {NotFound} also for a parcel that the caller may not see. */
async function readParcel(tx: Tx, caller: Caller, runId: string, code: string): Promise<Found> {
  const run = await readFinishedRun(tx, caller.districtId, runId);
  const filter = { districtId: caller.districtId, runId, codes: caller.parcels, parcel: code };
  const [parcel] = isStorable(code) ? await listRunParcelDays(tx, filter, 0, 1) : [];
  if (!parcel) throw new NotFound(`no parcel "${code}" in run ${runId}`);
  const season = await loadFrozenSeason(tx, caller.districtId, runId, [parcel.position]);
  const [land] = await listParcels(tx, { districtId: caller.districtId, codes: [code] }, null, 1);
  return { run, parcel, season, name: land?.name ?? null };
}

export async function answerParcelSeason(caller: Caller, runId: string, code: string): Promise<ParcelSeason> {
  const found = await database().inDistrict(caller.districtId, (tx) => readParcel(tx, caller, runId, code));
  const { run, parcel, season } = found;
  const input = season.parcels[0];
  return {
    parcel: code,
    name: found.name,
    run: runId,
    season: run.seasonCode,
    area_ha: roundOrNull(parcel.area / 1e4, 6) ?? 0,
    elevation_m: nullFromNaN(input.elevation),
    longitude: input.longitude,
    latitude: input.latitude,
    soil: {
      code: input.soil.code,
      name: input.soil.name,
      field_capacity_m3_m3: input.soil.fieldCapacity,
      wilting_point_m3_m3: input.soil.wiltingPoint,
      layers: (input.soil.layers ?? []).map((layer) => ({
        top_m: layer.top,
        bottom_m: layer.bottom,
        field_capacity_m3_m3: layer.fieldCapacity,
        wilting_point_m3_m3: layer.wiltingPoint,
      })),
    },
    method: { code: input.method.code, name: input.method.name, efficiency: input.efficiency ?? input.method.efficiency },
    turnout: parcel.turnoutCode,
    reach: parcel.reachCode,
    plantings: plantingsOf(season),
    estimated_share: roundOrNull(new DayReader(parcel, run.dayCount).estimatedShare({ from: 0, to: run.dayCount - 1 }), 4),
    reference_et: season.settings.referenceEt ?? 'at-parcels',
    weights: sitesOf(input).map((site) => weightMembers(site, input, season)),
    days: parcelDays(parcel, run),
  };
}

/** The plantings of the season; those of earlier seasons, which end where it begins, stand in the days before it only. */
function plantingsOf(season: SeasonInput): ParcelSeason['plantings'] {
  const stages = plantingStages(season, 0);
  const start = addDays(season.startDate, season.leadDays ?? 0);
  return season.parcels[0].plantings.flatMap((planting, k) =>
    planting.harvestDate !== null && planting.harvestDate <= start ? [] : [plantingMembers(planting, stages[k])],
  );
}

function plantingMembers(planting: ParcelInput['plantings'][number], stages: readonly StageSpan[]): ParcelSeason['plantings'][number] {
  return {
    crop: planting.crop.code,
    crop_name: planting.crop.name,
    calendar: planting.calendar.name,
    planting_date: planting.plantingDate,
    harvest_date: planting.harvestDate,
    cut_dates: [...planting.cutDates],
    area_share: planting.areaShare,
    practice: practiceMembers(planting),
    stages: stages.map((span) => ({ ...span })),
  };
}

/** Sites with a weight in any series, those that all series share first. */
function sitesOf(input: ParcelInput): number[] {
  const own = Object.values(input.series ?? {}).flatMap((series) => series.weights);
  return [...new Set([...input.weights, ...own].filter(({ weight }) => weight !== 0).map(({ site }) => site))];
}

const SERIES_NAMES: Record<CarriedSeries, string> = {
  airTemperatureMax: 'air_temperature_max',
  airTemperatureMin: 'air_temperature_min',
  actualVapourPressure: 'vapour_pressure',
  solarRadiation: 'solar_radiation',
  windSpeed2m: 'wind_speed',
  precipitation: 'precipitation',
  referenceEt: 'reference_et',
};

function seriesWeightsOf(place: number, { series }: ParcelInput): Record<string, number> {
  const own = Object.entries(series ?? {}) as [CarriedSeries, SeriesWeights][];
  return Object.fromEntries(
    own.map(([name, { weights }]) => [SERIES_NAMES[name], weights.find(({ site }) => site === place)?.weight ?? 0]),
  );
}

function weightMembers(place: number, parcel: ParcelInput, season: SeasonInput): ParcelSeason['weights'][number] {
  const site = season.sites[place];
  return {
    site: site.code,
    name: site.name,
    weight: parcel.weights.find((entry) => entry.site === place)?.weight ?? 0,
    series_weights: seriesWeightsOf(place, parcel),
    distance_km: roundOrNull(geodesicDistance(parcel.longitude, parcel.latitude, site.longitude, site.latitude) / 1000, 2) ?? 0,
    elevation_m: nullFromNaN(site.elevation),
  };
}

function parcelDays(parcel: RunParcelDays, run: RunHead): ParcelDay[] {
  const reader = new DayReader(parcel, run.dayCount);
  return Array.from({ length: run.dayCount }, (_, day) => {
    const value = (variable: DailyVariable) => nullFromNaN(reader.at(variable, day));
    return {
      date: addDays(run.startDate, day),
      day_kind: reader.dayKind(day),
      reference_et_mm: value('reference_et'),
      crop_et_mm: value('crop_et'),
      adjusted_crop_et_mm: value('adjusted_crop_et'),
      evaporation_mm: value('evaporation'),
      precipitation_mm: value('precipitation'),
      surface_runoff_mm: value('surface_runoff'),
      effective_precipitation_mm: value('effective_precipitation'),
      net_requirement_mm: value('net_requirement'),
      gross_requirement_mm: value('gross_requirement'),
      deep_percolation_mm: value('deep_percolation'),
      root_zone_depletion_mm: value('root_zone_depletion'),
      total_available_water_mm: value('total_available_water'),
      readily_available_water_mm: value('readily_available_water'),
      basal_crop_coefficient: value('basal_crop_coefficient'),
      stress_coefficient: value('stress_coefficient'),
      irrigation_percolation_mm: value('irrigation_percolation'),
      capillary_rise_mm: value('capillary_rise'),
      snow_water_mm: value('snow_water'),
      ponded_water_mm: value('ponded_water'),
      soil_water_depletion_mm: value('soil_water_depletion'),
      gross_volume_m3: roundOrNull(depthToVolume(reader.at('gross_requirement', day), parcel.area), 3),
      fallbacks: reader.fallbacks({ from: day, to: day }),
    };
  });
}

/** The derivation of one day, by the code that computed it, beside what the run stored. */
export async function answerWorking(caller: Caller, runId: string, code: string, date: string): Promise<WorkingAnswer> {
  const { run, parcel, season } = await database().inDistrict(caller.districtId, (tx) => readParcel(tx, caller, runId, code));
  const day = dayOffset(run, date);
  const working = explainDay(season, 0, day);
  const reader = new DayReader(parcel, run.dayCount);
  const named = (value: (variable: DailyVariable) => number) =>
    Object.fromEntries(DAILY_VARIABLES.map(({ id, unit }) => [unit === 'mm' ? `${id}_mm` : id, nullFromNaN(value(id))]));
  return {
    run: runId,
    parcel: code,
    date,
    inputs: working.inputs.map((input) => ({
      site: input.site,
      site_name: input.siteName,
      weight: input.weight,
      series_weights: { ...input.seriesWeights },
      elevation_m: nullFromNaN(input.elevation),
      values: Object.fromEntries(Object.entries(input.values).map(([name, value]) => [name, nullFromNaN(value)])),
      fallbacks: [...input.flags],
    })),
    steps: working.steps.map((step) => ({
      ...step,
      inputs: step.inputs.map((input) => ({ ...input, value: nullFromNaN(input.value) })),
      result: nullFromNaN(step.result),
    })),
    results: named((variable) => working.results[variable]),
    stored: named((variable) => reader.at(variable, day)),
  };
}
