/**
 * Computing the band of a run, in three steps of one queue. Plan: the weather error is told and the parcels are cut into parts. Part: one part of the parcels
 * with all members, on a thread, kept as it is done. Finish: quantiles put together, canals rolled up per member. Every step can be done again after a
 * kill and comes to the same bytes.
 */
import type { Tx } from '../../db/connect.ts';
import {
  countBandParts,
  findBandState,
  isBandPartDone,
  listBandParcels,
  lockBandState,
  saveBandPart,
  saveBandState,
} from '../../db/queries/run-band.ts';
import { listRunReaches } from '../../db/queries/run-read.ts';
import { findRun } from '../../db/queries/run-state.ts';
import { database } from '../access/database.ts';
import { type Period, periodsOf } from '../base/civil-date.ts';
import { Refused, TillwaterError } from '../base/errors.ts';
import type { EnsembleWanted } from '../season/ensemble.ts';
import { finishBand } from './band-finish.ts';
import { packBandPart } from './band-part.ts';
import { computeBandPart } from './band-threads.ts';
import { bandWeatherError } from './band-weather-error.ts';
import { loadFrozenSeason } from './frozen-season.ts';
import { enqueue } from './queue.ts';
import { type BandJob, type BandState, type FinishedRun, failBand, isGoing, settingsOf } from './run-band.ts';
import type { RunJob } from './run-failure.ts';

/** Parcels looked at for the kriging variance. */
const SAMPLED_PARCELS = 200;

/** The job: every step is passed over where it is done already, or where the band has been called off. */
export async function workOnBand(job: BandJob, active?: { readonly signal: AbortSignal }): Promise<void> {
  const key = { districtId: job.districtId, runId: job.runId };
  try {
    if (job.step === 'plan') await planBand(key);
    else if (job.step === 'part') await computePart(key, job.part ?? 0, active?.signal);
    else await closeBand(key);
  } catch (error) {
    if (!(error instanceof TillwaterError)) throw error;
    await failBand(key, error.message);
  }
}

/**
 * A run whose band goes on; null where it was called off.
 *
 * @throws {Refused} where another run of the season has taken its place: nobody would look at its band
 */
async function findGoing(tx: Tx, key: RunJob): Promise<{ run: FinishedRun; band: BandState } | null> {
  const run = await findRun(tx, key.districtId, key.runId);
  const band = (await findBandState(tx, key)) as BandState | null;
  if (run?.state !== 'done' || !isGoing(band)) return null;
  if (!run.standing) throw new Refused('Another run of the season has taken this one’s place while its band was being computed.');
  return { run, band };
}

/** Weeks, months and the season of a run, one after another. */
export function bandPeriods(
  run: Pick<FinishedRun, 'startDate' | 'endDate' | 'manifest'>,
): { kind: 'week' | 'month' | 'season'; periods: Period[] }[] {
  const { week_start: weekStart } = run.manifest as { week_start: number };
  return (['week', 'month', 'season'] as const).map((kind) => ({ kind, periods: periodsOf(kind, run.startDate, run.endDate, weekStart) }));
}

async function planBand(key: RunJob): Promise<void> {
  await database().inDistrict(key.districtId, async (tx) => {
    const going = await findGoing(tx, key);
    if (going?.band.state !== 'waiting') return;
    const { run, band } = going;
    const season = await loadFrozenSeason(tx, key.districtId, key.runId, sampled(run.parcelCount));
    const { startDate, dayCount, manifest } = run;
    const told = await bandWeatherError(tx, key.districtId, { startDate, dayCount, manifest, settings: settingsOf(run) }, season);
    const weather = { deviation: [...told.error.deviation], persistence: [...told.error.persistence] };
    await saveBandState(tx, key, { ...band, state: 'running', weather_error: told.record, weather });
    for (let part = 0; part < band.parts; part++)
      await enqueue('run-band', { ...key, step: 'part', part }, { singletonKey: `${key.runId}/${part}`, tx });
  });
}

/** Some positions, spread over the run. */
function sampled(parcelCount: number): number[] {
  const count = Math.min(parcelCount, SAMPLED_PARCELS);
  return Array.from({ length: count }, (_, k) => Math.floor((k * parcelCount) / count));
}

async function computePart(key: RunJob, part: number, signal?: AbortSignal): Promise<void> {
  const work = await database().inDistrict(key.districtId, async (tx) => {
    const going = await findGoing(tx, key);
    if (!going || (await isBandPartDone(tx, key, part))) return null;
    return loadPart(tx, key, going, part);
  });
  if (work) {
    const output = await computeBandPart({ input: work.input, wanted: work.wanted }, signal);
    const { positions, reaches } = work;
    await database().inDistrict(key.districtId, (tx) => keepPart(tx, key, part, packBandPart({ ...output, positions, reaches })));
  } else await database().inDistrict(key.districtId, (tx) => keepPart(tx, key, part, null));
}

/** Keeps what a part came to, and queues the last step behind the last part. */
async function keepPart(tx: Tx, key: RunJob, part: number, bytes: Uint8Array | null): Promise<void> {
  const band = (await lockBandState(tx, key)) as BandState | null;
  if (!isGoing(band)) return;
  if (bytes) await saveBandPart(tx, key, part, bytes);
  const done = await countBandParts(tx, key);
  await saveBandState(tx, key, { ...band, parts_done: done, progress: (0.95 * done) / band.parts });
  if (done === band.parts) await enqueue('run-band', { ...key, step: 'finish' }, { singletonKey: `${key.runId}/finish`, tx });
}

async function loadPart(tx: Tx, key: RunJob, { run, band }: { run: FinishedRun; band: BandState }, part: number) {
  const rows = await listBandParcels(tx, key, part * band.parcels_per_part, band.parcels_per_part);
  rows.sort((a, b) => a.position - b.position);
  const positions = rows.map(({ position }) => position);
  const input = await loadFrozenSeason(tx, key.districtId, key.runId, positions);
  const ordinals = new Map((await listRunReaches(tx, key)).map(({ reachCode, ordinal }) => [reachCode, ordinal]));
  const ordinalOf = (code: string | null) => (code === null ? -1 : (ordinals.get(code) ?? -1));
  const reaches = [...new Set(rows.map(({ reachCode }) => ordinalOf(reachCode)))].filter((ordinal) => ordinal >= 0).sort((a, b) => a - b);
  const wanted: EnsembleWanted = {
    members: band.members,
    seed: band.seed,
    weather: {
      deviation: Float64Array.from(band.weather?.deviation ?? []),
      persistence: Float64Array.from(band.weather?.persistence ?? []),
    },
    errors: band.field_errors,
    periods: bandPeriods(run).flatMap(({ periods }) => periods),
    reachOf: rows.map(({ reachCode }) => reaches.indexOf(ordinalOf(reachCode))),
    reachCount: reaches.length,
  };
  return { input, wanted, positions, reaches };
}

async function closeBand(key: RunJob): Promise<void> {
  await database().inDistrict(key.districtId, async (tx) => {
    const band = (await lockBandState(tx, key)) as BandState | null;
    const run = await findRun(tx, key.districtId, key.runId);
    if (!run || !isGoing(band) || (await countBandParts(tx, key)) < band.parts) return;
    await finishBand(tx, key, { run, members: band.members, parts: band.parts, weeks: band.weeks, periods: bandPeriods(run) });
    const seconds = (Date.now() - Date.parse(band.requested_at)) / 1000;
    await saveBandState(tx, key, { ...band, state: 'done', progress: 1, seconds });
  });
}
