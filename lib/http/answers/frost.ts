/** A frost night: stations, plantings, working, nights to choose from, and the table of critical temperatures. */
import { z } from 'zod';
import { CRITICAL_SOURCE, CRITICAL_TABLES, STAGE_SOURCE } from '../../../db/library/frost.ts';
import { listParcelShapes } from '../../../db/queries/frost.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { addDays, isIsoDate } from '../../base/civil-date.ts';
import { Malformed, NotFound } from '../../base/errors.ts';
import { roundOrNull } from '../../base/missing.ts';
import type { FrostGroundName } from '../../energy/frost-cooling.ts';
import type { Evening } from '../../energy/frost-night.ts';
import { cloudFactorOfShare, type SkyFormula } from '../../energy/frost-sky.ts';
import type { FrostRisk } from '../../energy/frost-stage.ts';
import { computeFrost, type FrostNight, type FrostPlanting, type FrostWanted } from '../../jobs/frost.ts';
import { listFrozenNights } from '../../jobs/frost-nights.ts';
import { parseStages } from '../../jobs/frost-stages.ts';
import { frostWorking } from '../../jobs/frost-working.ts';
import { CAUTIONS } from '../../report/cautions.ts';
import type { CriticalRow, FrostAnswer, FrostWorkingAnswer, FrozenNights } from '../contract/frost.ts';
import { readCursor, writeCursor } from '../paging.ts';
import { rowMembers, stationMembers } from './frost-members.ts';

/** What every frost answer says of itself. */
export const FROST_CAUTIONS: readonly string[] = [
  'An estimate, no warning service. It does not know the hollows where cold air gathers, 2 to 3 °C colder than the stations around them: hang thermometers at bud height and go by them.',
  CAUTIONS.frost,
  'Sprinkling that stops while the wet bulb is below 0 °C, or that is too weak for the wind, cools the plant below the air and does more harm than none. Ice breaks limbs and trellises. Whether water may be taken for frost protection is a matter of the water right. Follow local codes, local advice and a licensed practitioner.',
];

export interface FrostAsked {
  readonly date: string;
  readonly source?: string;
  readonly air_temperature_c?: number;
  readonly dew_point_c?: number;
  readonly wind_speed_m_s?: number;
  readonly cloud_share?: number;
  readonly method: 'auto' | 'brunt';
  readonly sky: SkyFormula;
  readonly ground: FrostGroundName;
  readonly stages?: string;
  readonly rotation_s: '30' | '60';
}

interface FrostListAsked extends FrostAsked {
  readonly risk?: FrostRisk | 'any';
  readonly limit: number;
  readonly cursor?: string;
}

/** The night with its plantings in map order. @throws {Malformed} for a bad date, stage or evening; as `computeFrost` otherwise */
export async function answerFrost(caller: Caller, asked: FrostListAsked): Promise<FrostAnswer> {
  const wanted = wantedOf(caller, asked);
  const found = await database().inDistrict(caller.districtId, (tx) => computeFrost(tx, caller.districtId, wanted));
  const from = readCursor(asked.cursor, z.tuple([z.number().int().min(0)]))?.[0] ?? 0;
  const listed = found.plantings.filter(({ risk }) => isListed(risk, asked.risk));
  const end = from + Math.min(asked.limit, listed.length);
  const atRisk = found.plantings.filter(({ risk }) => isListed(risk, 'any'));
  const sum = (pick: (planting: FrostPlanting) => number) => atRisk.reduce((total, each) => total + (pick(each) || 0), 0);
  return {
    ...headOf(found, asked),
    stations: found.stations.map(stationMembers),
    counts: countsOf(found.plantings),
    area_at_risk_ha: roundOrNull(sum(({ area }) => area) / 1e4, 4) ?? 0,
    sprinkling_flow_l_s:
      roundOrNull(
        sum(({ protection }) => protection.flow),
        1,
      ) ?? 0,
    sprinkling_volume_m3:
      roundOrNull(
        sum(({ protection }) => protection.volume),
        0,
      ) ?? 0,
    beyond_table: atRisk.filter(({ protection }) => Number.isNaN(protection.rate)).length,
    items: listed.slice(from, end).map(rowMembers),
    next_cursor: end < listed.length ? writeCursor(end) : null,
    total: listed.length,
    cautions: [...FROST_CAUTIONS],
  };
}

/** Steps of one planting. @throws {NotFound} where frost can hurt nothing on the parcel, or it is not the reader's */
export async function answerFrostWorking(
  caller: Caller,
  asked: FrostAsked & { parcel: string; planting?: number },
): Promise<FrostWorkingAnswer> {
  const wanted = { ...wantedOf(caller, asked), parcel: asked.parcel };
  const found = await database().inDistrict(caller.districtId, (tx) => computeFrost(tx, caller.districtId, wanted));
  const planting = found.plantings.find(({ row }) => asked.planting === undefined || row.sequence === asked.planting);
  if (!planting) throw new NotFound(`parcel "${asked.parcel}" has no planting on ${asked.date} with a table of critical temperatures`);
  return {
    parcel: planting.row.parcel,
    planting: planting.row.sequence,
    date: asked.date,
    row: rowMembers(planting),
    steps: frostWorking(found, planting, wanted).map((step) => ({
      ...step,
      result: roundOrNull(step.result, 9),
      inputs: step.inputs.map((input) => ({ ...input, value: exactOrNull(input.value) })),
    })),
    cautions: [...FROST_CAUTIONS],
  };
}

