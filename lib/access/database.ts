/** The process's one database handle, logged in as the application's role. */
import { type Database, openDatabase } from '../../db/connect.ts';
import { appRoleUrl } from '../../db/roles.ts';
import { environment } from './environment.ts';

const held = globalThis as unknown as { tillwaterDatabase?: Database };

/**
 * The shared handle. The launcher puts DATABASE_URL (the owner's address) in the environment of every process it starts;
 * only the derived application role ever logs in here.
 */
export function database(): Database {
  if (!held.tillwaterDatabase) {
    held.tillwaterDatabase = openDatabase(appUrl(), 10);
  }
  return held.tillwaterDatabase;
}

/** Address of the application's role on the process's database. */
export function appUrl(): string {
  const url = environment().DATABASE_URL;
  if (!url)
    throw new Error('DATABASE_URL is not set: start through `npm start`, `npm run worker`, or give the address of a PostgreSQL server.');
  return appRoleUrl(url);
}

export async function closeDatabase(): Promise<void> {
  const handle = held.tillwaterDatabase;
  held.tillwaterDatabase = undefined;
  await handle?.close();
}
