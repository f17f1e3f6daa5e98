/** How a planting is watered and covered. */
import { z } from 'zod';
import { nullableNumber as n } from './common.ts';

const shares = z.object({
  trigger: z.number().meta({ description: 'share of readily available water at which an irrigation starts' }),
  refill: z.number().meta({ description: 'share of the depletion that an irrigation takes away' }),
});

/** How a planting is watered and covered; null where nothing was said of it. */
export const plantingPractice = z
  .object({
    irrigation: z
      .object({
        kind: z.enum(['depletion', 'interval', 'fixed-depth', 'daily', 'deficit', 'none']),
        trigger: n,
        refill: n,
        interval_d: n,
        depth_mm: n,
        stages: z.object({ initial: shares, development: shares, mid: shares, late: shares }).nullable(),
      })
      .nullable(),
    mulch: z.object({ kind: z.enum(['plastic', 'organic']), cover: z.number() }).nullable(),
    canopy: z.object({ cover: z.number(), height_m: z.number(), ground_basal: n, stomatal_factor: n }).nullable(),
    pre_irrigation: z.object({ days_before: z.number().int(), depth_mm: n }).nullable(),
    germination: z.array(z.object({ days_after: z.number().int(), depth_mm: z.number() })),
  })
  .meta({ id: 'PlantingPractice' });
/** The same in columns of a table, under the names that an import of plantings takes; null where nothing was said. */
export const practiceColumns = z.object({
  irrigation_rule: z.string().nullable(),
  irrigation_trigger: n,
  irrigation_refill: n,
  irrigation_interval_d: n,
  irrigation_depth_mm: n,
  trigger_initial: n,
  refill_initial: n,
  trigger_development: n,
  refill_development: n,
  trigger_mid: n,
  refill_mid: n,
  trigger_late: n,
  refill_late: n,
  mulch: z.string().nullable(),
  mulch_cover: n,
  canopy_cover: n,
  canopy_height_m: n,
  pre_irrigation_days: n,
  pre_irrigation_depth_mm: n,
  germination: z.string().nullable().meta({ description: 'days after planting and net mm with a colon between, divided by semicolons' }),
});

export type PlantingPracticeAnswer = z.infer<typeof plantingPractice>;
