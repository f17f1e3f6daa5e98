import postgres from 'postgres';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { migrateDatabase } from '../../db/migrate.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';

let fresh: TestDatabase;
beforeAll(async () => {
  fresh = await testDatabase();
});
afterAll(() => fresh.close());

describe('migrateDatabase', () => {
  it('changes nothing when it runs a second time', async () => {
    const before = await columns();
    await migrateDatabase(fresh.ownerUrl, 'db/migrations');
    expect(await columns()).toEqual(before);
  });

  it('answers the application’s role', async () => {
    expect(await fresh.db.ping()).toBe(true);
  });
});

async function columns() {
  const owner = postgres(fresh.ownerUrl, { max: 1 });
  const rows = await owner`select table_schema, table_name, column_name, data_type from information_schema.columns
    where table_schema in ('public', 'auth') order by 1, 2, 3`;
  await owner.end();
  return [...rows];
}
