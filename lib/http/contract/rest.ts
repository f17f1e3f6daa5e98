import { z } from 'zod';
import { WEATHER_VARIABLES } from '../../weather/variable.ts';
import { finding, isoDate, nullableNumber as n, role, scope, unitSystem } from './common.ts';
import { plantingPractice } from './practice.ts';

export const districtRequest = z
  .strictObject({
    code: z
      .string()
      .regex(/^[a-z0-9-]{2,40}$/)
      .optional(),
    name: z.string().min(2).max(120),
    time_zone: z.string(),
    units: unitSystem.default('metric'),
    week_start: z.number().int().min(1).max(7).default(1),
    water_year_start_month: z.number().int().min(1).max(12).default(10),
    boundary: z.unknown().optional(),
    default_elevation_m: z.number().min(-430).max(6000).default(0),
    radiation_coefficient: z.number().min(0.1).max(0.25).default(0.16),
    manager: z.strictObject({ name: z.string().min(1), email: z.email(), password: z.string().min(10).max(200) }).optional(),
  })
  .meta({ id: 'DistrictRequest' });
export const districtAnswer = z
  .object({
    id: z.string(),
    code: z.string(),
    name: z.string(),
    time_zone: z.string(),
    units: unitSystem,
    week_start: z.number().int(),
    water_year_start_month: z.number().int(),
    invented: z.boolean(),
    boundary: z.unknown().nullable(),
    default_elevation_m: z.number(),
    radiation_coefficient: z.number(),
    geometry_version: z.number().int(),
    seasons: z.array(z.object({ code: z.string(), name: z.string(), start_date: isoDate, end_date: isoDate })),
    counts: z.object({ parcels: z.number().int(), reaches: z.number().int(), sites: z.number().int(), plantings: z.number().int() }),
  })
  .meta({ id: 'District' });
