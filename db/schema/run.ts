import {
  boolean,
  date,
  doublePrecision,
  index,
  integer,
  jsonb,
  pgTable,
  primaryKey,
  real,
  smallint,
  text,
  timestamp,
  uuid,
} from 'drizzle-orm/pg-core';
import { district } from './district.ts';
import { bytea } from './types.ts';

const owner = () =>
  uuid('district_id')
    .notNull()
    .references(() => district.districtId, { onDelete: 'cascade' });

export type RunState = 'queued' | 'running' | 'done' | 'failed' | 'cancelled';

/** One computation of a season. `standing` marks the run readers see by default; at most one per season. */
export const run = pgTable(
  'run',
  {
    districtId: owner(),
    runId: uuid('run_id').notNull().defaultRandom(),
    seasonCode: text('season_code').notNull(),
    state: text('state').notNull().$type<RunState>().default('queued'),
    progress: real('progress').notNull().default(0),
    stage: text('stage').notNull().default('waiting'),
    standing: boolean('standing').notNull().default(false),
    cancelRequested: boolean('cancel_requested').notNull().default(false),
    startDate: date('start_date').notNull(),
    endDate: date('end_date').notNull(),
    dayCount: integer('day_count').notNull(),
    parcelCount: integer('parcel_count').notNull().default(0),
    sliceCount: integer('slice_count').notNull().default(0),
    settings: jsonb('settings').notNull(),
    /** SHA-256 of every input, kernel version, geometry version */
    manifest: jsonb('manifest').notNull().default({}),
    /** { parcelDays, maxResidualMm, rollUpRelative, filledShare, fallbackShares } */
    balance: jsonb('balance').notNull().default({}),
    /** the completed site weather and frozen tables the slices read: gzip JSON + arrays */
    frozen: bytea('frozen'),
    geometryVersion: integer('geometry_version').notNull().default(1),
    /** since when an input has changed under it; null while it stands on what the district has */
    staleSince: timestamp('stale_since', { withTimezone: true }),
    staleReason: text('stale_reason'),
    /** where its band stands: { state, members, seed, ...}; null when none was asked for */
    band: jsonb('band'),
    error: text('error'),
    createdBy: text('created_by'),
    createdAt: timestamp('created_at', { withTimezone: true }).notNull().defaultNow(),
    startedAt: timestamp('started_at', { withTimezone: true }),
    finishedAt: timestamp('finished_at', { withTimezone: true }),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.runId] }), index('run_created').on(t.districtId, t.createdAt)],
);

/** A slice of the parcels of a run: the unit of work and of resumption. */
export const runSlice = pgTable(
  'run_slice',
  {
    districtId: owner(),
    runId: uuid('run_id').notNull(),
    slice: integer('slice').notNull(),
    done: boolean('done').notNull().default(false),
    maxResidual: doublePrecision('max_residual_mm'),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.runId, t.slice] })],
);

/** One parcel of a run: the season's daily arrays, frozen inputs, and site weights. `position` is its place in the run's map arrays. */
export const runParcel = pgTable(
  'run_parcel',
  {
    districtId: owner(),
    runId: uuid('run_id').notNull(),
    position: integer('position').notNull(),
    slice: integer('slice').notNull(),
    parcelCode: text('parcel_code').notNull(),
    turnoutCode: text('turnout_code'),
    reachCode: text('reach_code'),
    cropCodes: jsonb('crop_codes').notNull().$type<string[]>(),
    methodCode: text('method_code').notNull(),
    soilCode: text('soil_code').notNull(),
    area: doublePrecision('area_m2').notNull(),
    /** lib/season ParcelInput as JSON, frozen at the start of the run */
    input: jsonb('input').notNull(),
    /** Uint16 [variable × day] in the order of DAILY_VARIABLES, packed (lib/season/day-pack); plain and little-endian in runs of kernel version 2 and before */
    daily: bytea('daily'),
    /** FALLBACK bits by day, packed (lib/season/day-pack); Uint32 LE in runs of kernel version 2, Uint16 LE of version 1 */
    flags: bytea('flags'),
    /** Float64 LE [planting × 4 stages × 2]: ETc and ETc adj [mm]; lib/season SeasonOutput */
    stageEt: bytea('stage_et'),
    /** Int32 LE [planting × 5]: first day of each stage and first day after the last */
    stageDays: bytea('stage_days'),
    /** lib/season InitialWater as JSON: what the season leaves in the soil */
    closing: jsonb('closing'),
  },
  (t) => [
    primaryKey({ columns: [t.districtId, t.runId, t.position] }),
    index('run_parcel_code').on(t.districtId, t.runId, t.parcelCode),
    index('run_parcel_slice').on(t.districtId, t.runId, t.slice),
  ],
);

/**
 * Map numbers: Float32 LE [period × parcel position] of one variable and period kind. Depths are sums [mm]; state variables are period-end values. While a run
 * is under way its slices keep their inputs and sums here too, under a period with a slash in it.
 */
export const runValue = pgTable(
  'run_value',
  {
    districtId: owner(),
    runId: uuid('run_id').notNull(),
    variable: text('variable').notNull(),
    period: text('period').notNull().$type<'week' | 'month' | 'season'>(),
    periodCount: integer('period_count').notNull(),
    parcelCount: integer('parcel_count').notNull(),
    values: bytea('values').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.runId, t.variable, t.period] })],
);

/**
 * One reach of a run: Float64 LE [4 × day]: turnout demand on the reach, loss, head inflow, all m³ d⁻¹, and the area below whose weather was
 * estimated [m²]; runs of kernel version 1 have the first three.
 */
export const runReach = pgTable(
  'run_reach',
  {
    districtId: owner(),
    runId: uuid('run_id').notNull(),
    ordinal: smallint('ordinal').notNull(),
    reachCode: text('reach_code').notNull(),
    parentCode: text('parent_code'),
    name: text('name').notNull(),
    kind: text('kind').notNull(),
    capacity: doublePrecision('capacity_m3_s'),
    length: doublePrecision('length_m').notNull(),
    lossRule: jsonb('loss_rule').notNull(),
    daily: bytea('daily').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.runId, t.ordinal] })],
);

/**
 * How sure the numbers of a run are: Float32 LE [quantile × period × place], quantiles P10, P50, P90; places are the parcels of the run
 * by position, its reaches by ordinal, or the district (one). Rows of level `part` are the pieces of a band that is not finished yet.
 */
export const runBand = pgTable(
  'run_band',
  {
    districtId: owner(),
    runId: uuid('run_id').notNull(),
    level: text('level').notNull().$type<'parcel' | 'reach' | 'district' | 'part'>(),
    variable: text('variable').notNull(),
    period: text('period').notNull().$type<'week' | 'month' | 'season'>(),
    periodCount: integer('period_count').notNull(),
    placeCount: integer('place_count').notNull(),
    values: bytea('values').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.runId, t.level, t.variable, t.period] })],
);

/** Encoded vector tiles, immutable per geometry version. */
export const tileCache = pgTable(
  'tile_cache',
  {
    districtId: owner(),
    layer: text('layer').notNull(),
    version: integer('version').notNull(),
    z: smallint('z').notNull(),
    x: integer('x').notNull(),
    y: integer('y').notNull(),
    bytes: bytea('bytes').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.layer, t.version, t.z, t.x, t.y] })],
);
