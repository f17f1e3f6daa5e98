import { z } from 'zod';
import { areaAnswer, historyItem, parcelHistoryAnswer } from '../contract/land-places.ts';
import { operation } from '../operation.ts';

const tag = 'Land and crops';

export const listAreasOperation = operation({
  method: 'GET',
  path: '/api/v1/areas',
  tag,
  summary: 'Service areas, by code',
  description: 'What a turnout, a reach or a company serves. Growers’ counts are of their own parcels.',
  scope: 'read',
  units: true,
  answer: z.object({ items: z.array(areaAnswer) }),
  table: { row: areaAnswer },
});

export const parcelHistoryOperation = operation({
  method: 'GET',
  path: '/api/v1/parcels/{code}/history',
  tag,
  summary: 'The history of a parcel’s ground: how it stood before imports reshaped, split, merged or ended it',
  description: 'The newest first, with the parcels whose ground it took over. Also for a parcel that stands no more.',
  scope: 'read',
  params: { code: z.string().min(1).max(120) },
  units: true,
  answer: parcelHistoryAnswer,
  table: { row: historyItem, leaveOut: ['successors'] },
  refusals: [404],
});
