/** One slice of a run: its parcels through the season, on a worker thread, stored in one transaction. */

import { countSlices, findRun, isSliceDone, saveSlice, updateGoingRun } from '../../db/queries/run-state.ts';
import { database } from '../access/database.ts';
import { parcelBytes } from '../season/daily-store.ts';
import { loadFrozenSlice } from './frozen-season.ts';
import { enqueue } from './queue.ts';
import { failRun, type RunJob } from './run-failure.ts';
import { seasonPool } from './season-pool.ts';

export interface SliceJob extends RunJob {
  readonly slice: number;
}

/** Share of a run's progress bar that the slices fill. */
const SLICES_FROM = 0.05;
const SLICES_TO = 0.85;

/** The job: idempotent; a slice already stored is passed over. */
export async function computeSlice(job: SliceJob): Promise<void> {
  const key = { districtId: job.districtId, runId: job.runId };
  const work = await database().inDistrict(job.districtId, async (tx) => {
    const run = await findRun(tx, job.districtId, job.runId);
    if (run?.state !== 'running') return null;
    if (await isSliceDone(tx, job.districtId, job.runId, job.slice)) return 'stored';
    return loadFrozenSlice(tx, job.districtId, job.runId, job.slice);
  });
  if (work === null) return;
  if (work !== 'stored') {
    const output = await failRun(key, () => seasonPool().run(work.input));
    if (!output) return;
    const { dayCount } = work.input;
    await database().inDistrict(job.districtId, (tx) =>
      saveSlice(
        tx,
        { ...key, slice: job.slice },
        {
          positions: work.positions,
          daily: work.positions.map((_, parcel) => parcelBytes(output.daily, parcel, dayCount)),
          flags: work.positions.map((_, parcel) => flagBytes(output.flags, parcel, dayCount)),
          maxResidual: output.maxBalanceResidual,
        },
      ),
    );
  }
  await reportSlice(key);
}

function flagBytes(flags: Uint32Array, parcel: number, dayCount: number): Uint8Array {
  const part = flags.subarray(parcel * dayCount, (parcel + 1) * dayCount);
  return new Uint8Array(part.buffer, part.byteOffset, part.byteLength);
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
