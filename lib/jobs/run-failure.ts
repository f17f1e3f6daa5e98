/** What a piece of a run does when it cannot go on: a fault of the inputs ends the run with its reason; anything else is retried by the queue. */

import { updateGoingRun } from '../../db/queries/run-state.ts';
import { database } from '../access/database.ts';
import { log } from '../access/log.ts';
import { TillwaterError } from '../base/errors.ts';

/** What every piece of a run is told. */
export type RunJob = {
  readonly districtId: string;
  readonly runId: string;
};

/** Runs one piece. A TillwaterError fails the run; another error goes up, so that the queue tries again. */
export async function failRun<T>(job: RunJob, piece: () => Promise<T>): Promise<T | null> {
  try {
    return await piece();
  } catch (error) {
    if (!(error instanceof TillwaterError)) throw error;
    await endRun(job, error.message);
    return null;
  }
}

/** Marks a run as failed; called for the last retry too, so that no run hangs. */
export async function endRun(job: RunJob, reason: string): Promise<void> {
  log().warn({ run: job.runId, district: job.districtId, reason }, 'run failed');
  await database().inDistrict(job.districtId, (tx) =>
    updateGoingRun(tx, job.districtId, job.runId, { state: 'failed', stage: 'failed', error: reason, finishedAt: new Date() }),
  );
}
