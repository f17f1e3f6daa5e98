import { z } from 'zod';
import { plantingYieldRow } from '../contract/yields.ts';
import { operation } from '../operation.ts';
import { pageQuery } from '../paging.ts';

export const yieldsOperation = operation({
  method: 'GET',
  path: '/api/v1/runs/{id}/yields',
  tag: 'Runs',
  summary: 'Relative yield and stages of every planting',
  description:
    'What the shortage of water in the run costs each crop, by yield response factors for the season and by growth stage. Not a forecast of yield: nutrients, pests, frost and harvest are left out.',
  scope: 'read',
  params: { id: z.guid() },
  query: { parcel: z.string().min(1).max(120).optional(), ...pageQuery(1000, 10_000) },
  units: true,
  answer: z.object({ items: z.array(plantingYieldRow), next_cursor: z.string().nullable() }).meta({ id: 'PlantingYieldPage' }),
  table: { row: plantingYieldRow },
  refusals: [404, 409],
});
