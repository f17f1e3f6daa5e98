import { z } from 'zod';
import { isoDate } from './common.ts';

export const areaAnswer = z
  .object({
    code: z.string(),
    name: z.string(),
    turnout: z.string().nullable(),
    reach: z.string().nullable(),
    area_ha: z.number(),
    parcel_count: z.number().int().meta({ description: 'parcels whose inner point lies in the area' }),
  })
  .meta({ id: 'ServiceArea' });
export type AreaAnswer = z.infer<typeof areaAnswer>;

const successor = z.object({
  parcel: z.string(),
  share: z.number().meta({ description: 'share of the earlier parcel’s area that it stands on, 0–1' }),
});

/** A parcel as it stood until an import changed it. */
export const historyItem = z
  .object({
    parcel: z.string(),
    change: z
      .enum(['reshaped', 'recoded', 'split', 'merged', 'vanished'])
      .meta({ description: 'what became of it; `recoded`: the same ground under another code' }),
    area_ha: z.number(),
    valid_to: isoDate.nullable().meta({ description: 'last day on which it stood, where the import said' }),
    recorded_at: z.string(),
    geometry_version: z.number().int().meta({ description: 'version of the map up to which it was drawn so' }),
    successors: z.array(successor),
  })
  .meta({ id: 'ParcelHistoryItem' });
export type HistoryItem = z.infer<typeof historyItem>;

export const parcelHistoryAnswer = z
  .object({
    parcel: z.string(),
    stands: z.boolean().meta({ description: 'false when no parcel has this code any more' }),
    items: z.array(historyItem),
  })
  .meta({ id: 'ParcelHistory' });
export type ParcelHistoryAnswer = z.infer<typeof parcelHistoryAnswer>;
