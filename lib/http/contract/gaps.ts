/** Gaps in the weather record of sites, and how they are filled. */
import { z } from 'zod';
import { isoDate, nullableNumber as n } from './common.ts';

/** How a day of a series was got. */
export const recordMethod = z.enum([
  'measured',
  'corrected',
  'suspect',
  'neighbour',
  'source',
  'in-time',
  'normal',
  'estimated',
  'missing',
]);
export type RecordMethod = z.infer<typeof recordMethod>;

const regressionFigures = z.object({
  neighbour: z.string(),
  distance_km: n,
  common_days: z.number().int(),
  slope: n,
  intercept: n.meta({ description: 'in the unit of the variable' }),
  r2: n,
  accepted: z.boolean(),
  refused_because: z.string().nullable(),
  filled_days: z.number().int(),
});

const sourceFigures = z.object({
  source: z.string(),
  site: z.string(),
  distance_km: n,
  common_days: z.number().int(),
  by: z.enum(['difference', 'ratio']),
  adjustment: n.meta({ description: 'mean of site less other, in the unit of the variable, or site over other' }),
  filled_days: z.number().int(),
});

export const gapRow = z
  .object({
    site: z.string(),
    name: z.string(),
    variable: z.string(),
    term: z.string(),
    unit: z.string(),
    from: isoDate,
    to: isoDate,
    days: z.number().int(),
    from_neighbour_days: z.number().int(),
    from_source_days: z.number().int(),
    in_time_days: z.number().int(),
    from_normal_days: z.number().int(),
    left_days: z.number().int().meta({ description: 'left to the published estimates, or missing' }),
    best_neighbour: z.string().nullable().meta({ description: 'the neighbour with the best r² that was tried' }),
    r2: n,
    slope: n,
    intercept: n,
    common_days: z.number().int().nullable(),
    accepted: z.boolean().nullable(),
    neighbours: z.array(regressionFigures),
    sources: z.array(sourceFigures),
  })
  .meta({ id: 'WeatherGap' });
export type GapRow = z.infer<typeof gapRow>;

const seriesRecord = z.object({
  series: z.string(),
  term: z.string(),
  days: z.record(z.string(), z.number().int()).meta({ description: 'days by how they were got' }),
  estimated_share: n.meta({ description: 'share of the days that were filled, estimated or are missing, 0–1' }),
  spans: z.array(z.object({ from: isoDate, to: isoDate, method: recordMethod })),
});

export const siteRecord = z
  .object({ site: z.string(), name: z.string(), estimated_share: n, series: z.array(seriesRecord) })
  .meta({ id: 'SiteRecord' });
export type SiteRecord = z.infer<typeof siteRecord>;

export const gapsAnswer = z
  .object({
    source: z.string().nullable(),
    from: isoDate.nullable(),
    to: isoDate.nullable(),
    sources: z.array(z.object({ name: z.string(), kind: z.enum(['stations', 'grid']) })),
    limits: z.object({
      least_r2: z.number(),
      least_slope: z.number(),
      greatest_slope: z.number(),
      least_common_days: z.number().int(),
      longest_in_time_days: z.number().int(),
    }),
    sites: z.array(siteRecord),
    items: z.array(gapRow),
  })
  .meta({ id: 'WeatherGaps' });
export type GapsAnswer = z.infer<typeof gapsAnswer>;