export type DistrictAnswer = z.infer<typeof districtAnswer>;
export const seasonRequest = z
  .strictObject({
    code: z
      .string()
      .max(40)
      .regex(/^[^\s/\\?#%](?:[^/\\?#%]*[^\s/\\?#%])?$/u, 'neither begins nor ends with a blank, and holds no / \\ ? # or %'),
    name: z.string().optional(),
    start_date: isoDate,
    end_date: isoDate,
  })
  .meta({ id: 'SeasonRequest' });

export const seasonAnswer = z.object({ code: z.string(), name: z.string(), start_date: isoDate, end_date: isoDate }).meta({ id: 'Season' });
export type SeasonAnswer = z.infer<typeof seasonAnswer>;

/** Settings that may change after the district was made. */
export const districtPatch = z
  .strictObject({
    name: z.string().min(2).max(120),
    time_zone: z.string(),
    units: unitSystem,
    week_start: z.number().int().min(1).max(7),
    water_year_start_month: z.number().int().min(1).max(12),
    boundary: z.unknown(),
    default_elevation_m: z.number().min(-430).max(6000),
    radiation_coefficient: z.number().min(0.1).max(0.25),
  })
  .partial()
  .meta({ id: 'DistrictPatch' });
export type DistrictPatch = z.infer<typeof districtPatch>;
export const districtSummary = z
  .object({ id: z.string(), code: z.string(), name: z.string(), role, invented: z.boolean() })
  .meta({ id: 'DistrictSummary' });
export type DistrictSummary = z.infer<typeof districtSummary>;

export const importKind = z.enum([
  'weather',
  'stations',
  'parcels',
  'canals',
  'turnouts',
  'areas',
  'soils',
  'soil-areas',
  'plantings',
  'images',
  'deliveries',
  'measurements',
]);
export const importAnswer = z
  .object({
    id: z.string(),
    kind: importKind,
    state: z.enum(['reading', 'ready', 'applying', 'applied', 'undoing', 'undone', 'cancelled', 'failed']),
    progress: z.number(),
    files: z.array(z.object({ name: z.string(), size_bytes: z.number().int(), sha256: z.string() })),
    options: z.record(z.string(), z.unknown()),
    /** lib/files Understood */
    understood: z.record(z.string(), z.unknown()).nullable(),
    findings: z.array(finding),
    finding_counts: z.object({ error: z.number().int(), warning: z.number().int(), note: z.number().int() }),
    /** lib/files Preview: only on the single-import answer */
    preview: z.unknown().optional(),
    error: z.string().nullable(),
    created_at: z.string(),
    applied_at: z.string().nullable(),
    undone_at: z.string().nullable(),
    created_by: z.string().nullable(),
  })
  .meta({ id: 'Import' });
export type ImportAnswer = z.infer<typeof importAnswer>;

export const siteAnswer = z
  .object({
    code: z.string(),
    name: z.string(),
    source: z.string(),
    longitude: z.number(),
    latitude: z.number(),
    elevation_m: n,
    wind_height_m: n,
    first_day: isoDate.nullable(),
    last_day: isoDate.nullable(),
    day_count: z.number().int(),
    /** variable → days with a value */
    coverage_days: z.record(z.string(), z.number().int()),
  })
  .meta({ id: 'Site' });
export type SiteAnswer = z.infer<typeof siteAnswer>;

export const siteDay = z
  .object({
    date: isoDate,
    /** raw observations, keys of WEATHER_VARIABLES; absent when the source has none */
    observed: z.record(z.string(), n),
    completed: z.object({
      air_temperature_max_c: n,
      air_temperature_min_c: n,
      vapour_pressure_kpa: n,
      solar_radiation_mj_m2_d: n,
      wind_speed_2m_m_s: n,
      precipitation_mm: n,
    }),
    /** variable → quality of an observed value that is not as measured: corrected, suspect, filled … */
    quality: z.record(z.string(), z.string()).meta({ description: 'observed values that are not as measured, and what they are' }),
    day_kind: z
      .enum(['observed', 'filled', 'forecast'])
      .meta({ description: 'observed; filled (values filled or estimated); forecast, where the source is one' }),
    fallbacks: z.array(z.string()),
    reference_et_fao56_short_mm: n,
    reference_et_asce2005_short_mm: n,
    reference_et_asce2005_tall_mm: n,
    reference_et_hargreaves_mm: n,
    reference_et_hourly_fao56_short_mm: n.meta({ description: 'sum of the hours; null without hours' }),
    reference_et_hourly_asce2005_short_mm: n.meta({ description: 'sum of the hours; null without hours' }),
    reference_et_hourly_asce2005_tall_mm: n.meta({ description: 'sum of the hours; null without hours' }),
    reference_et_given_mm: n.meta({ description: 'as the source gives it; null when it gives none' }),
    clear_sky_radiation_mj_m2_d: n,
    extraterrestrial_radiation_mj_m2_d: n,
    net_shortwave_mj_m2_d: n,
    net_longwave_mj_m2_d: n,
    net_radiation_mj_m2_d: n,
    soil_heat_flux_mj_m2_d: n,
    latent_heat_mj_m2_d: n,
    sensible_heat_mj_m2_d: n,
  })
  .meta({ id: 'SiteDay' });
export type SiteDay = z.infer<typeof siteDay>;

export const siteDaysAnswer = z
  .object({
    items: z.array(siteDay),
    first_day: isoDate.nullable().meta({ description: 'first day the site has, in this answer or not; null when it has none' }),
    last_day: isoDate.nullable().meta({ description: 'last day the site has, in this answer or not; null when it has none' }),
    truncated: z
      .boolean()
      .meta({ description: 'true: the question reaches over more days than are here; ask in parts, with `from` and `to`' }),
  })
  .meta({ id: 'SiteDays' });
export type SiteDaysAnswer = z.infer<typeof siteDaysAnswer>;

const { observed: _observed, completed: completedShape, quality: _quality, ...siteDayNumbers } = siteDay.shape;
/** A site’s day as one flat row: what CSV holds. */
export const siteDayRow = z.object({
  ...siteDayNumbers,
  quality: z.string(),
  ...Object.fromEntries(Object.keys(WEATHER_VARIABLES).map((name) => [`observed_${name}`, n])),
  ...Object.fromEntries(Object.keys(completedShape.shape).map((name) => [`completed_${name}`, n])),
});

/** A day as one flat row, for tables. */
export function siteDayRowOf({ observed, completed, quality, ...rest }: SiteDay): Record<string, unknown> {
  const prefixed = (prefix: string, values: object) => Object.entries(values).map(([name, value]) => [`${prefix}_${name}`, value]);
  const told = Object.entries(quality).map(([name, what]) => `${name} ${what}`);
  return {
    ...rest,
    quality: told.join('; '),
    ...Object.fromEntries([...prefixed('observed', observed), ...prefixed('completed', completed)]),
  };
}

export const cropAnswer = z
  .object({
    code: z.string(),
    name: z.string(),
    group: z.string(),
    /** lib/season Crop */
    definition: z.record(z.string(), z.unknown()),
    sources: z.record(z.string(), z.string()),
    notes: z.string().nullable(),
    calendars: z.array(
      z.object({
        code: z.string(),
        name: z.string(),
        planting_day: z.string().nullable(),
        definition: z.record(z.string(), z.unknown()),
        source: z.string(),
      }),
    ),
    planting_count: z.number().int(),
  })
  .meta({ id: 'Crop' });
export type CropAnswer = z.infer<typeof cropAnswer>;
export const soilAnswer = z
  .object({
    code: z.string(),
    name: z.string(),
    field_capacity_m3_m3: z.number(),
    wilting_point_m3_m3: z.number(),
    evaporation_depth_m: z.number(),
    readily_evaporable_water_mm: z.number(),
    total_evaporable_water_mm: z.number(),
    curve_number: n,
    root_limit_m: n,
    saturation_m3_m3: n,
    texture: z.enum(['coarse', 'medium', 'fine']).meta({ description: 'shifts the depletion fraction; medium unless told' }),
    percolation_mm_d: n.meta({ description: 'seepage and percolation under ponded water' }),
    capillary: z
      .object({ conductivity_mm_d: z.number(), bubbling_head_m: z.number(), exponent: z.number() })
      .nullable()
      .meta({ description: 'how the soil lifts water from a water table' }),
    layers: z
      .array(z.object({ top_m: z.number(), bottom_m: z.number(), field_capacity_m3_m3: z.number(), wilting_point_m3_m3: z.number() }))
      .meta({ description: 'from the surface down; none: one layer of the values above' }),
    source: z.string(),
  })
  .meta({ id: 'Soil' });
export type SoilAnswer = z.infer<typeof soilAnswer>;
export const methodAnswer = z
  .object({
    code: z.string(),
    name: z.string(),
    efficiency: z.number(),
    wetted_fraction: z.number(),
    under_canopy: z.boolean(),
    maximum_daily_depth_mm: z.number(),
    trigger_fraction: z.number(),
    minimum_depth_mm: n.meta({ description: 'least net depth worth an application' }),
    flow_l_s_ha: n.meta({ description: 'flow of the system over the field; bounds the gross depth of a day' }),
    efficiency_by_depth: z.array(z.object({ depth_mm: z.number(), efficiency: z.number() })),
    source: z.string(),
  })
  .meta({ id: 'ApplicationMethod' });
export type MethodAnswer = z.infer<typeof methodAnswer>;

export const canalAnswer = z
  .object({
    reach: z.string(),
    name: z.string(),
    parent: z.string().nullable(),
    level: z.number().int().meta({ description: '0 at the headworks' }),
    kind: z.string(),
    length_km: z.number(),
    capacity_m3_s: n,
    loss_rule: z.record(z.string(), z.unknown()),
    turnout_count: z.number().int(),
    parcel_count: z.number().int(),
  })
  .meta({ id: 'Canal' });
export type CanalAnswer = z.infer<typeof canalAnswer>;

export const parcelAnswer = z
  .object({
    code: z.string(),
    name: z.string().nullable(),
    turnout: z.string().nullable(),
    reach: z.string().nullable(),
    soil: z.string().nullable(),
    soil_shares: z
      .array(z.object({ soil: z.string(), share: z.number() }))
      .nullable()
      .meta({ description: 'soil classes under the parcel by area, from the soil polygons; a code in `soil` goes before them' }),
    method: z.string().nullable(),
    area_ha: z.number(),
    elevation_m: n,
    longitude: z.number(),
    latitude: z.number(),
    crops: z.array(z.string()),
  })
  .meta({ id: 'Parcel' });
export type ParcelAnswer = z.infer<typeof parcelAnswer>;

export const plantingAnswer = z
  .object({
    parcel: z.string(),
    season: z.string(),
    crop: z.string(),
    calendar: z.string(),
    planting_date: isoDate,
    harvest_date: isoDate.nullable(),
    cut_dates: z.array(isoDate),
    area_share: z.number(),
    practice: plantingPractice,
  })
  .meta({ id: 'Planting' });

export const tokenRequest = z
  .strictObject({ name: z.string().min(1).max(80), scope, expires_in_days: z.number().int().min(1).max(3650).default(365) })
  .meta({ id: 'TokenRequest' });
export const tokenAnswer = z
  .object({
    id: z.string(),
    name: z.string(),
    prefix: z.string(),
    scope,
    expires_at: z.string().nullable(),
    last_used_at: z.string().nullable(),
    created_at: z.string(),
    token: z.string().optional().meta({ description: 'only in the answer that made it; never shown again' }),
  })
  .meta({ id: 'Token' });
export type TokenAnswer = z.infer<typeof tokenAnswer>;

export const memberRequest = z
  .strictObject({
    email: z.email(),
    role,
    parcels: z.array(z.string()).max(2000).default([]).meta({ description: 'codes of the parcels a grower may see' }),
    name: z.string().min(1).max(120).optional(),
    password: z.string().min(10).max(200).optional().meta({ description: 'for a person who is new here; at least 10 characters' }),
  })
  .meta({ id: 'MemberRequest' });
export const memberAnswer = z
  .object({ user_id: z.string(), name: z.string(), email: z.string(), role, parcels: z.array(z.string()) })
  .meta({ id: 'Member' });
export type MemberAnswer = z.infer<typeof memberAnswer>;
export type DistrictRequest = z.infer<typeof districtRequest>;
export type SeasonRequest = z.infer<typeof seasonRequest>;
export type MemberRequest = z.infer<typeof memberRequest>;
export type TokenRequest = z.infer<typeof tokenRequest>;
export type PlantingAnswer = z.infer<typeof plantingAnswer>;
