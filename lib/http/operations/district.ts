import { z } from 'zod';
import {
  districtAnswer,
  districtPatch,
  districtRequest,
  districtSummary,
  memberAnswer,
  memberRequest,
  seasonAnswer,
  seasonRequest,
  tokenAnswer,
  tokenRequest,
} from '../contract/rest.ts';
import { operation } from '../operation.ts';

const tag = 'District';
const list = <T extends z.ZodType>(item: T) => z.object({ items: z.array(item) });

export const createDistrictOperation = operation({
  method: 'POST',
  path: '/api/v1/districts',
  tag,
  summary: 'Make a district and its manager',
  description:
    'Bearer token: the set-up token that an empty installation prints once, or a manager’s session. ' +
    'The district starts with the library of crops, calendars, soils and application methods.',
  scope: 'open',
  body: districtRequest,
  bodyLimit: 8 * 1024 * 1024,
  status: 201,
  answer: districtAnswer,
  refusals: [409, 413, 415, 422],
});

export const listDistrictsOperation = operation({
  method: 'GET',
  path: '/api/v1/districts',
  tag,
  summary: 'Districts the caller belongs to',
  scope: 'read',
  answer: list(districtSummary),
  table: { row: districtSummary },
});

export const readDistrictOperation = operation({
  method: 'GET',
  path: '/api/v1/district',
  tag,
  summary: 'The caller’s district',
  scope: 'read',
  units: true,
  answer: districtAnswer,
});

export const changeDistrictOperation = operation({
  method: 'PATCH',
  path: '/api/v1/district',
  tag,
  summary: 'Change the district’s settings',
  scope: 'administer',
  body: districtPatch,
  bodyLimit: 8 * 1024 * 1024,
  answer: districtAnswer,
  refusals: [413, 415, 422],
});

export const listSeasonsOperation = operation({
  method: 'GET',
  path: '/api/v1/seasons',
  tag,
  summary: 'Seasons, newest first',
  scope: 'read',
  answer: list(seasonAnswer),
  table: { row: seasonAnswer },
});

export const createSeasonOperation = operation({
  method: 'POST',
  path: '/api/v1/seasons',
  tag,
  summary: 'Make a season',
  description: 'A season lasts 1 to 400 days and may cross New Year.',
  scope: 'write',
  body: seasonRequest,
  status: 201,
  answer: seasonAnswer,
  refusals: [409, 413, 415, 422],
});

export const listMembersOperation = operation({
  method: 'GET',
  path: '/api/v1/members',
  tag,
  summary: 'People who belong to the district',
  scope: 'administer',
  answer: list(memberAnswer),
  table: { row: memberAnswer },
});

export const saveMemberOperation = operation({
  method: 'POST',
  path: '/api/v1/members',
  tag,
  summary: 'Add a person, or change a member’s role and parcels',
  description:
    'A person whom nobody knows by this address is made, and then needs a name and a password. Growers see the parcels named here only.',
  scope: 'administer',
  body: memberRequest,
  status: 201,
  answer: memberAnswer,
  refusals: [409, 413, 415, 422],
});

export const deleteMemberOperation = operation({
  method: 'DELETE',
  path: '/api/v1/members/{user}',
  tag,
  summary: 'Remove a person from the district',
  description: 'The last manager cannot be removed.',
  scope: 'administer',
  params: { user: z.string().min(1).max(80) },
  status: 204,
  refusals: [404, 409],
});

export const listTokensOperation = operation({
  method: 'GET',
  path: '/api/v1/tokens',
  tag,
  summary: 'API tokens of the district',
  scope: 'administer',
  answer: list(tokenAnswer),
  table: { row: tokenAnswer, leaveOut: ['token'] },
});

export const createTokenOperation = operation({
  method: 'POST',
  path: '/api/v1/tokens',
  tag,
  summary: 'Make an API token',
  description: 'The token itself is in this answer only: it is stored as a hash and cannot be shown again.',
  scope: 'administer',
  body: tokenRequest,
  status: 201,
  answer: tokenAnswer,
  refusals: [413, 415],
});

export const deleteTokenOperation = operation({
  method: 'DELETE',
  path: '/api/v1/tokens/{id}',
  tag,
  summary: 'Withdraw an API token',
  scope: 'administer',
  params: { id: z.guid() },
  status: 204,
  refusals: [404],
});
