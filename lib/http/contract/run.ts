import { z } from 'zod';
import { DEFAULT_RUN_SETTINGS as usual } from '../../jobs/run-settings.ts';
import { DAY_KINDS } from '../../weather/day-kind.ts';
import { bandState } from './band.ts';
import { isoDate, nullableNumber as n, workingStep } from './common.ts';
import { plantingPractice } from './practice.ts';

export const dayKindName = z.enum(DAY_KINDS).meta({
  description:
    'what the day rests on: observed; filled (values filled or estimated); and past the last observation forecast, analogue (days of the analogue year) or normal (of the day)',
});

export const runSettings = z
  .strictObject({
    method: z.enum(['fao56', 'asce2005']).default(usual.method).meta({ description: 'combination equation, short surface' }),
    interpolation: z.enum(['automatic', 'nearest', 'inverse-distance', 'bilinear', 'kriging']).default(usual.interpolation).meta({
      description:
        'how weather is carried from sites to parcels; automatic takes per variable the method and trend with the lowest leave-one-out error of the stations, and bilinear on a grid; bilinear is for grids; left out for a grid source: bilinear',
    }),
    elevation_trend: z.enum(['lapse-rate', 'fitted', 'none']).default(usual.elevation_trend).meta({
      description:
        'how a value is moved to the elevation of the parcel: temperature by the lapse rate, every variable but rain by the slope its sites show, or not at all; automatic interpolation chooses it too',
    }),
    power: z.number().min(0.5).max(6).default(usual.power),
    maximum_sites: z.number().int().min(1).max(8).default(usual.maximum_sites),
    reference_et: z.enum(['automatic', 'at-parcels', 'at-sites', 'given', 'hourly-sum']).default(usual.reference_et).meta({
      description:
        'where the reference ET comes from: computed at the parcels or at the sites, as given by the source, or the sum over the hours; automatic is at the parcels for stations, at the cells of a grid, and as given for a source without air temperature',
    }),
    fill_gaps: z.boolean().default(usual.fill_gaps).meta({
      description:
        'gaps of a site are filled from neighbouring sites by regression, from other sources and from normals, before what is left is estimated',
    }),
    lapse_rate_c_per_m: z.number().min(0).max(0.012).default(usual.lapse_rate_c_per_m),
    initial_depletion: z
      .number()
      .min(0)
      .max(1)
      .default(usual.initial_depletion)
      .meta({ description: 'root-zone depletion on the first day, fraction of TAW' }),
    initial_state: z.enum(['fraction', 'measured', 'carry-over', 'spin-up']).default(usual.initial_state).meta({
      description:
        'soil water on the first morning: at initial_depletion, as measured at the parcel (else at initial_depletion), as the standing run of the season before left it, or after spin_up_days stepped before the season',
    }),
    spin_up_days: z.number().int().min(30).max(400).default(usual.spin_up_days),
    coefficient: z
      .enum(['dual', 'single'])
      .default(usual.coefficient)
      .meta({ description: 'crop coefficient approach of FAO-56: chapter 7, or chapter 6' }),
    irrigate: z.boolean().default(usual.irrigate),
    water: z.enum(['rule', 'recorded', 'recorded-then-rule']).default(usual.water).meta({
      description:
        'irrigation as the rule of each planting asks, as the deliveries recorded, or as recorded to date and by the rule from then on',
    }),
    runoff: z.boolean().default(usual.runoff),
    antecedent_moisture: z.enum(['average', 'five-day-rain', 'surface-layer']).default(usual.antecedent_moisture).meta({
      description: 'how the curve number follows the wetness of the ground',
    }),
    snow: z.boolean().default(usual.snow).meta({ description: 'precipitation of cold days is kept as snow and melts by degree-days' }),
    frozen_ground: z.boolean().default(usual.frozen_ground),
    capillary_rise: z.boolean().default(usual.capillary_rise),
    salinity: z.enum(['off', 'stress', 'stress-and-leaching']).default(usual.salinity),
    water_salinity_ds_m: z.number().min(0).max(20).default(usual.water_salinity_ds_m),
    fallow: z.enum(['bare', 'weeds']).default(usual.fallow).meta({ description: 'what stands on ground between plantings' }),
    observed_cover: z.boolean().default(usual.observed_cover).meta({
      description: 'vegetation index or cover from images replaces the basal curve where a parcel has any',
    }),
    ahead: z.enum(['refuse', 'normal', 'analogue']).default(usual.ahead).meta({
      description:
        'days past the last observation: refused, or by the forecast and after it the normal of the day, or the days of an analogue year',
    }),
    analogue_year: z.number().int().min(1900).max(2200).nullable().default(usual.analogue_year),
    forecast_source: z.string().nullable().default(usual.forecast_source),
    band_members: z
      .number()
      .int()
      .min(0)
      .max(500)
      .refine((members) => members === 0 || members >= 20, 'takes 0, for no band, or 20 to 500')
      .default(usual.band_members)
      .meta({
        description: 'members of the ensemble behind P10, P50 and P90; 0 for no band',
      }),
    band_seed: z.number().int().min(0).max(2147483647).default(usual.band_seed),
    default_soil: z.string().default(usual.default_soil),
    default_method: z.string().default(usual.default_method),
    source: z
      .string()
      .nullable()
      .default(usual.source)
      .meta({ description: 'weather source by name; null takes all stations, or the first grid where there are none' }),
  })
  .meta({ id: 'RunSettings' });

