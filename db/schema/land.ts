import { boolean, date, doublePrecision, index, integer, jsonb, pgTable, primaryKey, text, timestamp, uuid } from 'drizzle-orm/pg-core';
import type { ApplicationMethod, Planting, Soil } from '../../lib/season/types.ts';
import { district } from './district.ts';

type SoilProfile = Pick<Soil, 'layers' | 'saturation' | 'texture' | 'percolationRate' | 'capillary'>;
type MethodSystem = Pick<ApplicationMethod, 'minimumDepth' | 'flow' | 'efficiencyByDepth'>;
type PlantingPractice = Pick<Planting, 'irrigation' | 'mulch' | 'canopy' | 'preIrrigation' | 'germination'>;

const owner = () =>
  uuid('district_id')
    .notNull()
    .references(() => district.districtId, { onDelete: 'cascade' });

/** A stretch of canal in the conveyance tree. The head reach has no parent. */
export const reach = pgTable(
  'reach',
  {
    districtId: owner(),
    code: text('code').notNull(),
    name: text('name').notNull(),
    parentCode: text('parent_code'),
    kind: text('kind').notNull().default('lateral'),
    capacity: doublePrecision('capacity_m3_s'),
    /** lib/canal LossRule as JSON */
    lossRule: jsonb('loss_rule').notNull(),
    /** along the line, on the ellipsoid */
    length: doublePrecision('length_m').notNull(),
    /** GeoJSON LineString or MultiLineString, drawn head to tail, WGS 84 */
    geometry: jsonb('geometry').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.code] })],
);

/** A point of delivery on a reach. */
export const turnout = pgTable(
  'turnout',
  {
    districtId: owner(),
    code: text('code').notNull(),
    reachCode: text('reach_code').notNull(),
    capacity: doublePrecision('capacity_m3_s'),
    /** place on the ground, where it is known */
    longitude: doublePrecision('longitude'),
    latitude: doublePrecision('latitude'),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.code] }), index('turnout_reach').on(t.districtId, t.reachCode)],
);

/** A parcel of irrigated land. `ordinal` is its place in map arrays and run results; it never changes while the parcel lives. */
export const parcel = pgTable(
  'parcel',
  {
    districtId: owner(),
    code: text('code').notNull(),
    ordinal: integer('ordinal').notNull(),
    name: text('name'),
    turnoutCode: text('turnout_code'),
    reachCode: text('reach_code'),
    soilCode: text('soil_code'),
    methodCode: text('method_code'),
    /** m², on the WGS 84 ellipsoid */
    area: doublePrecision('area_m2').notNull(),
    elevation: doublePrecision('elevation_m'),
    longitude: doublePrecision('longitude').notNull(),
    latitude: doublePrecision('latitude').notNull(),
    west: doublePrecision('west').notNull(),
    south: doublePrecision('south').notNull(),
    east: doublePrecision('east').notNull(),
    north: doublePrecision('north').notNull(),
    /** GeoJSON Polygon or MultiPolygon, WGS 84 */
    geometry: jsonb('geometry').notNull(),
    /** columns of the file that we do not use, kept as they came */
    attributes: jsonb('attributes').notNull().default({}),
    /** soil classes under the parcel by area, largest first, from the soil polygons; null where none lie under it */
    soilShares: jsonb('soil_shares').$type<{ readonly soil: string; readonly share: number }[] | null>(),
  },
  (t) => [
    primaryKey({ columns: [t.districtId, t.code] }),
    index('parcel_ordinal').on(t.districtId, t.ordinal),
    index('parcel_box').on(t.districtId, t.west, t.east, t.south, t.north),
  ],
);

