import { z } from 'zod';
import { feedAnswer, feedPatch, feedRequest, fetchAnswer } from '../contract/feeds.ts';
import { operation } from '../operation.ts';

const tag = 'Feeds';
const id = z.guid();

export const listFeedsOperation = operation({
  method: 'GET',
  path: '/api/v1/weather/feeds',
  tag,
  summary: 'Feeds: where weather is pulled from on a schedule',
  scope: 'read',
  answer: z.object({ items: z.array(feedAnswer) }),
  table: { row: feedAnswer, leaveOut: ['options'] },
});

export const createFeedOperation = operation({
  method: 'POST',
  path: '/api/v1/weather/feeds',
  tag,
  summary: 'Make a feed',
  description:
    'A feed asks for its address (or looks into the district’s watched folder) on a schedule, for today and some days back. What is new or changed becomes an ' +
    'import with the options given; without errors it is applied and the seasons it bears on are computed anew. Addresses inside private networks are refused ' +
    'unless whoever runs the service has named them.',
  scope: 'administer',
  body: feedRequest,
  status: 201,
  answer: feedAnswer,
  refusals: [409, 422],
});

export const changeFeedOperation = operation({
  method: 'PATCH',
  path: '/api/v1/weather/feeds/{id}',
  tag,
  summary: 'Change a feed, or have it rest',
  scope: 'administer',
  params: { id },
  body: feedPatch,
  answer: feedAnswer,
  refusals: [404, 409, 422],
});

export const deleteFeedOperation = operation({
  method: 'DELETE',
  path: '/api/v1/weather/feeds/{id}',
  tag,
  summary: 'Remove a feed; what it brought stays',
  scope: 'administer',
  params: { id },
  answer: z.object({ removed: z.literal(true) }),
  refusals: [404],
});

export const fetchNowOperation = operation({
  method: 'POST',
  path: '/api/v1/weather/feeds/{id}/fetch',
  tag,
  summary: 'Have a feed take a turn now',
  scope: 'write',
  params: { id },
  status: 202,
  answer: feedAnswer,
  refusals: [404],
});

export const listFetchesOperation = operation({
  method: 'GET',
  path: '/api/v1/weather/feeds/{id}/fetches',
  tag,
  summary: 'What a feed asked for and what came of it, newest first (200)',
  scope: 'read',
  params: { id },
  answer: z.object({ items: z.array(fetchAnswer) }),
  table: { row: fetchAnswer },
  refusals: [404],
});
