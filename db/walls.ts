/**
 * The walls between districts, as SQL: the application's role, its grants, and row-level security on every table that carries a
 * district. Raised after every migration, so that a new table cannot be left open.
 */
const DISTRICT = "nullif(current_setting('app.district', true), '')::uuid";
const PERSON = "nullif(current_setting('app.person', true), '')";
const TOKEN = "nullif(current_setting('app.token_hash', true), '')";

/** Rows that may be read before a district is known: a person's own memberships, and the token that was presented. */
const ALSO_READABLE: Record<string, string> = {
  membership: `user_id = ${PERSON}`,
  api_token: `hash = ${TOKEN}`,
};

export function wallStatements(options: { role: string; password: string; tables: readonly string[] }): string[] {
  const { role, password, tables } = options;
  const statements = [
    `do $$ begin if not exists (select from pg_roles where rolname = '${role}') then create role ${role} login nosuperuser nobypassrls nocreatedb nocreaterole; end if; end $$`,
    `alter role ${role} with login nosuperuser nobypassrls password '${password}'`,
    'revoke create on schema public from public',
  ];
  for (const schema of ['public', 'auth', 'pgboss']) {
    statements.push(
      `grant usage on schema ${schema} to ${role}`,
      `grant select, insert, update, delete on all tables in schema ${schema} to ${role}`,
      `grant usage, select on all sequences in schema ${schema} to ${role}`,
      `grant execute on all functions in schema ${schema} to ${role}`,
    );
  }
  for (const table of tables) statements.push(...wallOf(table, role));
  return statements;
}

function wallOf(table: string, role: string): string[] {
  const own = `district_id = ${DISTRICT}`;
  const statements = [
    `alter table public."${table}" enable row level security`,
    `alter table public."${table}" force row level security`,
    `drop policy if exists own_district on public."${table}"`,
    `create policy own_district on public."${table}" for all to ${role} using (${own}) with check (${own})`,
    `drop policy if exists before_district on public."${table}"`,
  ];
  const also = ALSO_READABLE[table];
  if (also) statements.push(`create policy before_district on public."${table}" for select to ${role} using (${also})`);
  return statements;
}
