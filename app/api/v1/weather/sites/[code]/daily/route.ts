import { answerSiteRecord, eachSiteDays } from '../../../../../../../lib/http/answers/weather.ts';
import { siteDayRowOf } from '../../../../../../../lib/http/contract/rest.ts';
import { siteDaysOperation } from '../../../../../../../lib/http/operations/weather.ts';
import { route } from '../../../../../../../lib/http/route.ts';
import { begun, csvResponse, csvStream } from '../../../../../../../lib/http/table.ts';

export const GET = route(siteDaysOperation, async ({ caller, params, query, units, csv }) => {
  if (!csv) return answerSiteRecord(caller, params.code, query);
  const pages = await begun(eachSiteDays(caller, params.code, query));
  return csvResponse(csvStream(siteDaysOperation.table, rowsOf(pages), units), 'weather-sites-daily');
});

async function* rowsOf(pages: ReturnType<typeof eachSiteDays>) {
  for await (const days of pages) yield days.map(siteDayRowOf);
}
