import { z } from 'zod';
import { isoDate } from './common.ts';

/** Mean of an image over a parcel on a day. */
export const imageRow = z
  .object({
    parcel: z.string(),
    date: isoDate,
    quantity: z.enum(['vegetation_index', 'fraction_covered']),
    value: z.number().meta({ description: 'vegetation index −1 … 1, or fraction of ground covered 0 … 1' }),
    seen_share: z.number().meta({ description: 'share of the parcel that the image saw, 0–1; at least 0.7, else there is no row' }),
  })
  .meta({ id: 'ImageMean' });
export type ImageRow = z.infer<typeof imageRow>;
