import { z } from 'zod';
import { isoDate, nullableNumber as n } from './common.ts';

/** One planting of a run: its stages as the weather settled them, its ET by stage, and what shortage of water costs it. */
export const plantingYieldRow = z
  .object({
    parcel: z.string(),
    planting: z.number().int().meta({ description: 'place in the list of the parcel, from 1' }),
    crop: z.string(),
    crop_name: z.string(),
    area_ha: z.number(),
    initial_from: isoDate.meta({ description: 'planting, green-up or the day its rule was met' }),
    development_from: isoDate,
    mid_from: isoDate,
    late_from: isoDate,
    ends: isoDate.meta({ description: 'last day of the crop' }),
    whole: z.boolean().meta({ description: 'false where part of the crop lies outside the run: the figures are then of the part within' }),
    crop_et_mm: n,
    adjusted_crop_et_mm: n,
    initial_deficit: n.meta({ description: '1 − ETc adj / ETc of the stage; null where the stage has no ET in the run' }),
    development_deficit: n,
    mid_deficit: n,
    late_deficit: n,
    yield_response: n.meta({ description: 'Ky of the season' }),
    relative_yield: n.meta({ description: 'Ya / Ym by the Ky of the season (FAO-56 Eq. 90); null where no Ky is listed' }),
    relative_yield_by_stage: n.meta({
      description: 'Ya / Ym as the product over the stages with their own Ky (FAO-33); null where none is listed',
    }),
  })
  .meta({ id: 'PlantingYield' });
export type PlantingYieldRow = z.infer<typeof plantingYieldRow>;
