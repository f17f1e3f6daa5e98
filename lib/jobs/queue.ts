/**
 * The job queue of the process, logged in as the application's role. Queues are made by the owner at migration; here jobs are only put in,
 * taken out, renewed and put back, which needs no more than row rights on the queue's tables.
 *
 * A job is leased: its process renews the lease while it works, so a job may take longer than the lease, and a job whose process died is
 * tried again when the lease has run out.
 */
import PgBoss from 'pg-boss';
import type { Tx } from '../../db/connect.ts';
import { isJobWaiting, JOB_CHANNEL, notifyJob, queueExecutor, releaseJobs, renewJob } from '../../db/queries/queue-job.ts';
import type { QueueName } from '../../db/queues.ts';
import { appUrl, database } from '../access/database.ts';
import { log } from '../access/log.ts';

/** What a job is told. The district is always said, because nothing can be read without it. */
export interface JobData {
  readonly districtId: string;
  readonly [key: string]: unknown;
}

interface ActiveJob {
  readonly id: string;
  /** aborted when the process is told to stop */
  readonly signal: AbortSignal;
}

type JobHandler<T extends JobData = JobData> = (data: T, job: ActiveJob) => Promise<unknown>;

interface Loop {
  readonly name: QueueName;
  wake(): void;
  readonly ended: Promise<void>;
}

interface QueueState {
  starting: Promise<PgBoss> | null;
  loops: Loop[];
  stop: AbortController;
  /** ids of the jobs in hand */
  active: Set<string>;
  maintenance: NodeJS.Timeout | null;
  readonly upkeep: (() => Promise<unknown>)[];
  unlisten: (() => Promise<void>) | null;
}

const POLL_MS = 1000;
/** A process that says nothing for so long is taken for dead. */
const LEASE_SECONDS = 60;
const RENEW_MS = 10_000;
const MAINTENANCE_MS = 10_000;
const held = globalThis as unknown as { tillwaterQueue?: QueueState };

function state(): QueueState {
  held.tillwaterQueue ??= {
    starting: null,
    loops: [],
    stop: new AbortController(),
    active: new Set(),
    maintenance: null,
    upkeep: [],
    unlisten: null,
  };
  return held.tillwaterQueue;
}

/** The started queue; one a process. */
export function queue(): Promise<PgBoss> {
  const own = state();
  own.starting ??= startBoss().catch((error) => {
    own.starting = null;
    throw error;
  });
  return own.starting;
}

async function startBoss(): Promise<PgBoss> {
  const boss = new PgBoss({ connectionString: appUrl(), migrate: false, supervise: false, schedule: false, max: 2 });
  boss.on('error', (error) => log().error({ err: error }, 'job queue'));
  await boss.start();
  return boss;
}

/**
 * Puts a job in. With `tx` it is part of that transaction: the job exists exactly when the transaction commits.
 *
 * @param options `singletonKey`: nothing is put in while a job of the same key still waits (one that is being worked on does not count);
 * `startAfter`: not before this time
 * @returns the job's id, or null when a waiting one stands for it
 */
export async function enqueue(
  name: QueueName,
  data: JobData,
  options: { readonly singletonKey?: string; readonly tx?: Tx; readonly startAfter?: Date } = {},
): Promise<string | null> {
  const boss = await queue();
  const executor = options.tx ?? database().outside;
  if (options.singletonKey && (await isJobWaiting(executor, name, options.singletonKey))) return null;
  const keyed = options.singletonKey ? { singletonKey: options.singletonKey } : {};
  const later = options.startAfter ? { startAfter: options.startAfter } : {};
  const id = await boss.send(name, data, { ...keyed, ...later, expireInSeconds: LEASE_SECONDS, db: queueExecutor(executor) });
  await notifyJob(executor, name);
  return id;
}

/**
 * Works on a queue until `stopQueue`. A handler that throws gives its job back, to be tried again up to the queue's limit.
 *
 * @param options `concurrency`: jobs of this queue in hand at once, default 1
 */
