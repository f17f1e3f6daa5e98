import {
  boolean,
  doublePrecision,
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

/** An irrigation district: the tenant. Every other table carries its id first in its key. */
export const district = pgTable('district', {
  districtId: uuid('district_id').primaryKey().defaultRandom(),
  code: text('code').notNull().unique(),
  name: text('name').notNull(),
  timeZone: text('time_zone').notNull(),
  units: text('units').notNull().$type<'metric' | 'us'>().default('metric'),
  /** ISO weekday on which the delivery week begins */
  weekStart: smallint('week_start').notNull().default(1),
  waterYearStartMonth: smallint('water_year_start_month').notNull().default(10),
  /** GeoJSON Polygon or MultiPolygon, WGS 84 */
  boundary: jsonb('boundary'),
  /** true for the demo: shown as invented on every page */
  invented: boolean('invented').notNull().default(false),
  /** elevation taken for a site or parcel that brings none [m] */
  defaultElevation: doublePrecision('default_elevation_m').notNull().default(0),
  /** kRs of FAO-56 Eq. 50: 0.16 interior, 0.19 coastal */
  radiationCoefficient: doublePrecision('radiation_coefficient').notNull().default(0.16),
  /** counts up whenever parcels or canals change: names the tiles */
  geometryVersion: integer('geometry_version').notNull().default(1),
  createdAt: timestamp('created_at', { withTimezone: true }).notNull().defaultNow(),
});

export const membership = pgTable(
  'membership',
  {
    districtId: uuid('district_id')
      .notNull()
      .references(() => district.districtId, { onDelete: 'cascade' }),
    userId: text('user_id').notNull(),
    role: text('role').notNull().$type<'manager' | 'operator' | 'regulator' | 'grower'>(),
    createdAt: timestamp('created_at', { withTimezone: true }).notNull().defaultNow(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.userId] })],
);

/** Parcels a grower may see. */
export const growerParcel = pgTable(
  'grower_parcel',
  {
    districtId: uuid('district_id')
      .notNull()
      .references(() => district.districtId, { onDelete: 'cascade' }),
    userId: text('user_id').notNull(),
    parcelCode: text('parcel_code').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.userId, t.parcelCode] })],
);

export const apiToken = pgTable(
  'api_token',
  {
    districtId: uuid('district_id')
      .notNull()
      .references(() => district.districtId, { onDelete: 'cascade' }),
    tokenId: uuid('token_id').notNull().defaultRandom(),
    name: text('name').notNull(),
    /** first characters, shown so that a token can be told from another */
    prefix: text('prefix').notNull(),
    /** SHA-256 of the token, hex */
    hash: text('hash').notNull(),
    scope: text('scope').notNull().$type<'read' | 'write' | 'administer'>(),
    expiresAt: timestamp('expires_at', { withTimezone: true }),
    lastUsedAt: timestamp('last_used_at', { withTimezone: true }),
    createdBy: text('created_by'),
    createdAt: timestamp('created_at', { withTimezone: true }).notNull().defaultNow(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.tokenId] }), unique('api_token_hash').on(t.hash)],
);
