import { answerRun } from '../../../../../../lib/http/answers/run.ts';
import { answerYields, eachYield } from '../../../../../../lib/http/answers/yields.ts';
import { yieldsOperation } from '../../../../../../lib/http/operations/yields.ts';
import { pageLimit } from '../../../../../../lib/http/paging.ts';
import { route } from '../../../../../../lib/http/route.ts';
import { begun, csvResponse, csvStream } from '../../../../../../lib/http/table.ts';

export const GET = route(yieldsOperation, async ({ caller, params, query, units, csv }) => {
  if (!csv || query.limit || query.cursor) return answerYields(caller, params.id, { ...query, limit: pageLimit(query, csv, 1000) });
  const { season } = await answerRun(caller, params.id);
  const pages = await begun(eachYield(caller, params.id, query.parcel));
  return csvResponse(csvStream(yieldsOperation.table, pages, units), `yields-${season}`);
});
