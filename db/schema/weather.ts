import { date, doublePrecision, index, integer, pgTable, primaryKey, text, unique, uuid } from 'drizzle-orm/pg-core';
import { district } from './district.ts';
import { bytea } from './types.ts';

/** A weather source: a set of stations, or later the cells of a grid. */
export const weatherSource = pgTable(
  'weather_source',
  {
    districtId: uuid('district_id')
      .notNull()
      .references(() => district.districtId, { onDelete: 'cascade' }),
    sourceId: integer('source_id').notNull(),
    name: text('name').notNull(),
    kind: text('kind').notNull().$type<'stations'>().default('stations'),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.sourceId] }), unique('weather_source_name').on(t.districtId, t.name)],
);

/** A station. `ordinal` is its row in every block of the source and never changes. */
export const site = pgTable(
  'site',
  {
    districtId: uuid('district_id')
      .notNull()
      .references(() => district.districtId, { onDelete: 'cascade' }),
    sourceId: integer('source_id').notNull(),
    ordinal: integer('ordinal').notNull(),
    code: text('code').notNull(),
    name: text('name').notNull(),
    longitude: doublePrecision('longitude').notNull(),
    latitude: doublePrecision('latitude').notNull(),
    elevation: doublePrecision('elevation_m'),
    windHeight: doublePrecision('wind_height_m'),
    zone: text('zone'),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.sourceId, t.ordinal] }), unique('site_code').on(t.districtId, t.sourceId, t.code)],
);

/**
 * One variable of one source for one month over its sites: Float32 [site × day of month] with a parallel quality byte per value.
 * A block made before a site was added is shorter; the missing rows are missing values.
 */
export const weatherBlock = pgTable(
  'weather_block',
  {
    districtId: uuid('district_id')
      .notNull()
      .references(() => district.districtId, { onDelete: 'cascade' }),
    sourceId: integer('source_id').notNull(),
    variable: text('variable').notNull(),
    /** first day of the month */
    month: date('month').notNull(),
    siteCount: integer('site_count').notNull(),
    dayCount: integer('day_count').notNull(),
    values: bytea('values').notNull(),
    quality: bytea('quality').notNull(),
    version: integer('version').notNull().default(1),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.sourceId, t.variable, t.month] }), index('weather_block_month').on(t.districtId, t.month)],
);
