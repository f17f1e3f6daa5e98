import { answerBand, eachBandRow } from '../../../../../../lib/http/answers/band.ts';
import { answerRun } from '../../../../../../lib/http/answers/run.ts';
import { bandOperation } from '../../../../../../lib/http/operations/band.ts';
import { pageLimit } from '../../../../../../lib/http/paging.ts';
import { route } from '../../../../../../lib/http/route.ts';
import { begun, csvResponse, csvStream } from '../../../../../../lib/http/table.ts';

export const GET = route(bandOperation, async ({ caller, params, query, units, csv }) => {
  if (!csv || query.limit || query.cursor) return answerBand(caller, params.id, { ...query, limit: pageLimit(query, csv, 1000) });
  const { season } = await answerRun(caller, params.id);
  const pages = await begun(eachBandRow(caller, params.id, query));
  return csvResponse(csvStream(bandOperation.table, pages, units), `band-${query.level}-${season}`);
});