/** Nights that froze. */
export async function answerFrozenNights(caller: Caller, asked: { source?: string }): Promise<FrozenNights> {
  const wanted = { source: asked.source ?? null, years: 3 };
  const { first, last, nights } = await database().inDistrict(caller.districtId, (tx) => listFrozenNights(tx, caller.districtId, wanted));
  return {
    first,
    last,
    items: nights.map(({ date, minimum, station, thermalTime, inBud }) => ({
      ...{ date, morning: addDays(date, 1), minimum_c: roundOrNull(minimum, 2) ?? 0, site: station },
      ...{ thermal_time_c_d: roundOrNull(thermalTime, 1), in_bud: inBud },
    })),
  };
}

/** The table of critical temperatures. */
export function answerCriticalTemperatures(): { items: CriticalRow[] } {
  const items = CRITICAL_TABLES.flatMap(({ code, name, stages }) =>
    stages.map((stage) => ({
      ...{ table: code, table_name: name, stage: stage.id, stage_name: stage.name },
      critical_10_c: roundOrNull(stage.tenthKilled, 2) ?? 0,
      critical_90_c: roundOrNull(stage.mostKilled, 2) ?? 0,
      printed_10_fahrenheit: stage.tenthKilledPrinted,
      printed_90_fahrenheit: stage.mostKilledPrinted,
      begins_thermal_time_c_d: roundOrNull(stage.begins, 0) ?? 0,
      ...{ source: CRITICAL_SOURCE, stage_source: STAGE_SOURCE },
    })),
  );
  return { items };
}

/** Shapes of parcels the reader may see, for the map of a night. */
export function frostShapes(caller: Caller, codes: readonly string[]): Promise<Map<string, unknown>> {
  const seen = caller.parcels === null ? codes : codes.filter((code) => caller.parcels?.includes(code));
  return database().inDistrict(caller.districtId, (tx) => listParcelShapes(tx, caller.districtId, seen));
}

function wantedOf(caller: Caller, asked: FrostAsked): FrostWanted {
  if (!isIsoDate(asked.date)) throw new Malformed(`"${asked.date}" is not a day of the calendar`);
  return {
    date: asked.date,
    source: asked.source ?? null,
    given: givenEvening(asked),
    options: { sky: asked.sky, ground: asked.ground, method: asked.method },
    stages: parseStages(asked.stages),
    rotation: asked.rotation_s === '60' ? 60 : 30,
    codes: caller.parcels,
  };
}

/** All four members of an evening, or none. */
function givenEvening(asked: FrostAsked): Evening | null {
  const four = {
    air_temperature_c: asked.air_temperature_c,
    dew_point_c: asked.dew_point_c,
    wind_speed_m_s: asked.wind_speed_m_s,
    cloud_share: asked.cloud_share,
  };
  const missing = Object.entries(four).filter(([, value]) => value === undefined);
  if (missing.length === 4) return null;
  if (missing.length > 0) throw new Malformed(`an evening of one's own needs ${missing.map(([name]) => name).join(', ')} too`);
  const [airTemperature, dewPoint, windSpeed, cloudShare] = Object.values(four) as [number, number, number, number];
  if (dewPoint > airTemperature)
    throw new Malformed(`dew_point_c ${dewPoint} above air_temperature_c ${airTemperature}: it cannot be warmer`);
  return { airTemperature, dewPoint, windSpeed, cloudFactor: cloudFactorOfShare(cloudShare) };
}

function headOf(found: FrostNight, asked: FrostAsked) {
  return {
    date: asked.date,
    morning: addDays(asked.date, 1),
    source: found.source,
    source_role: found.role,
    evening: asked.air_temperature_c === undefined ? ('record' as const) : ('given' as const),
    sky: asked.sky,
    ground: asked.ground,
  };
}

function isListed(risk: FrostRisk | null, wanted: FrostRisk | 'any' | undefined): boolean {
  if (wanted === undefined) return true;
  return wanted === 'any' ? risk !== null && risk !== 'none' : risk === wanted;
}

function countsOf(plantings: readonly FrostPlanting[]): FrostAnswer['counts'] {
  const counts = { severe: 0, damaging: 0, possible: 0, none: 0, unknown: 0 };
  for (const { risk } of plantings) counts[risk ?? 'unknown']++;
  return counts;
}

function exactOrNull(value: number): number | null {
  return Number.isFinite(value) ? value : null;
}
