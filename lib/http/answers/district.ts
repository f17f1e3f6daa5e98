/** The district of the caller, its seasons, and the making of a new one. */
import { randomUUID } from 'node:crypto';
import { saveDistrictPresets } from '../../../db/queries/district-presets.ts';
import {
  countDistrict,
  type DistrictRow,
  findWholeDistrict,
  insertDistrict,
  insertSeason,
  listSeasons,
  updateDistrict,
} from '../../../db/queries/district-read.ts';
import { findDistrictHead, saveMembership } from '../../../db/queries/memberships.ts';
import { type Caller, membershipsOf } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { dayNumber, isIsoDate } from '../../base/civil-date.ts';
import { Conflict, NotFound, Refused } from '../../base/errors.ts';
import type { DistrictAnswer, DistrictPatch, DistrictRequest, DistrictSummary, SeasonAnswer, SeasonRequest } from '../contract/rest.ts';
import { requireBoundary, requireTimeZone } from '../district-checks.ts';
import { isUniqueViolation } from '../violation.ts';

export function answerDistrict(caller: { districtId: string }): Promise<DistrictAnswer> {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const row = await findWholeDistrict(tx, districtId);
    if (!row) throw new NotFound('this district is gone');
    const [seasons, counts] = await Promise.all([listSeasons(tx, districtId), countDistrict(tx, districtId)]);
    return { ...districtMembers(row), seasons: seasons.map(seasonMembers), counts };
  });
}

function districtMembers(row: DistrictRow): Omit<DistrictAnswer, 'seasons' | 'counts'> {
  return {
    id: row.districtId,
    code: row.code,
    name: row.name,
    time_zone: row.timeZone,
    units: row.units,
    week_start: row.weekStart,
    water_year_start_month: row.waterYearStartMonth,
    invented: row.invented,
    boundary: row.boundary ?? null,
    default_elevation_m: row.defaultElevation,
    radiation_coefficient: row.radiationCoefficient,
    geometry_version: row.geometryVersion,
  };
}

function seasonMembers(row: { code: string; name: string; startDate: string; endDate: string }): SeasonAnswer {
  return { code: row.code, name: row.name, start_date: row.startDate, end_date: row.endDate };
}

/** Districts the caller belongs to; for a token, its own. */
export async function answerDistricts(caller: Caller): Promise<DistrictSummary[]> {
  const memberships = caller.userId ? await membershipsOf(caller.userId) : [{ districtId: caller.districtId, role: caller.role }];
  const found: DistrictSummary[] = [];
  for (const { districtId, role } of memberships) {
    const head = await database().inDistrict(districtId, (tx) => findDistrictHead(tx, districtId));
    if (head) found.push({ id: districtId, code: head.code, name: head.name, role, invented: head.invented });
  }
  return found;
}

/** Changes the settings that are given and leaves the others. */
export async function changeDistrict(caller: Caller, patch: DistrictPatch): Promise<DistrictAnswer> {
  if (patch.time_zone !== undefined) requireTimeZone(patch.time_zone);
  const values = {
    name: patch.name,
    timeZone: patch.time_zone,
    units: patch.units,
    weekStart: patch.week_start,
    waterYearStartMonth: patch.water_year_start_month,
    defaultElevation: patch.default_elevation_m,
    radiationCoefficient: patch.radiation_coefficient,
    ...('boundary' in patch ? { boundary: requireBoundary(patch.boundary) } : {}),
  };
  const given = Object.fromEntries(Object.entries(values).filter(([, value]) => value !== undefined));
  if (Object.keys(given).length > 0) {
    await database().inDistrict(caller.districtId, (tx) => updateDistrict(tx, caller.districtId, given));
  }
  return answerDistrict(caller);
}

/**
 * Makes a district with its libraries, and its manager.
 *
 * @param managerId the person who becomes manager
 */
export async function createDistrict(wanted: DistrictRequest, managerId: string): Promise<DistrictAnswer> {
  requireTimeZone(wanted.time_zone);
  const boundary = requireBoundary(wanted.boundary);
  const districtId = randomUUID();
  const code = wanted.code ?? codeFromName(wanted.name);
  await database()
    .inDistrict(districtId, async (tx) => {
      await insertDistrict(tx, {
        districtId,
        code,
        name: wanted.name,
        timeZone: wanted.time_zone,
        units: wanted.units,
        weekStart: wanted.week_start,
        waterYearStartMonth: wanted.water_year_start_month,
        boundary,
        defaultElevation: wanted.default_elevation_m,
        radiationCoefficient: wanted.radiation_coefficient,
      });
      await saveDistrictPresets(tx, districtId);
      await saveMembership(tx, districtId, { userId: managerId, role: 'manager' });
    })
    .catch((cause) => {
      if (isUniqueViolation(cause)) throw new Conflict(`the code "${code}" is taken by another district: give another`, { cause });
      throw cause;
    });
  return answerDistrict({ districtId });
}

/** @example codeFromName('Río Verde No. 2') // 'rio-verde-no-2' */
function codeFromName(name: string): string {
  const plain = name.normalize('NFKD').replace(/\p{M}/gu, '').toLowerCase();
  const code = plain
    .replace(/[^a-z0-9]+/g, '-')
    .slice(0, 40)
    .replace(/^-+|-+$/g, '');
  return code.length >= 2 ? code : `district-${code || 'x'}`;
}

export function answerSeasons(caller: Caller): Promise<SeasonAnswer[]> {
  return database().inDistrict(caller.districtId, async (tx) => (await listSeasons(tx, caller.districtId)).map(seasonMembers));
}

/** Longest season that a run takes [d]. */
const LONGEST_SEASON = 400;

/** @throws {Refused} for dates that are none, or a season that is too long. @throws {Conflict} when the code is taken. */
export async function createSeason(caller: Caller, wanted: SeasonRequest): Promise<SeasonAnswer> {
  const { code, start_date: startDate, end_date: endDate } = wanted;
  for (const date of [startDate, endDate]) if (!isIsoDate(date)) throw new Refused(`"${date}" is not a day of the calendar`);
  const days = dayNumber(endDate) - dayNumber(startDate) + 1;
  if (days < 1 || days > LONGEST_SEASON) {
    throw new Refused(`the season from ${startDate} to ${endDate} has ${days} days; it must have 1 to ${LONGEST_SEASON}`);
  }
  const row = { districtId: caller.districtId, code, name: wanted.name ?? code, startDate, endDate };
  const made = await database().inDistrict(caller.districtId, (tx) => insertSeason(tx, row));
  if (!made) throw new Conflict(`the district has a season "${code}" already`);
  return seasonMembers(row);
}
