import { bigint, index, integer, jsonb, pgTable, primaryKey, real, text, timestamp, uuid } from 'drizzle-orm/pg-core';
import { district } from './district.ts';
import { bytea } from './types.ts';

const owner = () =>
  uuid('district_id')
    .notNull()
    .references(() => district.districtId, { onDelete: 'cascade' });

export type ImportState = 'reading' | 'ready' | 'applying' | 'applied' | 'undoing' | 'undone' | 'cancelled' | 'failed';

/** One upload on its way through the pipeline. */
export const importJob = pgTable(
  'import',
  {
    districtId: owner(),
    importId: uuid('import_id').notNull().defaultRandom(),
    kind: text('kind').notNull(),
    state: text('state').notNull().$type<ImportState>().default('reading'),
    progress: real('progress').notNull().default(0),
    /** what the user set: column plan, units, mappings, season … */
    options: jsonb('options').notNull().default({}),
    /** what the reader understood: columns, units, counts, date range */
    understood: jsonb('understood'),
    /** Finding[]; at most 1,000 kept, `findingCounts` has the true totals */
    findings: jsonb('findings').notNull().default([]),
    findingCounts: jsonb('finding_counts').notNull().default({}),
    /** a sample for the eye: rows or features */
    preview: jsonb('preview'),
    error: text('error'),
    /** counts up at each re-read, so that a late reader cannot overwrite a newer plan's result */
    revision: integer('revision').notNull().default(1),
    createdBy: text('created_by'),
    createdAt: timestamp('created_at', { withTimezone: true }).notNull().defaultNow(),
    appliedAt: timestamp('applied_at', { withTimezone: true }),
    /** order in which imports were applied, for undo */
    appliedOrder: bigint('applied_order', { mode: 'number' }),
    undoneAt: timestamp('undone_at', { withTimezone: true }),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.importId] }), index('import_created').on(t.districtId, t.createdAt)],
);

export const importFile = pgTable(
  'import_file',
  {
    districtId: owner(),
    importId: uuid('import_id').notNull(),
    ordinal: integer('ordinal').notNull(),
    name: text('name').notNull(),
    bytes: bytea('bytes').notNull(),
    sha256: text('sha256').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.importId, t.ordinal] })],
);

/** What the reader made of the files, ready to apply, in pieces. */
export const importStaged = pgTable(
  'import_staged',
  {
    districtId: owner(),
    importId: uuid('import_id').notNull(),
    ordinal: integer('ordinal').notNull(),
    /** JSON, gzip */
    payload: bytea('payload').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.importId, t.ordinal] })],
);

/** The rows an import changed, as they were before: what undo puts back. `before` null means the row did not exist. */
export const importBefore = pgTable(
  'import_before',
  {
    districtId: owner(),
    importId: uuid('import_id').notNull(),
    ordinal: integer('ordinal').notNull(),
    tableName: text('table_name').notNull(),
    key: jsonb('key').notNull(),
    before: jsonb('before'),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.importId, t.ordinal] })],
);
