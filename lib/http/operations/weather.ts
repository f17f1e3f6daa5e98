import { z } from 'zod';
import { isoDate, pageOf } from '../contract/common.ts';
import { type SiteDaysAnswer, siteAnswer, siteDayRow, siteDayRowOf, siteDaysAnswer } from '../contract/rest.ts';
import { siteHour, siteHoursAnswer, weatherSourceAnswer } from '../contract/weather.ts';
import { operation } from '../operation.ts';
import { pageQuery } from '../paging.ts';

const tag = 'Weather';
const sourceName = z.string().min(1).max(200).meta({ description: 'name of a weather source; the first that has the site unless said' });

export const listSitesOperation = operation({
  method: 'GET',
  path: '/api/v1/weather/sites',
  tag,
  summary: 'Weather sites with what they cover',
  description:
    'The stations of every source of observations; `source` names one source, which may be a grid or a forecast. Cells of a grid tell the months of the grid and no coverage of their own.',
  scope: 'read',
  query: { source: sourceName.optional(), ...pageQuery(1000, 10_000) },
  units: true,
  answer: pageOf(siteAnswer).meta({ id: 'SitePage' }),
  table: { row: siteAnswer, leaveOut: ['coverage_days'] },
  refusals: [404],
});

export const listSourcesOperation = operation({
  method: 'GET',
  path: '/api/v1/weather/sources',
  tag,
  summary: 'Weather sources: sites, months and variables',
  scope: 'read',
  answer: z.object({ items: z.array(weatherSourceAnswer) }),
  table: { row: weatherSourceAnswer },
});

export const siteHoursOperation = operation({
  method: 'GET',
  path: '/api/v1/weather/sites/{code}/hours',
  tag,
  summary: 'The 24 hours of a site’s day: weather, reference ET by each method, energy budget',
  description:
    'Hours run by the site’s standard time, each named by the hour that begins it. Gaps of up to two hours are bridged by the mean of their neighbours.',
  scope: 'read',
  params: { code: z.string().min(1).max(120) },
  query: { date: isoDate, source: sourceName.optional() },
  units: true,
  answer: siteHoursAnswer,
  table: { row: siteHour },
  refusals: [404],
});

export const siteDaysOperation = operation({
  method: 'GET',
  path: '/api/v1/weather/sites/{code}/daily',
  tag,
  summary: 'Days of a site: observed, completed, reference ET by each method, energy budget',
  description:
    'At most 400 days: the last of them unless `from` says where to begin; `truncated` says that more were asked for, `first_day` and `last_day` what the site has. ' +
    'A CSV holds every day asked for; the observed and the completed values are columns `observed_…` and `completed_…`.',
  scope: 'read',
  params: { code: z.string().min(1).max(120) },
  query: { from: isoDate.optional(), to: isoDate.optional(), source: sourceName.optional() },
  units: true,
  answer: siteDaysAnswer,
  table: { row: siteDayRow, rows: (answer: SiteDaysAnswer) => answer.items.map(siteDayRowOf) },
  refusals: [404, 413],
});
