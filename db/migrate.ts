/** Brings a database to the newest schema: migrations, then the walls between districts, then the job queue. Owner only. */
import { drizzle } from 'drizzle-orm/postgres-js';
import { migrate as runMigrations } from 'drizzle-orm/postgres-js/migrator';
import PgBoss from 'pg-boss';
import postgres from 'postgres';
import { QUEUES } from './queues.ts';
import { APP_ROLE, appRolePassword } from './roles.ts';
import { wallStatements } from './walls.ts';

const LOCK = 7240111;

/**
 * Migrates under an advisory lock, so that any number of hosts may start at once; doing it again changes nothing.
 *
 * @param ownerUrl address of a role that may create tables and roles
 * @param migrationsFolder path of `db/migrations`
 */
export async function migrateDatabase(ownerUrl: string, migrationsFolder: string): Promise<void> {
  const client = postgres(ownerUrl, { max: 1, onnotice: () => {} });
  try {
    await client`select pg_advisory_lock(${LOCK})`;
    await runMigrations(drizzle(client), { migrationsFolder });
    await installQueue(ownerUrl);
    await raiseWalls(client, ownerUrl);
  } finally {
    await client.end({ timeout: 5 });
  }
}

async function raiseWalls(client: postgres.Sql, ownerUrl: string): Promise<void> {
  const tables = await client<{ table_name: string }[]>`
    select table_name from information_schema.columns where table_schema = 'public' and column_name = 'district_id' order by table_name`;
  for (const statement of wallStatements({
    role: APP_ROLE,
    password: appRolePassword(ownerUrl),
    tables: tables.map((t) => t.table_name),
  })) {
    await client.unsafe(statement);
  }
}

async function installQueue(ownerUrl: string): Promise<void> {
  const boss = new PgBoss({ connectionString: ownerUrl, supervise: false, schedule: false, max: 2 });
  boss.on('error', () => {});
  await boss.start();
  for (const queue of QUEUES) {
    if (!(await boss.getQueue(queue.name))) await boss.createQueue(queue.name, queue);
    else await boss.updateQueue(queue.name, queue);
  }
  await boss.stop({ graceful: false, wait: true });
}
