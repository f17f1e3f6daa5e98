import { z } from 'zod';
import { bandAnswer, bandLevel, bandPeriod, bandRow, bandVariable } from '../contract/band.ts';
import { operation } from '../operation.ts';
import { pageQuery } from '../paging.ts';

export const bandOperation = operation({
  method: 'GET',
  path: '/api/v1/runs/{id}/band',
  tag: 'Runs',
  summary: 'How sure the numbers are: P10, P50 and P90 by parcel, reach or district',
  description:
    'In 8 of 10 members of the ensemble the number lies between P10 and P90. Errors of weather, crop coefficient, application efficiency and soil are carried through; rain is taken as known. Growers get their own parcels, and no rows of reaches or the district. Rows come by place, then by period.',
  scope: 'read',
  params: { id: z.guid() },
  query: {
    level: bandLevel.default('district'),
    variable: bandVariable.optional().meta({
      description:
        'parcel: gross_requirement (unless said), net_requirement, adjusted_crop_et; reach: head_inflow; district: head_inflow (unless said), gross_volume, net_volume, adjusted_crop_et_volume',
    }),
    period: bandPeriod.default('season').meta({ description: 'runs of more than 100,000 parcels keep no weeks of parcels' }),
    place: z.string().min(1).max(120).optional().meta({ description: 'code of one parcel or reach' }),
    ...pageQuery(1000, 10_000),
  },
  units: true,
  answer: bandAnswer,
  table: { row: bandRow },
  refusals: [404, 409],
});