export async function workOn<T extends JobData>(
  name: QueueName,
  handler: JobHandler<T>,
  options: { readonly concurrency?: number } = {},
): Promise<void> {
  const boss = await queue();
  const own = state();
  own.unlisten ??= await database().listen(JOB_CHANNEL, (told) => {
    for (const loop of own.loops) if (loop.name === told) loop.wake();
  });
  own.maintenance ??= setInterval(() => void maintain(boss), MAINTENANCE_MS).unref();
  for (let i = 0; i < (options.concurrency ?? 1); i++) own.loops.push(startLoop(boss, name, handler as JobHandler));
}

/** Has something done every ten seconds, while this process works on queues. */
export function addUpkeep(act: () => Promise<unknown>): void {
  state().upkeep.push(act);
}

async function maintain(boss: PgBoss): Promise<void> {
  try {
    await boss.maintain();
    for (const act of state().upkeep) await act();
  } catch (error) {
    log().error({ err: error }, 'job queue upkeep');
  }
}

function startLoop(boss: PgBoss, name: QueueName, handler: JobHandler): Loop {
  const own = state();
  let woken = false;
  let wake = () => {
    woken = true;
  };
  const pause = () =>
    new Promise<void>((resolve) => {
      const timer = setTimeout(resolve, woken ? 0 : POLL_MS);
      wake = () => {
        woken = true;
        clearTimeout(timer);
        resolve();
      };
    });
  const run = async () => {
    while (!own.stop.signal.aborted) {
      woken = false;
      const [job] = await fetchQuietly(boss, name);
      if (job) await workOne(boss, { name, id: job.id, data: job.data }, handler);
      else await pause();
    }
  };
  return { name, wake: () => wake(), ended: run() };
}

async function fetchQuietly(boss: PgBoss, name: QueueName): Promise<PgBoss.Job<JobData>[]> {
  try {
    return await boss.fetch<JobData>(name, { batchSize: 1 });
  } catch (error) {
    log().warn({ err: error, queue: name }, 'job queue not reachable');
    return [];
  }
}

async function workOne(boss: PgBoss, job: { name: QueueName; id: string; data: JobData }, handler: JobHandler): Promise<void> {
  const own = state();
  own.active.add(job.id);
  const renewal = setInterval(() => {
    renewJob(database().outside, job.name, job.id).catch((error) => log().warn({ err: error, job: job.id }, 'lease not renewed'));
  }, RENEW_MS);
  try {
    await handler(job.data, { id: job.id, signal: own.stop.signal });
    await boss.complete(job.name, job.id);
  } catch (error) {
    log().error({ err: error, queue: job.name, job: job.id, district: job.data?.districtId }, 'job failed');
    await giveBack(boss, job, error);
  } finally {
    clearInterval(renewal);
    own.active.delete(job.id);
  }
}

async function giveBack(boss: PgBoss, job: { name: QueueName; id: string }, error: unknown): Promise<void> {
  try {
    if (state().stop.signal.aborted) await releaseJobs(database().outside, [job.id]);
    else await boss.fail(job.name, job.id, { message: error instanceof Error ? error.message : String(error) });
  } catch (failure) {
    log().error({ err: failure, job: job.id }, 'job not given back: it is tried again when its lease has run out');
  }
}

/**
 * Puts every job left in hand back to be tried at once. For the launcher, at start, when no worker on any host can be alive.
 *
 * @returns how many jobs were put back
 */
export async function releaseOrphans(): Promise<number> {
  return releaseJobs(database().outside);
}

/** Stops taking jobs, waits up to `graceMs` for those in hand, puts the rest back, and closes the queue. */
export async function stopQueue(graceMs = 8000): Promise<void> {
  const own = held.tillwaterQueue;
  if (!own) return;
  own.stop.abort(new Error('the process is stopping'));
  for (const loop of own.loops) loop.wake();
  if (own.maintenance) clearInterval(own.maintenance);
  await Promise.race([Promise.all(own.loops.map((loop) => loop.ended)), new Promise((resolve) => setTimeout(resolve, graceMs).unref())]);
  if (own.active.size > 0) await releaseJobs(database().outside, [...own.active]);
  await own.unlisten?.();
  const boss = await own.starting?.catch(() => null);
  held.tillwaterQueue = undefined;
  await boss?.stop({ graceful: false, wait: true });
}
