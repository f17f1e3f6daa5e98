import { z } from 'zod';
import { isoDate, pageOf, periodKind } from '../contract/common.ts';
import {
  mapDescription,
  type ParcelSeason,
  parcelDay,
  parcelPeriod,
  parcelSeason,
  reachPeriod,
  reachValues,
  runAnswer,
  runRequest,
  summaryAnswer,
  summaryRow,
  summaryRowsOf,
  workingAnswer,
} from '../contract/run.ts';
import { operation } from '../operation.ts';
import { pageQuery } from '../paging.ts';

const tag = 'Runs';
const id = z.guid();
const code = z.string().min(1).max(120);
const span = {
  from: isoDate.optional().meta({ description: 'first day; periods are cut within the days asked for' }),
  to: isoDate.optional().meta({ description: 'last day, included' }),
};

export const createRunOperation = operation({
  method: 'POST',
  path: '/api/v1/runs',
  tag,
  summary: 'Start a run of a season',
  description: 'Settings that are left out take their usual values. A run of the same season that still waits is replaced.',
  scope: 'write',
  body: runRequest,
  status: 202,
  answer: runAnswer,
  refusals: [404, 413, 415, 422],
});

export const listRunsOperation = operation({
  method: 'GET',
  path: '/api/v1/runs',
  tag,
  summary: 'Runs, newest first',
  scope: 'read',
  query: { season: z.string().max(40).optional() },
  answer: z.object({ items: z.array(runAnswer) }),
  table: { row: runAnswer, leaveOut: ['settings', 'manifest', 'balance', 'band', 'days_ahead', 'warnings'] },
});

export const readRunOperation = operation({
  method: 'GET',
  path: '/api/v1/runs/{id}',
  tag,
  summary: 'One run: state, progress, settings, manifest, balance check',
  scope: 'read',
  params: { id },
  answer: runAnswer,
  refusals: [404],
});

export const cancelRunOperation = operation({
  method: 'POST',
  path: '/api/v1/runs/{id}/cancel',
  tag,
  summary: 'Call a run off',
  scope: 'write',
  params: { id },
  answer: runAnswer,
  refusals: [404, 409],
});

export const runEventsOperation = operation({
  method: 'GET',
  path: '/api/v1/runs/{id}/events',
  tag,
  summary: 'Progress of a run as server-sent events',
  description: 'Event `run`, data: the run as in `GET /api/v1/runs/{id}`; sent at once, at each change, and ended when the run is over.',
  scope: 'read',
  params: { id },
  media: { type: 'text/event-stream', holds: 'events named `run`' },
  refusals: [404],
});

export const runParcelsOperation = operation({
  method: 'GET',
  path: '/api/v1/runs/{id}/parcels',
  tag,
  summary: 'Water requirement by parcel and period',
  description: 'Depths are over the parcel’s area. Rows come by parcel in map order, then by period.',
  scope: 'read',
  params: { id },
  query: {
    period: periodKind.default('season'),
    ...span,
    parcel: code.optional(),
    reach: code.optional(),
    crop: code.optional().meta({ description: 'code of a crop' }),
    ...pageQuery(1000, 10_000),
  },
  units: true,
  answer: pageOf(parcelPeriod).meta({ id: 'ParcelPeriodPage' }),
  table: { row: parcelPeriod },
  refusals: [404, 409],
});

export const parcelSeasonOperation = operation({
  method: 'GET',
  path: '/api/v1/runs/{id}/parcels/{code}/daily',
  tag,
  summary: 'The season of a parcel, day by day, with what it was computed from',
  scope: 'read',
  params: { id, code },
  units: true,
  answer: parcelSeason,
  table: { row: parcelDay, rows: (season: ParcelSeason) => season.days },
  refusals: [404, 409],
});

export const workingOperation = operation({
  method: 'GET',
  path: '/api/v1/runs/{id}/parcels/{code}/working',
  tag,
  summary: 'The derivation of one parcel and day',
  description: 'Always in the units of the published equations.',
  scope: 'read',
  params: { id, code },
  query: { date: isoDate },
  answer: workingAnswer,
  refusals: [404, 409],
});

export const reachesOperation = operation({
  method: 'GET',
  path: '/api/v1/runs/{id}/reaches',
  tag,
  summary: 'Demand, loss and flow by reach and period, headworks first',
  description: 'Growers get no rows: flow in a small reach would tell a neighbour’s use.',
  scope: 'read',
  params: { id },
  query: { period: periodKind.default('week'), ...span },
  units: true,
  answer: z.object({ items: z.array(reachPeriod) }),
  table: { row: reachPeriod },
  refusals: [404, 409],
});

export const summaryOperation = operation({
  method: 'GET',
  path: '/api/v1/runs/{id}/summary',
  tag,
  summary: 'Totals of the season by district, canal, crop and method, and by week for the district',
  description: 'As CSV: one row for each total; column `total_of` says of what. For a grower: of the own parcels.',
  scope: 'read',
  params: { id },
  units: true,
  answer: summaryAnswer,
  table: { row: summaryRow, rows: summaryRowsOf },
  refusals: [404, 409],
});

export const mapOperation = operation({
  method: 'GET',
  path: '/api/v1/runs/{id}/map',
  tag,
  summary: 'What the map offers for a run, and how to read its arrays',
  scope: 'read',
  params: { id },
  answer: mapDescription,
  refusals: [404, 409],
});

export const valuesOperation = operation({
  method: 'GET',
  path: '/api/v1/runs/{id}/values/{variable}/{period}',
  tag,
  summary: 'Map numbers of one variable',
  description:
    '`period`: `season`, `week-3`, `month-0` (counted from 0) for one array; `weeks`, `months` for all, period by period. ' +
    'Float32, little-endian, one number for each parcel in map order; NaN is missing. Depths are sums in mm; state variables are values at the end of the period.',
  scope: 'read',
  params: { id, variable: z.string().max(60), period: z.string().regex(/^(season|weeks|months|(week|month)-\d{1,3})$/) },
  media: { type: 'application/octet-stream', holds: 'Float32 little-endian [period ×] parcel' },
  refusals: [404, 409],
});

export const reachValuesOperation = operation({
  method: 'GET',
  path: '/api/v1/runs/{id}/reach-values/{period}',
  tag,
  summary: 'Canal numbers for the map: mean inflow and share of capacity, [period][reach]',
  scope: 'read',
  params: { id, period: z.enum(['weeks', 'months', 'season']) },
  answer: reachValues,
  refusals: [404, 409],
});

export const reportOperation = operation({
  method: 'GET',
  path: '/api/v1/runs/{id}/reports/{file}',
  tag,
  summary: 'Documents: parcels.csv, parcels.geojson, reaches.csv, summary.csv, district.pdf',
  scope: 'read',
  params: { id, file: z.enum(['parcels.csv', 'parcels.geojson', 'reaches.csv', 'summary.csv', 'district.pdf']) },
  query: { period: periodKind.optional().meta({ description: 'for parcels.csv and reaches.csv; season unless said' }) },
  units: true,
  media: { type: 'application/octet-stream', holds: 'the document, in the type of its extension' },
  refusals: [404, 409],
});
