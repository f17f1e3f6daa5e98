/**
 * Rows an import replaces, with the rows as they were kept beside them: what undo puts back.
 *
 * The before-image of a row is the row itself as JSON, made and read back by the database, so that a restored row equals the old one to
 * the last bit. Rows that an import would leave as they are, are not touched and have no image.
 */
import { type SQL, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { jsonText, storableText } from './json-text.ts';

/** Key columns of the tables an import writes row by row. Plantings are replaced as all the plantings of a parcel and season, measurements as all the depths of a day. */
const TABLES = {
  weather_source: { key: { source_id: 'int' } },
  site: { key: { source_id: 'int', ordinal: 'int' } },
  reach: { key: { code: 'text' } },
  turnout: { key: { code: 'text' } },
  parcel: { key: { code: 'text' } },
  soil: { key: { code: 'text' } },
  crop_mapping: { key: { foreign_code: 'text' } },
  planting: { key: { season_code: 'text', parcel_code: 'text' }, order: 'sequence' },
  service_area: { key: { code: 'text' } },
  soil_area: { key: { code: 'text' } },
  parcel_history: { key: { history_id: 'uuid' } },
  image_mean: { key: { parcel_code: 'text', date: 'date', quantity: 'text' } },
  delivery: { key: { parcel_code: 'text', date: 'date' } },
  field_measurement: { key: { parcel_code: 'text', date: 'date', quantity: 'text' }, order: 'depth_m' },
} as const satisfies Record<string, { key: Record<string, 'int' | 'text' | 'uuid' | 'date' | 'float8'>; order?: string }>;

type ImportTable = keyof typeof TABLES;

const BLOCK_TABLE = 'weather_block';

/** What the changes of one import are filed under. */
export interface ImportKey {
  readonly districtId: string;
  readonly importId: string;
}

export interface RowChanges {
  readonly added: number;
  readonly changed: number;
}

interface Shape {
  readonly table: SQL;
  readonly names: readonly string[];
  readonly types: readonly string[];
  readonly keyOf: (alias: string) => SQL;
  readonly same: (left: string, right: string) => SQL;
  /** the key of an image `i` as columns of the table's own types */
  readonly typedKey: SQL;
  readonly order: SQL;
}

type Row = Readonly<Record<string, unknown>>;

function shapeOf(name: ImportTable): Shape {
  const { key, order } = TABLES[name] as { key: Record<string, string>; order?: string };
  const names = Object.keys(key);
  return {
    table: sql.raw(`public.${name}`),
    names,
    types: Object.values(key),
    keyOf: (alias) => sql.raw(`jsonb_build_object(${names.map((column) => `'${column}', ${alias}.${column}`).join(', ')})`),
    same: (left, right) => sql.raw(names.map((column) => `${left}.${column} = ${right}.${column}`).join(' and ')),
    typedKey: sql.raw(names.map((column) => `(i.key ->> '${column}')::${key[column]} as ${column}`).join(', ')),
    order: sql.raw(order ?? names[0]),
  };
}

async function lastOrdinal(tx: Tx, own: ImportKey): Promise<number> {
  const [row] = await tx.execute<{ last: number }>(
    sql`select coalesce(max(ordinal), -1)::int as last from import_before where district_id = ${own.districtId} and import_id = ${own.importId}`,
  );
  return row.last;
}

/**
 * Makes a table hold `rows` for the keys they bear, and files what was there before. Rows already so are left alone.
 *
 * @param rows database column → value, without the district
 */
export async function replaceRows(tx: Tx, own: ImportKey, name: ImportTable, rows: readonly Row[]): Promise<RowChanges> {
  if (rows.length === 0) return { added: 0, changed: 0 };
  const shape = shapeOf(name);
  const keys = [...new Map(rows.map((row) => [keyText(shape, row), keyOf(shape, row)])).values()];
  const known = new Set((await listKnownKeys(tx, own, name, keys)).map((key) => keyText(shape, key)));
  const fresh = keys.filter((key) => !known.has(keyText(shape, key)));
  await fileAbsent(tx, own, name, fresh);
  const changed = await fileChanging(
    tx,
    own,
    name,
    rows.filter((row) => known.has(keyText(shape, row))),
  );
  await deleteKeys(tx, own, name, changed);
  const wanted = new Set([...fresh, ...changed].map((key) => keyText(shape, key)));
  const incoming = rows.filter((row) => wanted.has(keyText(shape, row)));
  if (incoming.length > 0) await tx.execute(sql`insert into ${shape.table} select r.* from ${records(shape, own, incoming)} r`);
  return { added: fresh.length, changed: changed.length };
}

/** Which of some keys have rows. */
async function listKnownKeys(tx: Tx, own: ImportKey, name: ImportTable, keys: readonly Row[]): Promise<Row[]> {
  const shape = shapeOf(name);
  const found = await tx.execute<{ key: string }>(sql`
    select ${shape.keyOf('k')}::text as key from ${records(shape, own, keys)} k
    where exists (select 1 from ${shape.table} t where t.district_id = ${own.districtId}::uuid and ${shape.same('t', 'k')})`);
  return found.map((row) => JSON.parse(row.key) as Row);
}

/** Files that there was nothing under some keys: for rows that are then written by other means than `replaceRows`. */
export async function fileAbsent(tx: Tx, own: ImportKey, name: ImportTable, keys: readonly Row[]): Promise<void> {
  if (keys.length === 0) return;
  const shape = shapeOf(name);
  const from = await lastOrdinal(tx, own);
  await tx.execute(sql`
    insert into import_before (district_id, import_id, ordinal, table_name, key, before)
    select ${own.districtId}::uuid, ${own.importId}::uuid, ${from}::int + row_number() over (order by ${shape.keyOf('k')}::text), ${name}::text, ${shape.keyOf('k')}, null
    from ${records(shape, own, keys)} k`);
}

/** Files the stored rows that differ from the incoming ones, and answers their keys. */
async function fileChanging(tx: Tx, own: ImportKey, name: ImportTable, rows: readonly Row[]): Promise<Row[]> {
  if (rows.length === 0) return [];
  const shape = shapeOf(name);
  const from = await lastOrdinal(tx, own);
  const keys = sql.raw(shape.names.map((column) => `r.${column}`).join(', '));
  const filed = await tx.execute<{ key: string }>(sql`
    insert into import_before (district_id, import_id, ordinal, table_name, key, before)
    select ${own.districtId}::uuid, ${own.importId}::uuid, ${from}::int + row_number() over (order by ${shape.keyOf('n')}::text), ${name}::text, ${shape.keyOf('n')}, o.rows
    from (select ${keys}, jsonb_agg(to_jsonb(r) order by r.${shape.order}) as rows from ${records(shape, own, rows)} r group by ${keys}) n
    cross join lateral (
      select jsonb_agg(to_jsonb(t) order by t.${shape.order}) as rows from ${shape.table} t
      where t.district_id = ${own.districtId}::uuid and ${shape.same('t', 'n')}
    ) o
    where n.rows is distinct from o.rows
    returning key::text as key`);
  return filed.map((row) => JSON.parse(row.key) as Row);
}

function keyOf(shape: Shape, row: Row): Row {
  return Object.fromEntries(shape.names.map((column) => [column, row[column]]));
}

function records(shape: Shape, own: ImportKey, rows: readonly Row[]): SQL {
  const json = jsonText(rows.map((row) => ({ ...row, district_id: own.districtId })));
  return sql`jsonb_populate_recordset(null::${shape.table}, ${json}::jsonb)`;
}

function keyText(shape: Shape, row: Row): string {
  return JSON.stringify(shape.names.map((column) => storableText(String(row[column]))));
}

async function deleteKeys(tx: Tx, own: ImportKey, name: ImportTable, keys: readonly Row[]): Promise<void> {
  if (keys.length === 0) return;
  const shape = shapeOf(name);
  const lists = shape.names.map((column, i) => {
    const list = jsonText(keys.map((key) => key[column]));
    return sql`array(select jsonb_array_elements_text(${list}::jsonb))::${sql.raw(shape.types[i])}[]`;
  });
  await tx.execute(sql`
    delete from ${shape.table} t using unnest(${sql.join(lists, sql`, `)}) as k (${sql.raw(shape.names.join(', '))})
    where t.district_id = ${own.districtId}::uuid and ${shape.same('t', 'k')}`);
}

/** Removes the rows of some keys, filing what was there. Answers how many keys had rows. */
export async function removeRows(tx: Tx, own: ImportKey, name: ImportTable, keys: readonly Row[]): Promise<number> {
  if (keys.length === 0) return 0;
  const shape = shapeOf(name);
  const from = await lastOrdinal(tx, own);
  const filed = await tx.execute<{ key: string }>(sql`
    insert into import_before (district_id, import_id, ordinal, table_name, key, before)
    select ${own.districtId}::uuid, ${own.importId}::uuid, ${from}::int + row_number() over (order by ${shape.keyOf('k')}::text), ${name}::text, ${shape.keyOf('k')}, o.rows
    from ${records(shape, own, keys)} k
    cross join lateral (
      select jsonb_agg(to_jsonb(t) order by t.${shape.order}) as rows from ${shape.table} t
      where t.district_id = ${own.districtId}::uuid and ${shape.same('t', 'k')}
    ) o
    where o.rows is not null
    returning key::text as key`);
  await deleteKeys(
    tx,
    own,
    name,
    filed.map((row) => JSON.parse(row.key) as Row),
  );
  return filed.length;
}

async function deleteImaged(tx: Tx, own: ImportKey, name: ImportTable): Promise<void> {
  const shape = shapeOf(name);
  // the planner knows nothing of fresh images and would compare each with each
  await tx.execute(sql`select set_config('enable_nestloop', 'off', true)`);
  await tx.execute(sql`
    delete from ${shape.table} t using (
      select distinct ${shape.typedKey} from import_before i
      where i.district_id = ${own.districtId}::uuid and i.import_id = ${own.importId}::uuid and i.table_name = ${name}
    ) b
    where t.district_id = ${own.districtId}::uuid and ${shape.same('t', 'b')}`);
  await tx.execute(sql`select set_config('enable_nestloop', 'on', true)`);
}

/** Puts every row-by-row table back as it was before an import. The oldest image of a key counts. Answers the tables touched. */
export async function restoreRows(tx: Tx, own: ImportKey): Promise<ImportTable[]> {
  const touched = await tx.execute<{ table_name: string }>(
    sql`select distinct table_name from import_before where district_id = ${own.districtId} and import_id = ${own.importId}`,
  );
  const names = (Object.keys(TABLES) as ImportTable[]).filter((name) => touched.some((row) => row.table_name === name));
  for (const name of names) {
    await deleteImaged(tx, own, name);
    await tx.execute(sql`
      insert into ${shapeOf(name).table} select r.* from (
        select distinct on (key) key, before from import_before
        where district_id = ${own.districtId}::uuid and import_id = ${own.importId}::uuid and table_name = ${name}
        order by key, ordinal
      ) b, jsonb_populate_recordset(null::${shapeOf(name).table}, b.before) r
      where b.before is not null`);
  }
  return names;
}

/** Files the before-image of a weather block; see `BlockImage` of the jobs room for its shape. */
export async function fileBlockImage(tx: Tx, own: ImportKey, key: Record<string, unknown>, image: unknown): Promise<void> {
  const ordinal = (await lastOrdinal(tx, own)) + 1;
  await tx.execute(sql`
    insert into import_before (district_id, import_id, ordinal, table_name, key, before)
    values (${own.districtId}, ${own.importId}, ${ordinal}, ${BLOCK_TABLE}, ${jsonText(key)}::jsonb, ${jsonText(image)}::jsonb)`);
}

/** Before-images of weather blocks, newest first, so that the oldest is put back last. */
export async function listBlockImages(tx: Tx, own: ImportKey): Promise<{ key: unknown; before: unknown }[]> {
  const rows = await tx.execute<{ key: string; before: string }>(sql`
    select key::text as key, before::text as before from import_before
    where district_id = ${own.districtId} and import_id = ${own.importId} and table_name = ${BLOCK_TABLE} order by ordinal desc`);
  return rows.map((row) => ({ key: JSON.parse(row.key), before: JSON.parse(row.before) }));
}

export interface LaterImport {
  readonly importId: string;
  readonly kind: string;
  readonly file: string;
  readonly appliedAt: string;
  /** one of the things both imports changed */
  readonly example: string;
}

/**
 * True where two images of a weather block tell of one site: sites that stood in the block are members of `rows`, those it did not reach are
 * runs of ordinals in `absent`.
 */
function sameSites(): SQL {
  const runs = (image: string) => sql.raw(`jsonb_array_elements(coalesce(${image}.before -> 'absent', '[]'::jsonb))`);
  const keys = (image: string) => sql.raw(`jsonb_object_keys(coalesce(${image}.before -> 'rows', '{}'::jsonb))`);
  const within = (one: string, other: string) =>
    sql`exists (select 1 from ${keys(one)} k, ${runs(other)} r where k::int between (r ->> 0)::int and (r ->> 1)::int)`;
  return sql`(exists (select 1 from ${keys('a')} k where jsonb_exists(b.before -> 'rows', k))
    or ${within('a', 'b')} or ${within('b', 'a')}
    or exists (select 1 from ${runs('a')} x, ${runs('b')} y where (x ->> 0)::int <= (y ->> 1)::int and (y ->> 0)::int <= (x ->> 1)::int))`;
}

/** The newest import applied after this one that changed a row this one changed; for weather, the same site and month. */
export async function findLaterImport(tx: Tx, own: ImportKey): Promise<LaterImport | null> {
  // the planner knows nothing of fresh images and would compare each with each
  await tx.execute(sql`select set_config('enable_nestloop', 'off', true)`);
  const [row] = await tx.execute<Record<string, string>>(sql`
    select i.import_id, i.kind, to_char(i.applied_at at time zone d.time_zone, 'YYYY-MM-DD HH24:MI') as applied_at, a.table_name, a.key::text as key,
      (select f.name from import_file f where f.district_id = i.district_id and f.import_id = i.import_id order by f.ordinal limit 1) as file
    from import mine
    join district d on d.district_id = mine.district_id
    join import_before a on a.district_id = mine.district_id and a.import_id = mine.import_id
    join import_before b on b.district_id = a.district_id and b.table_name = a.table_name and b.key = a.key and b.import_id <> a.import_id
    join import i on i.district_id = b.district_id and i.import_id = b.import_id
    where mine.district_id = ${own.districtId}::uuid and mine.import_id = ${own.importId}::uuid
      and i.state in ('applied', 'undoing') and i.applied_order > mine.applied_order
      and (a.table_name <> ${BLOCK_TABLE}
        or ${sameSites()})
    order by i.applied_order desc limit 1`);
  await tx.execute(sql`select set_config('enable_nestloop', 'on', true)`);
  return row ? laterImport(row) : null;
}

/** The newest import applied after this one that changed a given table. */
export async function findLaterImportOf(tx: Tx, own: ImportKey, name: string): Promise<LaterImport | null> {
  const [row] = await tx.execute<Record<string, string>>(sql`
    select i.import_id, i.kind, to_char(i.applied_at at time zone d.time_zone, 'YYYY-MM-DD HH24:MI') as applied_at, ${name}::text as table_name, '{}' as key,
      (select f.name from import_file f where f.district_id = i.district_id and f.import_id = i.import_id order by f.ordinal limit 1) as file
    from import mine join district d on d.district_id = mine.district_id
    join import i on i.district_id = mine.district_id and i.applied_order > mine.applied_order and i.state in ('applied', 'undoing')
    where mine.district_id = ${own.districtId}::uuid and mine.import_id = ${own.importId}::uuid
      and exists (select 1 from import_before b where b.district_id = i.district_id and b.import_id = i.import_id and b.table_name = ${name})
    order by i.applied_order desc limit 1`);
  return row ? laterImport(row) : null;
}

/** @example 'the weather of 2023-06 (precipitation_mm)' */
function blockWords({ month, variable }: { month?: string; variable?: string }): string {
  return `The weather of ${month?.slice(0, 7) ?? 'a month'} (${variable ?? ''})`;
}

function laterImport(row: Record<string, string>): LaterImport {
  const key = Object.values(JSON.parse(row.key) as Record<string, unknown>).join(' ');
  const example = row.table_name === BLOCK_TABLE ? blockWords(JSON.parse(row.key)) : `${row.table_name.replaceAll('_', ' ')} ${key}`.trim();
  return { importId: row.import_id, kind: row.kind, file: row.file ?? '', appliedAt: row.applied_at, example };
}
