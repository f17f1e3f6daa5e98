/** The rows of the job queue, where the queue's own library has no call for what is wanted. */
import { type SQL, sql } from 'drizzle-orm';
import type { PostgresJsDatabase } from 'drizzle-orm/postgres-js';
import type { Tx } from '../connect.ts';
import { QUEUES, type QueueName } from '../queues.ts';

/** Channel on which a new job's queue is told, so that idle workers need not wait for their next look. */
export const JOB_CHANNEL = 'tillwater_job';

type Executor = Tx | PostgresJsDatabase;

/** Runs the queue library's SQL inside a transaction of ours, so that a job exists exactly when the rows it is about do. */
export function queueExecutor(tx: Executor): { executeSql(text: string, values: unknown[]): Promise<{ rows: Record<string, unknown>[] }> } {
  return {
    async executeSql(text, values) {
      const rows = await tx.execute<Record<string, unknown>>(numberedSql(text, values));
      return { rows: [...rows] };
    },
  };
}

/** `$1 … $n` of a text as bound parameters; objects go as JSON. */
function numberedSql(text: string, values: readonly unknown[]): SQL {
  const parts = text.split(/\$(\d+)/);
  const chunks = parts.map((part, i) => (i % 2 === 0 ? sql.raw(part) : sql`${sql.param(parameter(values[Number(part) - 1]))}`));
  return sql.join(chunks);
}

function parameter(value: unknown): unknown {
  if (value === undefined || value === null) return null;
  return typeof value === 'object' ? JSON.stringify(value) : value;
}

/** True when a job of this queue and key still waits to be fetched. */
export async function isJobWaiting(tx: Executor, name: QueueName, singletonKey: string): Promise<boolean> {
  const rows = await tx.execute(
    sql`select 1 from pgboss.job where name = ${name} and singleton_key = ${singletonKey} and state in ('created', 'retry') limit 1`,
  );
  return rows.length > 0;
}

export async function notifyJob(tx: Executor, name: QueueName): Promise<void> {
  await tx.execute(sql`select pg_notify(${JOB_CHANNEL}, ${name})`);
}

/** Renews the lease of a job that is being worked on. */
export async function renewJob(db: Executor, name: QueueName, id: string): Promise<void> {
  await db.execute(sql`update pgboss.job set started_on = now() where name = ${name} and id = ${id}::uuid and state = 'active'`);
}

/** Puts jobs back that their process can no longer finish; without `ids`, every active job. Answers how many. */
export async function releaseJobs(db: Executor, ids?: readonly string[]): Promise<number> {
  const names = sql.join(
    QUEUES.map((queue) => sql`${queue.name}`),
    sql`, `,
  );
  const which = ids ? sql`and id = any(${sql.param(`{${ids.join(',')}}`)}::uuid[])` : sql``;
  const rows = await db.execute(
    sql`update pgboss.job set state = 'retry', start_after = now() where name in (${names}) and state = 'active' ${which} returning id`,
  );
  return rows.length;
}

/**
 * What given-up jobs were about: those whose tries all died or failed in the last hour, and that no other job of the same subject follows up.
 *
 * @param subject member of the job's data that names what it works on
 */
export async function listGivenUpJobs(
  db: Executor,
  names: readonly QueueName[],
  subject: 'importId' | 'runId' | 'feedId',
): Promise<Record<string, unknown>[]> {
  const list = sql.join(
    names.map((name) => sql`${name}`),
    sql`, `,
  );
  const rows = await db.execute<{ data: Record<string, unknown> }>(
    sql`select j.data from pgboss.job j where j.name in (${list}) and j.state = 'failed' and j.completed_on > now() - interval '1 hour'
      and not exists (select 1 from pgboss.job l where l.name = j.name and l.state in ('created', 'retry', 'active')
        and l.data ->> ${subject} = j.data ->> ${subject})
      limit 500`,
  );
  return rows.map((row) => (typeof row.data === 'string' ? JSON.parse(row.data) : row.data));
}
