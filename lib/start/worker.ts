/** The worker process: reads imports and computes runs. Any number of them, on any number of hosts, may share one DATABASE_URL. */
import { availableParallelism } from 'node:os';
import { closeDatabase } from '../access/database.ts';
import { environment } from '../access/environment.ts';
import { log } from '../access/log.ts';
import { stopQueue } from '../jobs/queue.ts';
import { stopStandby } from '../jobs/reader-child.ts';
import { seasonPool } from '../jobs/season-pool.ts';
import { startWork } from '../jobs/work.ts';
import { sayReady, stopWithParent } from './children.ts';

const threads = environment().TILLWATER_THREADS ?? Math.max(1, availableParallelism());
await startWork(threads);
log().info({ threads }, 'working');
sayReady();

stopWithParent(async () => {
  await stopQueue();
  stopStandby();
  await seasonPool().close();
  await closeDatabase();
});
