/** A fresh, migrated database for a test file, and a process environment in which `database()` reaches it as the application's role. */

import { randomBytes } from 'node:crypto';
import postgres from 'postgres';
import { inject } from 'vitest';
import { type Database, openDatabase } from '../../db/connect.ts';
import { appRoleUrl } from '../../db/roles.ts';
import { closeDatabase } from '../../lib/access/database.ts';
import { rereadEnvironment } from '../../lib/access/environment.ts';

export interface TestDatabase {
  readonly ownerUrl: string;
  /** logged in as the application's role */
  readonly db: Database;
  close(): Promise<void>;
}

export async function testDatabase(): Promise<TestDatabase> {
  const templateUrl = inject('templateUrl');
  const name = `t_${randomBytes(6).toString('hex')}`;
  const admin = postgres(withDatabase(templateUrl, 'postgres'), { max: 1, onnotice: () => {} });
  await admin.unsafe(`create database "${name}" template "template" strategy file_copy`);
  const ownerUrl = withDatabase(templateUrl, name);
  process.env.DATABASE_URL = ownerUrl;
  process.env.LOG_LEVEL = 'silent';
  process.env.TILLWATER_SECRET = 'a secret of the tests, long enough for any use';
  rereadEnvironment();
  const db = openDatabase(appRoleUrl(ownerUrl), 4);
  return {
    ownerUrl,
    db,
    async close() {
      await closeDatabase();
      await db.close();
      await admin.unsafe(`drop database "${name}" with (force)`);
      await admin.end();
    },
  };
}

function withDatabase(url: string, database: string): string {
  const changed = new URL(url);
  changed.pathname = `/${database}`;
  return changed.toString();
}
