import { answerSitePage } from '../../../../../lib/http/answers/weather.ts';
import { listSitesOperation } from '../../../../../lib/http/operations/weather.ts';
import { pageLimit } from '../../../../../lib/http/paging.ts';
import { route } from '../../../../../lib/http/route.ts';

export const GET = route(listSitesOperation, ({ caller, query, csv }) =>
  answerSitePage(caller, { ...query, limit: pageLimit(query, csv, 1000) }),
);