/** Left out, the method follows from the kind of the source, so it has no default here. */
const requestedSettings = runSettings.partial().extend({ interpolation: runSettings.shape.interpolation.unwrap().optional() });
export const runRequest = z.strictObject({ season: z.string(), settings: requestedSettings.optional() }).meta({ id: 'RunRequest' });

/** What a run rests on past the last observation. */
const daysAhead = z.object({
  last_observed: isoDate.nullable().meta({ description: 'last day with an observation at any site of the run' }),
  first_ahead: isoDate.nullable().meta({ description: 'first day past it; null where every day has been observed' }),
  first_beyond_forecast: isoDate.nullable().meta({ description: 'first day that rests on normals or the analogue year' }),
  observed_days: z.number().int().meta({ description: 'days of the record, gaps filled' }),
  forecast_days: z.number().int(),
  analogue_days: z.number().int(),
  normal_days: z.number().int(),
  forecast: z
    .object({
      source: z.string(),
      issued: isoDate.nullable().meta({ description: 'day on which it was last brought in' }),
      first_day: isoDate,
      last_day: isoDate,
    })
    .nullable(),
  normals: z
    .object({
      years: z.number().int().meta({ description: 'years behind the normals' }),
      of: z.string().meta({ description: 'the first and last of them' }),
      window_days: z.number().int(),
      rain_year: z.number().int().nullable().meta({ description: 'year whose rain lies nearest to the median, taken as it fell' }),
    })
    .nullable(),
  analogue_year: z.number().int().nullable(),
});
export type DaysAhead = z.infer<typeof daysAhead>;

export const runAnswer = z
  .object({
    id: z.string(),
    season: z.string(),
    state: z.enum(['queued', 'running', 'done', 'failed', 'cancelled']),
    stage: z.string(),
    progress: z.number(),
    standing: z.boolean(),
    stale_since: z
      .string()
      .nullable()
      .meta({ description: 'since when an input has changed under this run; null while it stands on what the district has' }),
    stale_reason: z.string().nullable(),
    start_date: isoDate,
    end_date: isoDate,
    parcel_count: z.number().int(),
    settings: runSettings,
    manifest: z.record(z.string(), z.unknown()),
    balance: z.object({
      parcel_days: z.number().optional(),
      max_residual_mm: z.number().optional(),
      roll_up_relative: z.number().optional(),
      /** share of parcel-days on which any value of the weather was filled or estimated, 0–1 */
      estimated_share: z.number().optional(),
      /** share of parcel-days that rest on each fallback, 0–1 */
      fallback_shares: z.record(z.string(), z.number()).optional(),
      seconds: z.number().optional(),
    }),
    band: bandState.nullable().meta({ description: 'how sure the numbers are: where that stands; null where it was not asked for' }),
    days_ahead: daysAhead
      .nullable()
      .meta({ description: 'what the run rests on past the last observation; null for runs made before it was told' }),
    warnings: z.array(z.string()),
    error: z.string().nullable(),
    created_at: z.string(),
    started_at: z.string().nullable(),
    finished_at: z.string().nullable(),
  })
  .meta({ id: 'Run' });
