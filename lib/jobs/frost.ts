/** A frost night over the parcels of a district: loads plantings and weather, computes stations, then every planting. */
import type { Tx } from '../../db/connect.ts';
import { BUD_BASE } from '../../db/library/frost.ts';
import { findWholeDistrict, listSeasons } from '../../db/queries/district-read.ts';
import { type FrostPlantingRow, listFrostPlantings } from '../../db/queries/frost.ts';
import { dayNumber } from '../base/civil-date.ts';
import { NotFound, Refused, TooLarge } from '../base/errors.ts';
import { nanFromNull } from '../base/missing.ts';
import type { Trace } from '../base/working.ts';
import type { Evening, NightOptions } from '../energy/frost-night.ts';
import { type ParcelNight, type PlantNight, type PlantProtection, plantNight, plantProtection } from '../energy/frost-plant.ts';
import type { Rotation } from '../energy/frost-protection.ts';
import { type FrostRisk, frostRisk } from '../energy/frost-stage.ts';
import { inverseDistanceOf, nearSites, type PlacedSites, placeSites } from '../weather/interpolation.ts';
import type { SiteWeight } from '../weather/variable.ts';
import { budThermalTime, isLeafless } from './frost-evening.ts';
import { type StationNight, stationNights } from './frost-site.ts';
import { chosenCrops, type PlantingStage, plantingStage, type StageChoices } from './frost-stages.ts';
import { FROST_SITES, type FrostRecord, loadFrostRecord } from './frost-weather.ts';

/** Most plantings of one answer. */
export const MOST_FROST_PLANTINGS = 50_000;
/** Exponent of distance in the weights of the stations. Common practice, no source. */
const POWER = 2;
/** From this height on a crop is sprinkled as a tall one [m]. Choice of ours. */
const TALL = 1.5;

export interface FrostWanted {
  /** evening of the night */
  readonly date: string;
  readonly source: string | null;
  readonly given: Evening | null;
  readonly options: NightOptions;
  readonly stages: StageChoices;
  readonly rotation: Rotation;
  /** parcels that the reader may see; null: all */
  readonly codes: readonly string[] | null;
  /** only this parcel */
  readonly parcel?: string;
}

/** One planting on the night. */
export interface FrostPlanting {
  readonly row: FrostPlantingRow;
  /** over `FrostNight.stations`; none where no station speaks for it */
  readonly weights: readonly SiteWeight[];
  readonly night: ParcelNight;
  readonly plant: PlantNight;
  readonly thermalTime: number;
  readonly stage: PlantingStage;
  /** null where minimum or critical temperature is not known */
  readonly risk: FrostRisk | null;
  /** NaN throughout where there is no risk */
  readonly protection: PlantProtection;
  /** m² */
  readonly area: number;
}

export interface FrostNight {
  readonly source: string;
  readonly role: 'observed' | 'forecast';
  readonly stations: readonly StationNight[];
  readonly plantings: readonly FrostPlanting[];
}

/**
 * @throws {NotFound} for an unknown source; {Refused} without weather stations, or when no evening is known and none is given; {TooLarge} above 50,000 plantings
 */
export async function computeFrost(tx: Tx, districtId: string, wanted: FrostWanted): Promise<FrostNight> {
  const district = await findWholeDistrict(tx, districtId);
  if (!district) throw new NotFound('there is no such district');
  const rows = await plantingsOf(tx, districtId, wanted);
  const record = await loadFrostRecord(tx, districtId, { district, source: wanted.source, date: wanted.date, places: rows });
  const stations = stationNights({ record, date: wanted.date, given: wanted.given, options: wanted.options });
  const ready = readyStations(record, stations, wanted.date);
  if (ready.placed === null && rows.length > 0) {
    throw new Refused(
      `No station of "${record.source}" has an evening on ${wanted.date}: choose a night on record, or give air_temperature_c, dew_point_c, wind_speed_m_s and cloud_share of the evening.`,
    );
  }
  const plantings = rows.map((row) => frostPlanting(row, ready, wanted, district.defaultElevation));
  return { source: record.source, role: record.role, stations, plantings };
}

