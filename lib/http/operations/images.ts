import { z } from 'zod';
import { isoDate } from '../contract/common.ts';
import { imageRow } from '../contract/images.ts';
import { operation } from '../operation.ts';
import { pageQuery } from '../paging.ts';

export const imagesOperation = operation({
  method: 'GET',
  path: '/api/v1/images',
  tag: 'Land',
  summary: 'Images of plant cover: the mean over each parcel',
  description: 'By parcel, then by day. Runs with the setting observed_cover take them in place of the crop curve.',
  scope: 'read',
  query: {
    from: isoDate.default('1900-01-01'),
    to: isoDate.default('2200-12-31'),
    parcel: z.string().min(1).max(120).optional(),
    ...pageQuery(1000, 10_000),
  },
  answer: z.object({ items: z.array(imageRow), next_cursor: z.string().nullable() }).meta({ id: 'ImageMeanPage' }),
  table: { row: imageRow },
});