export type RunAnswer = z.infer<typeof runAnswer>;

/** One parcel and period. Depths are over the parcel's area. */
export const parcelPeriod = z
  .object({
    parcel: z.string(),
    start: isoDate,
    end: isoDate,
    crops: z.string().meta({ description: 'names of the season’s crops on the parcel, joined by " + "' }),
    turnout: z.string().nullable(),
    reach: z.string().nullable(),
    area_ha: z.number(),
    reference_et_mm: n,
    crop_et_mm: n,
    adjusted_crop_et_mm: n,
    precipitation_mm: n,
    effective_precipitation_mm: n,
    net_requirement_mm: n,
    gross_requirement_mm: n,
    deep_percolation_mm: n,
    irrigation_percolation_mm: n,
    capillary_rise_mm: n,
    surface_runoff_mm: n,
    root_zone_depletion_mm: n.meta({ description: 'at the end of the period' }),
    total_available_water_mm: n,
    readily_available_water_mm: n,
    stress_coefficient: n.meta({ description: 'mean over the period' }),
    net_volume_m3: n,
    gross_volume_m3: n,
    observed_days: z.number().int().meta({ description: 'days of the period on which nothing was filled or estimated' }),
    filled_days: z.number().int().meta({ description: 'observed days with values filled or estimated' }),
    forecast_days: z.number().int(),
    analogue_days: z.number().int(),
    normal_days: z.number().int(),
    estimated_share: n.meta({ description: 'share of the days whose weather was filled or estimated, 0–1' }),
    fallbacks: z.array(z.string()).meta({ description: 'what was estimated in the weather behind this row' }),
  })
  .meta({ id: 'ParcelPeriod' });
export type ParcelPeriod = z.infer<typeof parcelPeriod>;

export const parcelDay = z
  .object({
    date: isoDate,
    day_kind: dayKindName,
    reference_et_mm: n,
    crop_et_mm: n,
    adjusted_crop_et_mm: n,
    evaporation_mm: n,
    precipitation_mm: n,
    surface_runoff_mm: n,
    effective_precipitation_mm: n,
    net_requirement_mm: n,
    gross_requirement_mm: n,
    deep_percolation_mm: n,
    root_zone_depletion_mm: n,
    total_available_water_mm: n,
    readily_available_water_mm: n,
    basal_crop_coefficient: n,
    stress_coefficient: n,
    irrigation_percolation_mm: n.meta({
      description: 'irrigation lost below the roots: leaching, seepage of ponded fields, more than the soil takes',
    }),
    capillary_rise_mm: n,
    snow_water_mm: n.meta({ description: 'snow on the ground at the end of the day, as water' }),
    ponded_water_mm: n.meta({ description: 'water above field capacity in a ponded field at the end of the day' }),
    soil_water_depletion_mm: n.meta({
      description:
        'of the whole parcel, to the deepest root of the season; closes the day with effective rain, net requirement and adjusted crop ET',
    }),
    gross_volume_m3: n,
    fallbacks: z.array(z.string()),
  })
  .meta({ id: 'ParcelDay' });
export type ParcelDay = z.infer<typeof parcelDay>;

