/** How sure the numbers of a run are. */
import { z } from 'zod';
import { isoDate, nullableNumber as n } from './common.ts';

const parts = z.object({
  shared: z.number().meta({ description: 'coefficient of variation of the error that the class shares' }),
  own: z.number().meta({ description: 'of the error of each parcel alone' }),
});

const weatherError = z.object({
  deviation: z.number().meta({ description: 'coefficient of variation of daily reference ET' }),
  persistence: z.number().meta({ description: 'correlation with the error of the day before, 0–1' }),
  from: z.string().meta({ description: 'what it was told from' }),
});

/** Where the band of a run stands and what it rests on. */
export const bandState = z
  .object({
    state: z.enum(['waiting', 'running', 'done', 'failed', 'cancelled']),
    members: z.number().int(),
    seed: z.number().int(),
    progress: z.number(),
    error: z.string().nullable(),
    seconds: n,
    weather_error: z
      .object({ observed: weatherError, ahead: weatherError.extend({ days: z.number().int() }).nullable() })
      .nullable()
      .meta({ description: 'shared by all parcels of a day; null until it is told' }),
    field_errors: z
      .object({ coefficient: parts, efficiency: parts, available: parts })
      .meta({ description: 'shared within a crop, an application method, a soil class' }),
  })
  .meta({ id: 'BandState' });
export type BandStateAnswer = z.infer<typeof bandState>;

/** P10, P50 and P90 of one place and period. Depths are over a parcel’s area; reaches and the district have volumes alone. */
export const bandRow = z
  .object({
    place: z.string().meta({ description: 'code of the parcel or reach, or of the district' }),
    start: isoDate,
    end: isoDate,
    p10_mm: n,
    p50_mm: n,
    p90_mm: n,
    p10_m3: n,
    p50_m3: n,
    p90_m3: n,
  })
  .meta({ id: 'BandRow' });
export type BandRow = z.infer<typeof bandRow>;

export const bandLevel = z.enum(['parcel', 'reach', 'district']);
export const bandPeriod = z.enum(['week', 'month', 'season']);
export const bandVariable = z.enum([
  'gross_requirement',
  'net_requirement',
  'adjusted_crop_et',
  'head_inflow',
  'gross_volume',
  'net_volume',
  'adjusted_crop_et_volume',
]);

export const bandAnswer = z
  .object({
    run: z.string(),
    level: bandLevel,
    variable: bandVariable,
    period: bandPeriod,
    band: bandState.nullable().meta({ description: 'null where the run was not asked for one' }),
    items: z.array(bandRow).meta({ description: 'empty until the band is done' }),
    next_cursor: z.string().nullable(),
  })
  .meta({ id: 'Band' });
export type BandAnswer = z.infer<typeof bandAnswer>;
