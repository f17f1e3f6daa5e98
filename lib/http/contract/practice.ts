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
export type PlantingPracticeAnswer = z.infer<typeof plantingPractice>;