export const parcelSeason = z
  .object({
    parcel: z.string(),
    name: z.string().nullable(),
    run: z.string(),
    season: z.string(),
    area_ha: z.number(),
    elevation_m: n,
    longitude: z.number(),
    latitude: z.number(),
    soil: z.object({
      code: z.string(),
      name: z.string(),
      field_capacity_m3_m3: z.number(),
      wilting_point_m3_m3: z.number(),
      layers: z
        .array(z.object({ top_m: z.number(), bottom_m: z.number(), field_capacity_m3_m3: z.number(), wilting_point_m3_m3: z.number() }))
        .meta({ description: 'from the surface down; none: one layer of the values above' }),
    }),
    method: z.object({ code: z.string(), name: z.string(), efficiency: z.number() }),
    turnout: z.string().nullable(),
    reach: z.string().nullable(),
    plantings: z.array(
      z.object({
        crop: z.string(),
        crop_name: z.string(),
        calendar: z.string(),
        planting_date: isoDate,
        harvest_date: isoDate.nullable(),
        cut_dates: z.array(isoDate),
        area_share: z.number(),
        practice: plantingPractice,
        stages: z
          .array(
            z.object({
              cycle: z.number().int(),
              stage: z.enum(['initial', 'development', 'mid', 'late']),
              start: isoDate,
              end: isoDate,
            }),
          )
          .meta({
            description: 'growth stages as the calendar and the weather of the parcel settled them; empty for a crop that never started',
          }),
      }),
    ),
    estimated_share: n.meta({ description: 'share of the days of the season whose weather was filled or estimated, 0–1' }),
    reference_et: z
      .enum(['at-parcels', 'given', 'hourly-sum', 'at-sites'])
      .meta({ description: 'where the reference ET was computed, or taken from' }),
    weights: z.array(
      z.object({
        site: z.string(),
        name: z.string(),
        weight: z.number().meta({ description: 'in every series that has no weights of its own' }),
        series_weights: z
          .record(z.string(), z.number())
          .meta({ description: 'weights of the series that have their own: reference_et, precipitation …' }),
        distance_km: z.number(),
        elevation_m: n,
      }),
    ),
    days: z.array(parcelDay),
  })
  .meta({ id: 'ParcelSeason' });
export type ParcelSeason = z.infer<typeof parcelSeason>;

export const workingAnswer = z
  .object({
    run: z.string(),
    parcel: z.string(),
    date: isoDate,
    inputs: z.array(
      z.object({
        site: z.string(),
        site_name: z.string(),
        weight: z.number(),
        series_weights: z
          .record(z.string(), z.number())
          .meta({ description: 'weights of the series that have their own, by the name of their value; the others go by `weight`' }),
        elevation_m: n,
        values: z.record(z.string(), n),
        fallbacks: z.array(z.string()),
      }),
    ),
    steps: z.array(workingStep),
    results: z.record(z.string(), n),
    stored: z.record(z.string(), n).meta({ description: 'the same variables as stored by the run' }),
  })
  .meta({ id: 'Working' });
export type WorkingAnswer = z.infer<typeof workingAnswer>;

export const reachPeriod = z
  .object({
    reach: z.string(),
    name: z.string(),
    parent: z.string().nullable(),
    level: z.number().int().meta({ description: '0 at the headworks' }),
    kind: z.string(),
    start: isoDate,
    end: isoDate,
    length_km: z.number(),
    turnout_demand_m3: n.meta({ description: 'taken by turnouts on this reach' }),
    demand_below_m3: n.meta({ description: 'taken by every turnout on this reach and below it' }),
    reach_loss_m3: n,
    loss_below_m3: n.meta({ description: 'lost in this reach and every reach below it' }),
    head_inflow_m3: n,
    mean_inflow_m3_s: n,
    peak_inflow_m3_s: n.meta({ description: 'greatest daily mean flow of the period' }),
    capacity_m3_s: n,
    busiest_week_inflow_m3_s: n.meta({
      description: 'mean inflow of the busiest seven days of the period (of the whole period when shorter)',
    }),
    capacity_share: n.meta({ description: 'busiest-week inflow over capacity: turns within a week level out single days' }),
    parcel_count: z.number().int(),
    area_ha: z.number(),
    estimated_share: n.meta({
      description: 'share of the days of the parcels on this reach and below whose weather was estimated, by area',
    }),
  })
  .meta({ id: 'ReachPeriod' });
export type ReachPeriod = z.infer<typeof reachPeriod>;