async function plantingsOf(tx: Tx, districtId: string, { date, codes, parcel, stages }: FrostWanted): Promise<FrostPlantingRow[]> {
  const seasons = (await listSeasons(tx, districtId)).filter(({ startDate, endDate }) => startDate <= date && date <= endDate);
  const filter = { districtId, seasons: seasons.map(({ code }) => code), codes, crops: chosenCrops(stages), parcel };
  const rows = await listFrostPlantings(tx, filter, MOST_FROST_PLANTINGS + 1);
  if (rows.length > MOST_FROST_PLANTINGS) {
    throw new TooLarge(`more than ${MOST_FROST_PLANTINGS} plantings can be hurt by frost on ${date}: ask for one parcel at a time`);
  }
  // a crop with a temperature of one's own counts while it is in the field; buds are there before the leaves
  return rows.filter(
    (row) => row.frostTable !== null || (row.plantingDate <= date && (row.harvestDate === null || date <= row.harvestDate)),
  );
}

interface ReadyStations {
  readonly date: string;
  readonly stations: readonly StationNight[];
  /** [station] °C d */
  readonly thermalTimes: readonly number[];
  /** those with a minimum; null when none has */
  readonly placed: PlacedSites | null;
}

function readyStations(record: FrostRecord, stations: readonly StationNight[], date: string): ReadyStations {
  const day = dayNumber(date) - dayNumber(record.observed.startDate);
  const thermalTimes = stations.map((_, station) => budThermalTime({ record, station, day }, BUD_BASE));
  const speaking = record.stations.map(({ site }, at) =>
    Number.isNaN(stations[at].estimate.minimum) ? { ...site, longitude: Number.NaN, latitude: Number.NaN } : site,
  );
  const some = stations.some(({ estimate }) => !Number.isNaN(estimate.minimum));
  return { date, stations, thermalTimes, placed: some ? placeSites(speaking) : null };
}

function frostPlanting(row: FrostPlantingRow, ready: ReadyStations, wanted: FrostWanted, defaultElevation: number): FrostPlanting {
  const near = ready.placed ? nearSites([row.longitude, row.latitude], ready.placed, FROST_SITES) : [];
  const weights = near.length > 0 ? inverseDistanceOf(near, POWER) : [];
  const night = nightAtParcel(weights, ready.stations, row.elevation ?? defaultElevation);
  const plant = plantNight(night, wanted.options.sky);
  const thermalTime = weightedKnown(weights, (station) => ready.thermalTimes[station]);
  const leafless = isLeafless(ready.date, row.latitude);
  const stage = plantingStage(wanted.stages, { crop: row.crop, frostTable: row.frostTable, thermalTime, leafless });
  const risk = frostRisk({ expected: plant.leaf, low: plant.leafLow }, stage);
  const area = row.area * row.areaShare;
  const planting = { row, weights, night, plant, thermalTime, stage, risk, area };
  return { ...planting, protection: protectionOf(planting, wanted.rotation) };
}

const NO_PROTECTION: PlantProtection = {
  ...{ rate: Number.NaN, heat: Number.NaN, flow: Number.NaN, hours: Number.NaN, volume: Number.NaN },
};

/** Water of the night, by the same code in the answer and in the working. */
export function protectionOf(
  { row, night, plant, risk, area }: Pick<FrostPlanting, 'row' | 'night' | 'plant' | 'risk' | 'area'>,
  rotation: Rotation,
  trace: Trace | null = null,
): PlantProtection {
  if (risk === null || risk === 'none') return NO_PROTECTION;
  const height = nanFromNull(row.height) >= TALL ? 'tall' : 'short';
  return plantProtection(night, plant.start, { area, height, rotation }, trace);
}

/** The stations' night carried to a parcel by their weights, without regard to elevation: on a still night cold air gathers low. */
function nightAtParcel(weights: readonly SiteWeight[], stations: readonly StationNight[], elevation: number): ParcelNight {
  const of = (pick: (station: StationNight) => number) =>
    weights.length === 0 ? Number.NaN : weights.reduce((sum, { site, weight }) => sum + weight * pick(stations[site]), 0);
  return {
    airTemperature: of(({ evening }) => evening.airTemperature),
    dewPoint: of(({ evening }) => evening.dewPoint),
    windSpeed: of(({ evening }) => evening.windSpeed),
    cloudFactor: of(({ evening }) => evening.cloudFactor),
    minimum: of(({ estimate }) => estimate.minimum),
    error: of(({ estimate }) => estimate.error),
    nightLength: of(({ times }) => times.nightLength),
    elevation,
  };
}

/** Weighted mean over the stations that know it; NaN where none does. */
function weightedKnown(weights: readonly SiteWeight[], pick: (station: number) => number): number {
  const known = weights.filter(({ site }) => !Number.isNaN(pick(site)));
  const total = known.reduce((sum, { weight }) => sum + weight, 0);
  return known.reduce((sum, { site, weight }) => sum + weight * pick(site), 0) / total;
}
