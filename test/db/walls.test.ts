/** The walls between districts. Row-level security as PostgreSQL 18 documents it in section 5.9, "Row Security Policies". */
import postgres from 'postgres';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { APP_ROLE, appRoleUrl } from '../../db/roles.ts';
import { type TestDatabase, testDatabase } from '../support/database.ts';

let fresh: TestDatabase;
let owner: postgres.Sql;
let app: postgres.Sql;
let tables: string[];
const A = '00000000-0000-4000-8000-00000000000a';
const B = '00000000-0000-4000-8000-00000000000b';

beforeAll(async () => {
  fresh = await testDatabase();
  owner = postgres(fresh.ownerUrl, { max: 1, onnotice: () => {} });
  app = postgres(appRoleUrl(fresh.ownerUrl), { max: 2, onnotice: () => {} });
  const rows = await owner<{ name: string }[]>`select table_name as name from information_schema.columns c
    join information_schema.tables t using (table_schema, table_name)
    where c.table_schema = 'public' and c.column_name = 'district_id' and t.table_type = 'BASE TABLE' order by 1`;
  tables = rows.map((row) => row.name);
  for (const table of ['district', ...tables.filter((name) => name !== 'district')]) {
    for (const district of [A, B]) await fillRow(table, district);
  }
});
afterAll(async () => {
  await Promise.all([owner.end(), app.end()]);
  await fresh.close();
});

/** One row of a table for a district, as the owner: every column that must have a value gets one by its type. */
async function fillRow(table: string, district: string): Promise<void> {
  const columns = await owner<
    { name: string; type: string }[]
  >`select column_name as name, data_type as type from information_schema.columns
    where table_schema = 'public' and table_name = ${table} and is_nullable = 'NO' and (column_default is null or column_name = 'district_id')`;
  const suffix = district === A ? 'a' : 'b';
  const byType: Record<string, string> = {
    uuid: `'00000000-0000-4000-8000-0000000000f${suffix}'`,
    text: `'${suffix}'`,
    jsonb: `'{}'`,
    date: `'2024-01-01'`,
    bytea: `'\\x00'`,
    'timestamp with time zone': 'now()',
    boolean: 'true',
  };
  const value = ({ name, type }: { name: string; type: string }) => (name === 'district_id' ? `'${district}'` : (byType[type] ?? '1'));
  const names = columns.map((column) => `"${column.name}"`).join(', ');
  await owner.unsafe(`insert into public."${table}" (${names}) values (${columns.map(value).join(', ')})`);
}

/** Runs a statement as the application's role with a setting, in a transaction of its own. */
function as<T extends postgres.MaybeRow[]>(setting: string, value: string, statement: string): Promise<T> {
  return app.begin(async (sql) => {
    await sql`select set_config(${setting}, ${value}, true)`;
    return sql.unsafe(statement);
  }) as unknown as Promise<T>;
}

describe('the walls', () => {
  it('stand on every table that carries a district', async () => {
    expect(tables.length).toBeGreaterThan(20);
    const rows = await owner`select relname as name, relrowsecurity as enabled, relforcerowsecurity as forced from pg_class
      where relnamespace = 'public'::regnamespace and relname = any(${tables}) order by 1`;
    expect(rows.map((row) => ({ ...row }))).toEqual(tables.map((name) => ({ name, enabled: true, forced: true })));
    const policies = await owner<{ tablename: string; policyname: string; cmd: string; with_check: string | null }[]>`
      select tablename, policyname, cmd, with_check from pg_policies where schemaname = 'public'`;
    for (const table of tables) {
      const own = policies.find((policy) => policy.tablename === table && policy.policyname === 'own_district');
      expect(own?.cmd, table).toBe('ALL');
      expect(own?.with_check, table).toContain('app.district');
    }
    const before = policies.filter((policy) => policy.policyname === 'before_district');
    expect(before.map(({ tablename, cmd }) => [tablename, cmd]).sort()).toEqual([
      ['api_token', 'SELECT'],
      ['membership', 'SELECT'],
    ]);
  });

  it('hold a role that is no superuser, owns nothing and cannot pass them', async () => {
    const [role] = await owner`select rolsuper, rolbypassrls, rolcreaterole, rolcreatedb from pg_roles where rolname = ${APP_ROLE}`;
    expect({ ...role }).toEqual({ rolsuper: false, rolbypassrls: false, rolcreaterole: false, rolcreatedb: false });
    const owned = await owner`select relname from pg_class c join pg_roles r on r.oid = c.relowner where r.rolname = ${APP_ROLE}`;
    expect(owned).toHaveLength(0);
    await expect(app.unsafe('alter table public.parcel disable row level security')).rejects.toThrow(/must be owner/);
    await expect(app.unsafe('create table public.loophole (x int)')).rejects.toThrow(/permission denied/);
  });

  it('show one district its own row and none of another’s, without any where', async () => {
    for (const table of tables) {
      const rows = await as<{ district_id: string }[]>('app.district', A, `select district_id from public."${table}"`);
      expect(
        [...rows].map((row) => row.district_id),
        table,
      ).toEqual([A]);
    }
  });

  it('show nothing when no district is set, or the setting is empty', async () => {
    for (const table of tables) {
      expect(await app.unsafe(`select 1 from public."${table}"`), table).toHaveLength(0);
      expect(await as('app.district', '', `select 1 from public."${table}"`), table).toHaveLength(0);
    }
  });

  it('refuse a row for another district, and to hand a row over', async () => {
    for (const table of tables) {
      const move = as('app.district', A, `update public."${table}" set district_id = '${B}'`);
      await expect(move, table).rejects.toThrow(/row-level security|foreign key/);
    }
    const insert = `insert into public.season (district_id, code, name, start_date, end_date) values ('${B}', 'x', 'x', '2024-01-01', '2024-12-31')`;
    await expect(as('app.district', A, insert)).rejects.toThrow(/row-level security/);
  });

  it('let an update or a delete without where touch the own rows only', async () => {
    await as('app.district', A, `update public.season set name = 'changed'`);
    await as('app.district', A, 'delete from public.crop_mapping');
    expect((await owner`select name from public.season where district_id = ${B}`)[0].name).toBe('b');
    expect(await owner`select 1 from public.crop_mapping where district_id = ${B}`).toHaveLength(1);
  });

  it('let a person read the own memberships and a token itself, and no more', async () => {
    expect([...(await as('app.person', 'a', 'select user_id from membership'))]).toEqual([{ user_id: 'a' }]);
    expect([...(await as('app.token_hash', 'b', 'select hash from api_token'))]).toEqual([{ hash: 'b' }]);
    expect(await as('app.token_hash', 'b', 'select 1 from membership')).toHaveLength(0);
    for (const table of tables.filter((name) => name !== 'membership')) {
      expect(await as('app.person', 'a', `select 1 from public."${table}"`), table).toHaveLength(0);
    }
    const written = await as('app.person', 'a', `update membership set role = 'manager' returning 1`);
    expect(written).toHaveLength(0);
  });

  it('forget the district after the transaction', async () => {
    await fresh.db.inDistrict(A, async () => {});
    const [row] = await app`select current_setting('app.district', true) as district`;
    expect(row.district ?? '').toBe('');
  });
});
