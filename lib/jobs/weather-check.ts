/** The job that checks the record of a source: after its weather or a decision on it has changed, and when somebody asks. */
import { setImmediate } from 'node:timers/promises';
import type { Tx } from '../../db/connect.ts';
import { findWholeDistrict } from '../../db/queries/district-read.ts';
import {
  holdCorrections,
  listChecks,
  listSourceFlags,
  listStandingCorrections,
  replaceFlags,
  saveCheck,
} from '../../db/queries/quality.ts';
import { listSitesOf, listWeatherSources } from '../../db/queries/weather-observations.ts';
import { database } from '../access/database.ts';
import { type CheckOptions, type CheckResult, checkSteps } from '../energy/quality-check.ts';
import { applyCorrections } from '../energy/quality-corrections.ts';
import { type CheckSummary, summaryOf } from '../weather/quality/summary.ts';
import type { SiteObservations } from '../weather/variable.ts';
import { correctionsOver } from './correction-rows.ts';
import { carryStates, flagRows } from './flag-rows.ts';
import { loadObservations } from './observations.ts';
import { enqueue, type JobData, workOn } from './queue.ts';

export interface WeatherCheckJob extends JobData {
  readonly sourceId: number;
}

/**
 * Has sources checked anew; a check that still waits stands for another.
 *
 * @param sourceIds left out: every source of the district
 * @param tx the jobs exist exactly when this transaction commits
 */
export async function requestWeatherCheck(districtId: string, sourceIds?: readonly number[], tx?: Tx): Promise<void> {
  const listIds = async (own: Tx) => (await listWeatherSources(own, districtId)).map(({ sourceId }) => sourceId);
  const ids = sourceIds ?? (await (tx ? listIds(tx) : database().inDistrict(districtId, listIds)));
  for (const sourceId of ids) await enqueue('weather-check', { districtId, sourceId }, { singletonKey: `${districtId}/${sourceId}`, tx });
}

/** Works on checks until `stopQueue`. */
export async function workOnWeatherChecks(): Promise<void> {
  await workOn<WeatherCheckJob>('weather-check', (job) => performWeatherCheck(job));
}

interface Read {
  readonly record: SiteObservations;
  readonly ordinals: readonly number[];
  readonly defaultElevation: number;
  readonly radiationCoefficient: number;
  readonly before: CheckSummary | null;
}

/** Summary of a source that is not checked: the cells of a grid, or a forecast. */
const UNCHECKED: CheckSummary = {
  ...{ checked: false, from: null, to: null, sites: 0 },
  ...{ pyranometers: [], aridity: [], neighbours: [], places: [], moves: [] },
};

/**
 * Checks one source. The record is looked at as decided (rejected values are gaps, corrected ones count), but without adjustments for dry
 * surroundings, which are no matter of the instruments. Doing it again changes nothing.
 *
 * @param today day of the check in UTC, YYYY-MM-DD
 */
export async function performWeatherCheck(
  { districtId, sourceId }: Pick<WeatherCheckJob, 'districtId' | 'sourceId'>,
  today = new Date().toISOString().slice(0, 10),
): Promise<void> {
  const read = await database().inDistrict(districtId, (tx) => readSource(tx, districtId, sourceId));
  if (read === null) return;
  if (read === 'unchecked') return database().inDistrict(districtId, (tx) => keepUnchecked(tx, districtId, sourceId));
  const { record, defaultElevation, radiationCoefficient, before } = read;
  const result = await checkedSlowly(record, {
    ...{ defaultElevation, radiationCoefficient, today },
    ...{ places: before?.places, moves: before?.moves },
  });
  await database().inDistrict(districtId, (tx) => keepResult(tx, { districtId, sourceId }, read, result));
}

/** The check, with room for other work of the process after each site: the lease of the job is renewed meanwhile. */
async function checkedSlowly(record: SiteObservations, options: CheckOptions): Promise<CheckResult> {
  const steps = checkSteps(record, options);
  let step = steps.next();
  while (!step.done) {
    await setImmediate();
    step = steps.next();
  }
  return step.value;
}

async function readSource(tx: Tx, districtId: string, sourceId: number): Promise<Read | 'unchecked' | null> {
  const source = (await listWeatherSources(tx, districtId)).find((each) => each.sourceId === sourceId);
  const district = await findWholeDistrict(tx, districtId);
  if (!source || !district) return null;
  if (source.kind === 'grid' || source.role === 'forecast') return 'unchecked';
  const ordinals = (await listSitesOf(tx, districtId, [sourceId])).map(({ ordinal }) => ordinal);
  const raw = await loadObservations(tx, districtId, { source: source.name, raw: true });
  const index = new Map(ordinals.map((ordinal, at) => [ordinal, at]));
  const decisions = await listStandingCorrections(tx, districtId, { sourceIds: [sourceId] });
  const layers = correctionsOver(
    decisions.filter(({ act }) => act !== 'aridity'),
    raw.startDate,
    ({ ordinal }) => index.get(ordinal),
  );
  const { defaultElevation, radiationCoefficient } = district;
  const record = applyCorrections(raw, layers, defaultElevation);
  const before = (await listChecks(tx, districtId)).find((each) => each.sourceId === sourceId)?.summary as CheckSummary | undefined;
  return { record, ordinals, defaultElevation, radiationCoefficient, before: before ?? null };
}

async function keepUnchecked(tx: Tx, districtId: string, sourceId: number): Promise<void> {
  await replaceFlags(tx, districtId, sourceId, []);
  await saveCheck(tx, districtId, sourceId, UNCHECKED);
}

async function keepResult(
  tx: Tx,
  { districtId, sourceId }: { districtId: string; sourceId: number },
  { record, ordinals }: Read,
  result: CheckResult,
): Promise<void> {
  await holdCorrections(tx, districtId);
  const standing = await listStandingCorrections(tx, districtId, { sourceIds: [sourceId] });
  const before = await listSourceFlags(tx, districtId, sourceId);
  const found = flagRows(result.flags, { districtId, sourceId, ordinals, startDate: record.startDate });
  const rows = carryStates(before, found, new Set(standing.map(({ correctionId }) => correctionId)));
  await replaceFlags(tx, districtId, sourceId, rows);
  await saveCheck(tx, districtId, sourceId, summaryOf(record, result));
}