export const soil = pgTable(
  'soil',
  {
    districtId: owner(),
    code: text('code').notNull(),
    name: text('name').notNull(),
    fieldCapacity: doublePrecision('field_capacity_m3_m3').notNull(),
    wiltingPoint: doublePrecision('wilting_point_m3_m3').notNull(),
    evaporationDepth: doublePrecision('evaporation_depth_m').notNull().default(0.1),
    readilyEvaporableWater: doublePrecision('readily_evaporable_water_mm').notNull(),
    totalEvaporableWater: doublePrecision('total_evaporable_water_mm').notNull(),
    curveNumber: doublePrecision('curve_number'),
    rootLimit: doublePrecision('root_limit_m'),
    /** layers, saturation, texture, percolation rate, capillary properties: the optional members of lib/season Soil */
    profile: jsonb('profile').notNull().$type<SoilProfile>().default({}),
    source: text('source').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.code] })],
);

export const applicationMethod = pgTable(
  'application_method',
  {
    districtId: owner(),
    code: text('code').notNull(),
    name: text('name').notNull(),
    efficiency: doublePrecision('efficiency').notNull(),
    wettedFraction: doublePrecision('wetted_fraction').notNull(),
    underCanopy: boolean('under_canopy').notNull().default(false),
    maximumDailyDepth: doublePrecision('maximum_daily_depth_mm').notNull(),
    triggerFraction: doublePrecision('trigger_fraction').notNull(),
    /** limits of the system and efficiency by depth: the optional members of lib/season ApplicationMethod */
    system: jsonb('system').notNull().$type<MethodSystem>().default({}),
    source: text('source').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.code] })],
);

/** Crop library of the district. `definition` is a lib/season Crop; `sources` names the source of each value. */
export const crop = pgTable(
  'crop',
  {
    districtId: owner(),
    code: text('code').notNull(),
    name: text('name').notNull(),
    group: text('crop_group').notNull(),
    definition: jsonb('definition').notNull(),
    sources: jsonb('sources').notNull().default({}),
    notes: text('notes'),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.code] })],
);

/** Stored crop calendar: stage lengths, with a customary planting day for plantings that bring none. */
export const cropCalendar = pgTable(
  'crop_calendar',
  {
    districtId: owner(),
    code: text('code').notNull(),
    cropCode: text('crop_code').notNull(),
    name: text('name').notNull(),
    /** MM-DD */
    plantingDay: text('planting_day'),
    /** days, per stage; lib/season CropCalendar */
    definition: jsonb('definition').notNull(),
    source: text('source').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.code] })],
);

export const season = pgTable(
  'season',
  {
    districtId: owner(),
    code: text('code').notNull(),
    name: text('name').notNull(),
    startDate: date('start_date').notNull(),
    endDate: date('end_date').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.code] })],
);

export const planting = pgTable(
  'planting',
  {
    districtId: owner(),
    parcelCode: text('parcel_code').notNull(),
    seasonCode: text('season_code').notNull(),
    /** order within the parcel and season, from 1 */
    sequence: integer('sequence').notNull(),
    cropCode: text('crop_code').notNull(),
    calendarCode: text('calendar_code').notNull(),
    plantingDate: date('planting_date').notNull(),
    harvestDate: date('harvest_date'),
    cutDates: jsonb('cut_dates').notNull().$type<string[]>().default([]),
    areaShare: doublePrecision('area_share').notNull().default(1),
    /** irrigation rule, mulch, canopy, pre-irrigation, germination: the optional members of lib/season Planting */
    practice: jsonb('practice').notNull().$type<PlantingPractice>().default({}),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.seasonCode, t.parcelCode, t.sequence] })],
);

/** Water put on a parcel on a day, as the district recorded it: volume at the turnout or field edge, gross. */
export const delivery = pgTable(
  'delivery',
  {
    districtId: owner(),
    parcelCode: text('parcel_code').notNull(),
    date: date('date').notNull(),
    volume: doublePrecision('volume_m3').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.parcelCode, t.date] })],
);

export type FieldQuantity =
  | 'water_content_m3_m3'
  | 'root_zone_depletion_mm'
  | 'water_table_depth_m'
  | 'soil_salinity_ds_m'
  | 'water_salinity_ds_m'
  | 'efficiency';

