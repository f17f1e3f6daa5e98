/** Whether the database has been migrated as far as this code needs. */
import { getTableColumns, getTableName, is, sql } from 'drizzle-orm';
import { getTableConfig, PgTable } from 'drizzle-orm/pg-core';
import type { Database } from '../connect.ts';
import * as auth from '../schema/auth.ts';
import * as district from '../schema/district.ts';
import * as imports from '../schema/import.ts';
import * as land from '../schema/land.ts';
import * as runs from '../schema/run.ts';
import * as weather from '../schema/weather.ts';

/** Every column the schema of this code names, as `schema.table.column`. */
function neededColumns(): string[] {
  const tables = [auth, district, imports, land, runs, weather].flatMap((file) =>
    Object.values(file).filter((value) => is(value, PgTable)),
  );
  return tables.flatMap((table) => {
    const schema = getTableConfig(table).schema ?? 'public';
    return Object.values(getTableColumns(table)).map((column) => `${schema}.${getTableName(table)}.${column.name}`);
  });
}

/** True when every table and column this code needs is there. */
export async function hasNewestSchema(outside: Database['outside']): Promise<boolean> {
  const rows = await outside.execute<{ path: string }>(sql`select table_schema || '.' || table_name || '.' || column_name as path
    from information_schema.columns where table_schema in ('public', 'auth')`);
  const there = new Set(rows.map((row) => row.path));
  return neededColumns().every((path) => there.has(path));
}