const total = z.object({
  code: z.string(),
  name: z.string(),
  parcel_count: z.number().int(),
  area_ha: z.number(),
  crop_et_mm: n,
  adjusted_crop_et_mm: n,
  precipitation_mm: n,
  effective_precipitation_mm: n,
  net_requirement_mm: n,
  gross_requirement_mm: n,
  net_volume_m3: n,
  gross_volume_m3: n,
  estimated_share: n.meta({ description: 'share of the parcel-days whose weather was filled or estimated, by area, 0–1' }),
});
export const summaryAnswer = z
  .object({
    run: z.string(),
    season: z.string(),
    start_date: isoDate,
    end_date: isoDate,
    district: total.extend({ reference_et_mm: n, headworks_inflow_m3: n, conveyance_loss_m3: n }),
    by_canal: z.array(total),
    by_crop: z.array(total),
    by_method: z.array(total),
    areas: z.array(total).meta({ description: 'by service area; parcels in none are left out' }),
    weeks: z.array(
      z.object({
        start: isoDate,
        end: isoDate,
        reference_et_mm: n,
        precipitation_mm: n,
        crop_et_mm: n,
        gross_volume_m3: n,
        headworks_inflow_m3: n,
        headworks_mean_m3_s: n,
        estimated_share: n,
      }),
    ),
  })
  .meta({ id: 'Summary' });
export type SummaryAnswer = z.infer<typeof summaryAnswer>;

/** One total of the summary as a flat row: what CSV holds. */
export const summaryRow = z.object({
  total_of: z.enum(['district', 'canal', 'crop', 'method', 'area']),
  ...total.shape,
  reference_et_mm: n,
  headworks_inflow_m3: n,
  conveyance_loss_m3: n,
});
export type SummaryTotal = z.infer<typeof total>;

/** The totals as flat rows, for tables. */
export function summaryRowsOf(summary: SummaryAnswer): Record<string, unknown>[] {
  const { district, by_canal, by_crop, by_method, areas } = summary;
  const rows = (of: string, totals: readonly object[]) => totals.map((total) => ({ total_of: of, ...total }));
  return [
    ...rows('district', [district]),
    ...rows('canal', by_canal),
    ...rows('crop', by_crop),
    ...rows('method', by_method),
    ...rows('area', areas),
  ];
}

/** Canal numbers for the map, [period][reach]. */
export const reachValues = z
  .object({
    reaches: z.array(z.string()),
    periods: z.array(z.object({ start: isoDate, end: isoDate })),
    mean_inflow_m3_s: z.array(z.array(n)),
    capacity_share: z.array(z.array(n)),
  })
  .meta({ id: 'ReachValues' });
export type ReachValues = z.infer<typeof reachValues>;

/** What the map offers, and how to read its binary arrays. */
export const mapDescription = z
  .object({
    run: z.string(),
    season: z.string(),
    geometry_version: z.number().int(),
    tiles: z.object({ parcels: z.string(), canals: z.string(), areas: z.string().nullable() }).meta({
      description: 'URL templates with {z}/{x}/{y}; parcels as they stood when the run was made; areas null where there are none',
    }),
    bounds: z.tuple([z.number(), z.number(), z.number(), z.number()]),
    variables: z.array(z.object({ id: z.string(), term: z.string(), unit: z.string(), aggregate: z.enum(['sum', 'end', 'mean']) })),
    periods: z.object({
      week: z.array(z.object({ start: isoDate, end: isoDate })),
      month: z.array(z.object({ start: isoDate, end: isoDate })),
    }),
    ahead: z
      .object({ from: isoDate, forecast_to: isoDate.nullable(), beyond: z.enum(['normal', 'analogue']) })
      .nullable()
      .meta({
        description: 'days past the last observation: from when, to which day by forecast, and by what after it; null where there are none',
      }),
    /** in map-array order; `ordinal` is the feature id (property `o`) in the tiles */
    parcels: z.object({
      ordinal: z.array(z.number().int()),
      code: z.array(z.string()),
      area_m2: z.array(z.number()),
      crops: z.array(z.string()),
      reach: z.array(z.string().nullable()),
    }),
    reaches: z.array(z.object({ ordinal: z.number().int(), code: z.string(), name: z.string(), capacity_m3_s: n })),
    sites: z.array(z.object({ code: z.string(), name: z.string(), longitude: z.number(), latitude: z.number(), elevation_m: n })),
    boundary: z.unknown().nullable(),
  })
  .meta({ id: 'MapDescription' });
export type MapDescription = z.infer<typeof mapDescription>;
export type RunRequest = z.infer<typeof runRequest>;
