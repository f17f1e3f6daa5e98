/** What a worker process does: every queue with its handler. */

import { type JobData, workOn } from './queue.ts';
import type { RunJob } from './run-failure.ts';
import { endRun } from './run-failure.ts';
import { finishRun } from './run-finish.ts';
import { computeSlice, type SliceJob } from './run-slice.ts';
import { startRun } from './run-start.ts';

/** Starts working on every queue. @param threads slices of runs in hand at once */
export async function startWork(threads: number): Promise<void> {
  await workOn<RunJob & JobData>('run-start', startRun);
  await workOn<SliceJob & JobData>('run-slice', computeSlice, { concurrency: threads });
  await workOn<RunJob & JobData>('run-finish', finishRun);
  await workOn('given-up', giveUp);
}

/** A job failed for the last time: what waits for it is told. */
async function giveUp(job: JobData): Promise<void> {
  if (typeof job.runId === 'string') {
    await endRun(
      { districtId: job.districtId, runId: job.runId },
      'A part of this run failed several times; the service’s log has the cause. Start the run again.',
    );
  }
}
