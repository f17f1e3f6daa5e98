import { z } from 'zod';
import { isoDate } from '../contract/common.ts';
import { type SiteDaysAnswer, siteAnswer, siteDayRow, siteDayRowOf, siteDaysAnswer } from '../contract/rest.ts';
import { operation } from '../operation.ts';

const tag = 'Weather';

export const listSitesOperation = operation({
  method: 'GET',
  path: '/api/v1/weather/sites',
  tag,
  summary: 'Weather sites with what they cover',
  scope: 'read',
  units: true,
  answer: z.object({ items: z.array(siteAnswer) }),
  table: { row: siteAnswer, leaveOut: ['coverage_days'] },
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
  query: { from: isoDate.optional(), to: isoDate.optional() },
  units: true,
  answer: siteDaysAnswer,
  table: { row: siteDayRow, rows: (answer: SiteDaysAnswer) => answer.items.map(siteDayRowOf) },
  refusals: [404, 413],
});
