/** Asking for runs and calling them off. The work itself is in run-start, run-slice and run-finish. */

import type { Tx } from '../../db/connect.ts';
import { countDistrict } from '../../db/queries/district-read.ts';
import { findDistrict, findSeason, listLibraries } from '../../db/queries/run-inputs.ts';
import { listRunSources, type RunSource } from '../../db/queries/run-sources.ts';
import { cancelWaitingRuns, findRun, findStandingSettings, insertRun, notifyRun, updateGoingRun } from '../../db/queries/run-state.ts';
import { database } from '../access/database.ts';
import { dayNumber } from '../base/civil-date.ts';
import { Conflict, NotFound, Refused } from '../base/errors.ts';
import { requireAheadSettings } from './ahead-settings.ts';
import { enqueue } from './queue.ts';
import { cancelBand } from './run-band.ts';
import { DEFAULT_RUN_SETTINGS, type RunSettings } from './run-settings.ts';
import { requireSuited, suits } from './run-weights.ts';

interface RunWanted {
  readonly season: string;
  readonly settings?: Partial<RunSettings>;
  /** true: settings not given are those of the season's standing run, as when changed inputs are computed anew */
  readonly likeStanding?: boolean;
}

/** Longest season a run takes [d]: what one parcel's stored arrays are sized for. */
const LONGEST_SEASON = 400;

/**
 * Puts a run in the queue.
 *
 * @returns the run's id
 * @throws NotFound when the season is not the district's; Refused when there is nothing to compute or a setting names nothing known
 */
export async function requestRun(who: { districtId: string; userId: string | null }, wanted: RunWanted): Promise<string> {
  return database().inDistrict(who.districtId, async (tx) => {
    const standing = (
      wanted.likeStanding ? await findStandingSettings(tx, who.districtId, wanted.season) : null
    ) as Partial<RunSettings> | null;
    const kept = { ...DEFAULT_RUN_SETTINGS, ...standing, ...wanted.settings };
    const kind = kindOf(await listRunSources(tx, who.districtId), kept.source);
    const settings = { ...kept, interpolation: interpolationOf(wanted.settings?.interpolation, standing?.interpolation, kind) };
    const season = await findSeason(tx, who.districtId, wanted.season);
    if (!season) throw new NotFound(`There is no season "${wanted.season}" in this district. List them at /api/v1/seasons.`);
    const dayCount = dayNumber(season.endDate) - dayNumber(season.startDate) + 1;
    if (dayCount < 1 || dayCount > LONGEST_SEASON) {
      throw new Refused(`Season "${season.code}" has ${dayCount} days; a run takes 1 to ${LONGEST_SEASON}. Change its dates.`);
    }
    const parcelCount = await checkedParcelCount(tx, who.districtId, settings);
    const district = await findDistrict(tx, who.districtId);
    const runId = await insertRun(tx, {
      districtId: who.districtId,
      seasonCode: season.code,
      startDate: season.startDate,
      endDate: season.endDate,
      dayCount,
      parcelCount,
      settings,
      geometryVersion: district?.geometryVersion ?? 1,
      createdBy: who.userId,
    });
    await cancelWaitingRuns(tx, who.districtId, season.code, runId);
    await enqueue('run-start', { districtId: who.districtId, runId }, { singletonKey: runId, tx });
    return runId;
  });
}

/** Kind of the source a run takes: the one named; else stations where any has weather, else a grid. */
function kindOf(sources: readonly RunSource[], name: string | null): 'stations' | 'grid' {
  if (name !== null) return sources.find((source) => source.name === name)?.kind ?? 'stations';
  const having = sources.filter(({ hasWeather }) => hasWeather);
  return having.length === 0 || having.some((source) => source.kind === 'stations') ? 'stations' : 'grid';
}

/**
 * How weather is carried: as asked; else as in the standing run, where that suits the source; else bilinear on a grid and the default between stations.
 *
 * @throws Refused when what is asked for does not suit the source
 */
function interpolationOf(
  asked: RunSettings['interpolation'] | undefined,
  standing: RunSettings['interpolation'] | undefined,
  kind: 'stations' | 'grid',
): RunSettings['interpolation'] {
  if (asked) {
    requireSuited(asked, kind);
    return asked;
  }
  if (standing && suits(standing, kind)) return standing;
  return kind === 'grid' ? 'bilinear' : DEFAULT_RUN_SETTINGS.interpolation;
}

async function checkedParcelCount(tx: Tx, districtId: string, settings: RunSettings): Promise<number> {
  const { parcels } = await countDistrict(tx, districtId);
  if (parcels === 0) throw new Refused('The district has no parcels yet: import parcels before asking for a run.');
  const { soils, methods } = await listLibraries(tx, districtId);
  if (!soils.some((soil) => soil.code === settings.default_soil)) {
    throw new Refused(
      `default_soil "${settings.default_soil}" is not a soil of this district; known: ${soils.map((s) => s.code).join(', ')}.`,
    );
  }
  if (!methods.some((method) => method.code === settings.default_method)) {
    const known = methods.map((m) => m.code).join(', ');
    throw new Refused(`default_method "${settings.default_method}" is not an application method of this district; known: ${known}.`);
  }
  await requireAheadSettings(tx, districtId, settings);
  const sources = (await listRunSources(tx, districtId)).map((source) => source.name);
  if (settings.source !== null && !sources.includes(settings.source)) {
    throw new Refused(`source "${settings.source}" is not a weather source of this district; known: ${sources.join(', ') || 'none yet'}.`);
  }
  return parcels;
}

/**
 * Calls a run off. A run that waits ends at once; one that works ends at its next slice; of one that is finished, what is left of its band.
 *
 * @throws NotFound, or Conflict when it has already ended
 */
export async function cancelRun(districtId: string, runId: string): Promise<void> {
  await database().inDistrict(districtId, async (tx) => {
    const run = await findRun(tx, districtId, runId);
    if (!run) throw new NotFound(`There is no run ${runId} in this district.`);
    if (run.state === 'done' && (await cancelBand(tx, { districtId, runId }))) return;
    if (run.state !== 'queued' && run.state !== 'running') throw new Conflict(`Run ${runId} has already ended (${run.state}).`);
    await updateGoingRun(tx, districtId, runId, { state: 'cancelled', stage: 'cancelled', cancelRequested: true, finishedAt: new Date() });
    await notifyRun(tx, districtId, runId);
  });
}
