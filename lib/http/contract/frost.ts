/** Answers about frost nights: stations, plantings at risk, water for protection. Differences of temperature are in kelvin, which `units=us` leaves alone. */
import { z } from 'zod';
import { isoDate, nullableNumber as n, workingStep } from './common.ts';

export const FROST_RISKS = ['severe', 'damaging', 'possible', 'none'] as const;

export const frostStation = z
  .object({
    site: z.string(),
    name: z.string(),
    longitude: z.number(),
    latitude: z.number(),
    elevation_m: n,
    evening_from: z.enum(['hours', 'daily', 'given']).meta({
      description: 'the evening is that of the hour of sunset, an estimate from the day’s values, or as given with the request',
    }),
    sunset: z.string().meta({ description: 'standard clock of the station, HH:MM' }),
    sunrise: z.string().meta({ description: 'of the next morning, standard clock' }),
    night_length_h: n,
    air_temperature_c: n.meta({ description: 'at sunset' }),
    dew_point_c: n.meta({ description: 'at sunset, over water' }),
    wind_speed_2m_m_s: n.meta({ description: 'of the night' }),
    cloud_share: n.meta({ description: '0 clear … 1 overcast, by the radiation of the day' }),
    net_radiation_w_m2: n.meta({ description: 'at sunset; negative: the ground loses' }),
    square_root_minimum_c: n.meta({ description: 'by Brunt’s square-root law' }),
    regression_minimum_c: n.meta({ description: 'by the station’s own line; null without one' }),
    regression: z
      .object({
        air_temperature_factor: z.number(),
        dew_point_factor: z.number(),
        constant: z.number(),
        nights: z.number().int(),
        rmse_k: z.number(),
      })
      .nullable()
      .meta({
        description: 'Tmin = a T0 + b Td + c in °C, fitted to past nights of the same kind; rmse by leaving each night out in turn',
      }),
    square_root_nights: z.number().int().meta({ description: 'past nights of the same kind that the square-root law was held against' }),
    square_root_bias_k: n,
    square_root_rmse_k: n,
    night_kind: z.enum(['clear-calm', 'cloudy-or-windy']),
    method: z.enum(['brunt', 'regression']),
    minimum_c: n,
    minimum_low_c: n.meta({ description: 'one night in ten is colder' }),
    minimum_high_c: n.meta({ description: 'one night in ten stays warmer' }),
    error_k: n.meta({ description: 'root mean squared error of the method' }),
    error_from: z.enum(['record', 'assumed']),
    observed_minimum_c: n.meta({ description: 'measured next morning; null when it is not on record' }),
    start_air_temperature_c: n.meta({
      description: 'air temperature at which a wet surface stands at 0 °C: sprinkling starts and may stop',
    }),
    estimated: z.array(z.string()).meta({ description: 'what of the evening was estimated or filled' }),
  })
  .meta({ id: 'FrostStation' });
export type FrostStationAnswer = z.infer<typeof frostStation>;

export const frostRow = z
  .object({
    parcel: z.string(),
    name: z.string().nullable(),
    planting: z.number().int(),
    crop: z.string(),
    crop_name: z.string(),
    area_ha: z.number().meta({ description: 'of the planting' }),
    reach: z.string().nullable(),
    critical_table: z.string().nullable(),
    stage: z.string().nullable(),
    stage_name: z.string().nullable(),
    stage_from: z.enum(['chosen', 'thermal-time', 'dormant', 'unknown']),
    thermal_time_c_d: n.meta({ description: 'above 6.1 °C since 1 January (south of the equator 1 July)' }),
    minimum_c: n.meta({ description: 'lowest air temperature expected' }),
    minimum_low_c: n,
    minimum_high_c: n,
    leaf_minimum_c: n.meta({ description: 'of a dry leaf or bud open to the sky' }),
    leaf_minimum_low_c: n,
    critical_10_c: n.meta({ description: 'a tenth of the buds killed in 30 minutes' }),
    critical_90_c: n.meta({ description: 'nine tenths killed' }),
    risk: z.enum(FROST_RISKS).nullable().meta({
      description:
        'leaf at or below the 90 % temperature; below the 10 % temperature; only the low end of the band; none; null: dormant or not known',
    }),
    start_air_temperature_c: n,
    sprinkling_rate_mm_h: n.meta({
      description: 'null where there is no risk, or beyond the printed table (below −6 °C, wind above 2.5 m/s)',
    }),
    sprinkling_heat_w_m2: n,
    sprinkling_flow_l_s: n,
    sprinkling_flow_m3_h: n,
    sprinkling_hours_h: n,
    sprinkling_volume_m3: n,
  })
  .meta({ id: 'FrostPlanting' });
export type FrostRow = z.infer<typeof frostRow>;

const counts = z.object({ severe: z.number(), damaging: z.number(), possible: z.number(), none: z.number(), unknown: z.number() });

export const frostAnswer = z
  .object({
    date: isoDate.meta({ description: 'evening' }),
    morning: isoDate,
    source: z.string(),
    source_role: z.enum(['observed', 'forecast']),
    evening: z.enum(['record', 'given']),
    sky: z.string(),
    ground: z.string(),
    stations: z.array(frostStation),
    counts: counts.meta({ description: 'plantings by risk; dormant ones count as unknown' }),
    area_at_risk_ha: z.number().meta({ description: 'severe, damaging or possible' }),
    sprinkling_flow_l_s: z.number().meta({ description: 'of every planting at risk with a rate, at once' }),
    sprinkling_volume_m3: z.number(),
    beyond_table: z.number().int().meta({ description: 'plantings at risk for which the printed rates do not hold' }),
    items: z.array(frostRow),
    next_cursor: z.string().nullable(),
    total: z.number().int(),
    cautions: z.array(z.string()),
  })
  .meta({ id: 'FrostNight' });
export type FrostAnswer = z.infer<typeof frostAnswer>;

export const frostWorkingAnswer = z
  .object({
    parcel: z.string(),
    planting: z.number().int(),
    date: isoDate,
    row: frostRow,
    steps: z.array(workingStep),
    cautions: z.array(z.string()),
  })
  .meta({ id: 'FrostWorking' });
export type FrostWorkingAnswer = z.infer<typeof frostWorkingAnswer>;

export const frozenNight = z
  .object({
    date: isoDate.meta({ description: 'evening' }),
    morning: isoDate,
    minimum_c: z.number().meta({ description: 'of the coldest station' }),
    site: z.string(),
    thermal_time_c_d: n,
    in_bud: z.boolean().meta({ description: 'by thermal time some fruit is past its first stage' }),
  })
  .meta({ id: 'FrozenNight' });
export type FrozenNightAnswer = z.infer<typeof frozenNight>;

export const frozenNights = z
  .object({ first: isoDate.nullable(), last: isoDate.nullable(), items: z.array(frozenNight) })
  .meta({ id: 'FrozenNights' });
export type FrozenNights = z.infer<typeof frozenNights>;

export const criticalRow = z
  .object({
    table: z.string(),
    table_name: z.string(),
    stage: z.string(),
    stage_name: z.string(),
    critical_10_c: z.number(),
    critical_90_c: z.number(),
    printed_10_fahrenheit: z.number(),
    printed_90_fahrenheit: z.number(),
    begins_thermal_time_c_d: z.number().meta({ description: 'rough; look at the buds' }),
    source: z.string(),
    stage_source: z.string(),
  })
  .meta({ id: 'CriticalTemperature' });
export type CriticalRow = z.infer<typeof criticalRow>;
