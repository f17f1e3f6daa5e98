import {
  bigint,
  boolean,
  date,
  doublePrecision,
  index,
  integer,
  jsonb,
  pgTable,
  primaryKey,
  smallint,
  text,
  timestamp,
  unique,
  uuid,
} from 'drizzle-orm/pg-core';
import { district } from './district.ts';
import { bytea } from './types.ts';

const owner = () =>
  uuid('district_id')
    .notNull()
    .references(() => district.districtId, { onDelete: 'cascade' });

/** A weather source: a set of stations, or the cells of a grid. */
export const weatherSource = pgTable(
  'weather_source',
  {
    districtId: owner(),
    sourceId: integer('source_id').notNull(),
    name: text('name').notNull(),
    kind: text('kind').notNull().$type<'stations' | 'grid'>().default('stations'),
    /** what its values are: measured, or a forecast of days to come, which never stands in for a measured day */
    role: text('role').notNull().$type<'observed' | 'forecast'>().default('observed'),
    /** lib/weather GridShape as JSON; null for stations */
    grid: jsonb('grid'),
    /** place in the order in which sources stand in for one another, from 1 */
    rank: integer('rank').notNull().default(1),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.sourceId] }), unique('weather_source_name').on(t.districtId, t.name)],
);

/** A station, or a cell of a grid. `ordinal` is its row in every block of the source and never changes. */
export const site = pgTable(
  'site',
  {
    districtId: owner(),
    sourceId: integer('source_id').notNull(),
    ordinal: integer('ordinal').notNull(),
    code: text('code').notNull(),
    name: text('name').notNull(),
    longitude: doublePrecision('longitude').notNull(),
    latitude: doublePrecision('latitude').notNull(),
    elevation: doublePrecision('elevation_m'),
    windHeight: doublePrecision('wind_height_m'),
    zone: text('zone'),
    /** row and column of a cell in the whole grid of its source, from 0 as the file counts them; null for stations */
    gridRow: integer('grid_row'),
    gridColumn: integer('grid_column'),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.sourceId, t.ordinal] }), unique('site_code').on(t.districtId, t.sourceId, t.code)],
);

/**
 * One variable of one source for one month over its sites: Float32 [site × day of month × step] with a parallel quality byte per value.
 * `steps` is 1 for daily variables and 24 for hourly ones, whose names are their own.
 * A block made before a site was added is shorter; the missing rows are missing values.
 */
export const weatherBlock = pgTable(
  'weather_block',
  {
    districtId: owner(),
    sourceId: integer('source_id').notNull(),
    variable: text('variable').notNull(),
    /** first day of the month */
    month: date('month').notNull(),
    siteCount: integer('site_count').notNull(),
    dayCount: integer('day_count').notNull(),
    steps: smallint('steps').notNull().default(1),
    values: bytea('values').notNull(),
    quality: bytea('quality').notNull(),
    version: integer('version').notNull().default(1),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.sourceId, t.variable, t.month] }), index('weather_block_month').on(t.districtId, t.month)],
);

/** What the checks found in the record of a site: one row per rule and run of days. The values themselves are never touched. */
export const weatherFlag = pgTable(
  'weather_flag',
  {
    districtId: owner(),
    sourceId: integer('source_id').notNull(),
    ordinal: integer('ordinal').notNull(),
    variable: text('variable').notNull(),
    rule: text('rule').notNull(),
    firstDay: date('first_day').notNull(),
    lastDay: date('last_day').notNull(),
    severity: text('severity').notNull().$type<'note' | 'suspect' | 'impossible'>(),
    /** the value that broke the rule, in the unit of the variable (or of the rule) */
    value: doublePrecision('value'),
    /** the limit it broke */
    limit: doublePrecision('limit_value'),
    /** sentence: what was found, with value, limit and advice */
    detail: text('detail').notNull(),
    /** further figures of the rule: neighbour, regression, slope … */
    figures: jsonb('figures').notNull().default({}),
    state: text('state').notNull().$type<'open' | 'accepted' | 'corrected' | 'rejected'>().default('open'),
    correctionId: uuid('correction_id'),
  },
  (t) => [
    primaryKey({ columns: [t.districtId, t.sourceId, t.ordinal, t.variable, t.rule, t.firstDay] }),
    index('weather_flag_state').on(t.districtId, t.state),
  ],
);