/** Something measured, or given, at a parcel on a day. `depth` is the lower edge of the soil it holds for [m], 0 where depth means nothing. */
export const fieldMeasurement = pgTable(
  'field_measurement',
  {
    districtId: owner(),
    parcelCode: text('parcel_code').notNull(),
    date: date('date').notNull(),
    quantity: text('quantity').notNull().$type<FieldQuantity>(),
    depth: doublePrecision('depth_m').notNull().default(0),
    value: doublePrecision('value').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.parcelCode, t.date, t.quantity, t.depth] })],
);

/** Mean of an image over a parcel on a day: a vegetation index, or the fraction of the ground covered. */
export const imageMean = pgTable(
  'image_mean',
  {
    districtId: owner(),
    parcelCode: text('parcel_code').notNull(),
    date: date('date').notNull(),
    quantity: text('quantity').notNull().$type<'vegetation_index' | 'fraction_covered'>(),
    value: doublePrecision('value').notNull(),
    /** share of the parcel's area that the image saw without cloud, 0–1 */
    seenShare: doublePrecision('seen_share').notNull(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.parcelCode, t.date, t.quantity] })],
);

/** Foreign crop codes of a file, and the crop of ours each stands for. Kept, so that the next file is mapped already. */
export const cropMapping = pgTable(
  'crop_mapping',
  {
    districtId: owner(),
    foreignCode: text('foreign_code').notNull(),
    cropCode: text('crop_code'),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.foreignCode] })],
);

/** The land of a service area: what a turnout, a reach or a company serves. */
export const serviceArea = pgTable(
  'service_area',
  {
    districtId: owner(),
    code: text('code').notNull(),
    name: text('name').notNull(),
    reachCode: text('reach_code'),
    turnoutCode: text('turnout_code'),
    /** m², on the WGS 84 ellipsoid */
    area: doublePrecision('area_m2').notNull(),
    west: doublePrecision('west').notNull(),
    south: doublePrecision('south').notNull(),
    east: doublePrecision('east').notNull(),
    north: doublePrecision('north').notNull(),
    geometry: jsonb('geometry').notNull(),
    attributes: jsonb('attributes').notNull().default({}),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.code] })],
);

/** A polygon of a soil map. */
export const soilArea = pgTable(
  'soil_area',
  {
    districtId: owner(),
    /** code of the polygon in its map */
    code: text('code').notNull(),
    soilCode: text('soil_code').notNull(),
    west: doublePrecision('west').notNull(),
    south: doublePrecision('south').notNull(),
    east: doublePrecision('east').notNull(),
    north: doublePrecision('north').notNull(),
    geometry: jsonb('geometry').notNull(),
    attributes: jsonb('attributes').notNull().default({}),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.code] }), index('soil_area_box').on(t.districtId, t.west, t.east, t.south, t.north)],
);

/** A parcel as it stood until an import reshaped, split, merged or ended it. */
export const parcelHistory = pgTable(
  'parcel_history',
  {
    districtId: owner(),
    historyId: uuid('history_id').notNull().defaultRandom(),
    parcelCode: text('parcel_code').notNull(),
    change: text('change').notNull().$type<'reshaped' | 'split' | 'merged' | 'vanished'>(),
    /** codes of the parcels that stand on its ground since, with the share of its area each has */
    successors: jsonb('successors').notNull().$type<{ readonly code: string; readonly share: number }[]>().default([]),
    /** last day on which it stood, as the import said; null when it did not say */
    validTo: date('valid_to'),
    /** geometry version up to which it was drawn */
    geometryVersion: integer('geometry_version').notNull(),
    /** the whole row as it was */
    row: jsonb('row').notNull(),
    importId: uuid('import_id'),
    createdAt: timestamp('created_at', { withTimezone: true }).notNull().defaultNow(),
  },
  (t) => [primaryKey({ columns: [t.districtId, t.historyId] }), index('parcel_history_code').on(t.districtId, t.parcelCode)],
);
