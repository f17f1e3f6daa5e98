/** One slice of a run: its parcels through the season, on a thread, stored in one transaction with what they add to map and canals. */

import type { Tx } from '../../db/connect.ts';
import { closeSlice, deleteRunParts, saveRunParts, saveSliceParcels } from '../../db/queries/run-results.ts';
import { countSlices, findRun, isSliceDone, lockSlice, updateGoingRun } from '../../db/queries/run-state.ts';
import { database } from '../access/database.ts';
import { loadFrozenSlice, SLICE_INPUT } from './frozen-season.ts';
import { KEPT_NAMES, periodSets } from './map-arrays.ts';
import { enqueue } from './queue.ts';
import { failRun, type RunJob } from './run-failure.ts';
import { seasonPool } from './season-pool.ts';
import type { SliceOutput, SliceTask } from './slice-work.ts';

/** Parcels in a slice: about a second of work, far below the half minute a piece may take. */
export const SLICE_PARCELS = 2000;

export interface SliceJob extends RunJob {
  readonly slice: number;
}

/** Part of a slice that holds what it adds to canals and checks, see `reach-demand`. */
export const SLICE_SUMS = 'sums';

/** Share of a run's progress bar that the slices fill. */
const SLICES_FROM = 0.05;
const SLICES_TO = 0.85;

/** The job: idempotent; a slice already stored is passed over. */
export async function computeSlice(job: SliceJob): Promise<void> {
  const { districtId, runId, slice } = job;
  const key = { districtId, runId };
  const work = await failRun(key, () => database().inDistrict(districtId, (tx) => loadSlice(tx, { ...key, slice })));
  if (work === null) return;
  if (work !== 'stored') {
    const output = await failRun(key, () => seasonPool().slice(work));
    if (!output) return;
    await database().inDistrict(districtId, (tx) => storeSlice(tx, { ...key, slice }, output));
  }
  await reportSlice(key);
}

async function loadSlice(tx: Tx, job: SliceJob): Promise<SliceTask | 'stored' | null> {
  const run = await findRun(tx, job.districtId, job.runId);
  if (run?.state !== 'running') return null;
  const done = await isSliceDone(tx, job.districtId, job.runId, job.slice);
  if (done === null) return null;
  if (done) return 'stored';
  const { week_start: weekStart } = run.manifest as { week_start: number };
  const position = job.slice * SLICE_PARCELS;
  return { ...(await loadFrozenSlice(tx, job)), position, sets: periodSets(run, weekStart) };
}

/** Stores a slice, unless another worker has or the run has ended meanwhile. */
async function storeSlice(tx: Tx, { slice, ...key }: SliceJob, output: SliceOutput): Promise<void> {
  if ((await lockSlice(tx, key.districtId, key.runId, slice)) !== false) return;
  if ((await findRun(tx, key.districtId, key.runId))?.state !== 'running') return;
  const { parcelCount, periodCount } = output;
  await saveSliceParcels(tx, key, slice, output.parcels);
  const arrays = output.periods.map((values, k) => ({ variable: KEPT_NAMES[k], values, periodCount, parcelCount }));
  await saveRunParts(tx, key, slice, [...arrays, { variable: SLICE_SUMS, values: output.sums, periodCount: 1, parcelCount }]);
  await deleteRunParts(tx, key, { slice, variable: SLICE_INPUT });
  await closeSlice(tx, key, slice, output.maxResidual);
}

async function reportSlice(key: RunJob): Promise<void> {
  await database().inDistrict(key.districtId, async (tx) => {
    const count = await countSlices(tx, key.districtId, key.runId);
    const finished = count.done === count.all;
    const progress = SLICES_FROM + (SLICES_TO - SLICES_FROM) * (count.done / count.all);
    const stage = finished ? 'canals and period sums' : 'crop and soil water';
    const going = await updateGoingRun(tx, key.districtId, key.runId, { progress, stage });
    if (going && finished) await enqueue('run-finish', { ...key }, { singletonKey: key.runId, tx });
  });
}