/** A decision on a value or a period: a layer over the raw record, never a change of it. The later of two layers wins. */
export const weatherCorrection = pgTable(
  'weather_correction',
  {
    districtId: owner(),
    correctionId: uuid('correction_id').notNull().defaultRandom(),
    /** order in which layers are laid */
    sequence: bigint('sequence', { mode: 'number' }).notNull(),
    sourceId: integer('source_id').notNull(),
    ordinal: integer('ordinal').notNull(),
    variable: text('variable').notNull(),
    fromDay: date('from_day').notNull(),
    toDay: date('to_day').notNull(),
    act: text('act').notNull().$type<'accept' | 'factor' | 'offset' | 'replace' | 'reject' | 'aridity'>(),
    /** factor; offset or replacement in the unit of the variable; Ko [°C] of an aridity adjustment */
    amount: doublePrecision('amount'),
    /** replacement by day: { "YYYY-MM-DD": number } */
    values: jsonb('values').$type<Record<string, number> | null>(),
    /** rule of the flag it settles */
    rule: text('rule'),
    reason: text('reason').notNull(),
    createdBy: text('created_by'),
    createdAt: timestamp('created_at', { withTimezone: true }).notNull().defaultNow(),
    undoneBy: text('undone_by'),
    undoneAt: timestamp('undone_at', { withTimezone: true }),
  },
  (t) => [
    primaryKey({ columns: [t.districtId, t.correctionId] }),
    index('weather_correction_site').on(t.districtId, t.sourceId, t.ordinal),
  ],
);

/** When a source was last checked, and what of it stands beside the flags: drift of a pyranometer, aridity, neighbours. */
export const weatherCheck = pgTable(
  'weather_check',
  {
    districtId: owner(),
    sourceId: integer('source_id').notNull(),
    checkedAt: timestamp('checked_at', { withTimezone: true }).notNull().defaultNow(),
    /** lib/weather CheckSummary as JSON */
    summary: jsonb('summary').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.sourceId] })],
);

/** Leave-one-out figures of a set of sources, kept until their weather changes. */
export const interpolationCheck = pgTable(
  'interpolation_check',
  {
    districtId: owner(),
    /** the sources and settings it was made for */
    key: text('key').notNull(),
    fromDay: date('from_day').notNull(),
    toDay: date('to_day').notNull(),
    /** SHA-256 of what it was computed from */
    inputSha256: text('input_sha256').notNull(),
    computedAt: timestamp('computed_at', { withTimezone: true }).notNull().defaultNow(),
    /** lib/weather InterpolationCheck as JSON */
    result: jsonb('result').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.key, t.fromDay, t.toDay] })],
);

/** A feed: where a source's weather comes from on a schedule. */
export const weatherFeed = pgTable(
  'weather_feed',
  {
    districtId: owner(),
    feedId: uuid('feed_id').notNull().defaultRandom(),
    name: text('name').notNull(),
    /** import kind of what it brings */
    kind: text('kind').notNull().$type<'weather' | 'stations'>().default('weather'),
    from: text('from_kind').notNull().$type<'url' | 'folder'>(),
    /** address or file name pattern, with date fields */
    template: text('template').notNull(),
    /** import options of every file it brings */
    options: jsonb('options').notNull().default({}),
    /** cron expression in the district's zone */
    schedule: text('schedule').notNull(),
    /** days back that are asked for again, so that late data and corrections come in */
    lookBack: integer('look_back_days').notNull().default(3),
    enabled: boolean('enabled').notNull().default(true),
    /** apply without a hand when a file has no errors */
    applyAutomatically: boolean('apply_automatically').notNull().default(true),
    nextAt: timestamp('next_at', { withTimezone: true }),
    failures: integer('failures').notNull().default(0),
    createdBy: text('created_by'),
    createdAt: timestamp('created_at', { withTimezone: true }).notNull().defaultNow(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.feedId] }), unique('weather_feed_name').on(t.districtId, t.name)],
);

/** One address or file that a feed asked for: what came, and what became of it. */
export const feedFetch = pgTable(
  'feed_fetch',
  {
    districtId: owner(),
    fetchId: uuid('fetch_id').notNull().defaultRandom(),
    feedId: uuid('feed_id').notNull(),
    address: text('address').notNull(),
    at: timestamp('at', { withTimezone: true }).notNull().defaultNow(),
    outcome: text('outcome').notNull().$type<'new' | 'changed' | 'unchanged' | 'absent' | 'failed' | 'refused'>(),
    status: integer('status'),
    sizeBytes: bigint('size_bytes', { mode: 'number' }),
    sha256: text('sha256'),
    etag: text('etag'),
    lastModified: text('last_modified'),
    importId: uuid('import_id'),
    error: text('error'),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.fetchId] }), index('feed_fetch_feed').on(t.districtId, t.feedId, t.at)],
);
