/** What a worker process does: every queue with its handler, and the upkeep that lets nothing hang. */
import { listGivenUpJobs } from '../../db/queries/queue-job.ts';
import { database } from '../access/database.ts';
import { workOnBand } from './band-work.ts';
import { type FeedTurn, performFeedTurn } from './feeds/feed-turn.ts';
import { settleFeed } from './feeds/feeds.ts';
import { workOnImports } from './import-work.ts';
import { addUpkeep, type JobData, workOn } from './queue.ts';
import { type BandJob, failBand } from './run-band.ts';
import { endRun, type RunJob } from './run-failure.ts';
import { finishRun } from './run-finish.ts';
import { computeSlice, type SliceJob } from './run-slice.ts';
import { startRun } from './run-start.ts';
import { workOnWeatherChecks } from './weather-check.ts';

/** Starts working on every queue. @param threads that compute; one more slice of a run is in hand, being read or stored while they do */
export async function startWork(threads: number): Promise<void> {
  await workOn<RunJob & JobData>('run-start', startRun);
  await workOn<SliceJob & JobData>('run-slice', computeSlice, { concurrency: threads + 1 });
  await workOn<RunJob & JobData>('run-finish', finishRun);
  addUpkeep(settleGivenUpRuns);
  await workOn<BandJob & JobData>('run-band', workOnBand, { concurrency: threads });
  addUpkeep(settleGivenUpBands);
  await workOn<FeedTurn>('feed-turn', performFeedTurn);
  addUpkeep(settleGivenUpFeeds);
  await workOnImports();
  await workOnWeatherChecks();
}

/** No run stays "running" for ever: one whose piece failed for the last time is marked as failed. */
async function settleGivenUpRuns(): Promise<void> {
  for (const data of await listGivenUpJobs(database().outside, ['run-start', 'run-slice', 'run-finish'], 'runId')) {
    await endRun(data as RunJob, 'A part of this run failed several times; the log of the service has the cause. Start the run again.');
  }
}

/** Nor a band: the run it is of stands. */
async function settleGivenUpBands(): Promise<void> {
  for (const data of await listGivenUpJobs(database().outside, ['run-band'], 'runId')) {
    await failBand(data as RunJob, 'A part of the band failed several times; the log of the service has the cause. Start the run again.');
  }
}

/** No feed falls silent: one whose turn failed for the last time gets its next turn. */
async function settleGivenUpFeeds(): Promise<void> {
  for (const data of await listGivenUpJobs(database().outside, ['feed-turn'], 'feedId')) {
    await settleFeed(data as unknown as FeedTurn);
  }
}
