import { answerRun } from '../../../../../../lib/http/answers/run.ts';
import { answerRunParcels, eachRunParcels } from '../../../../../../lib/http/answers/run-parcels.ts';
import { runParcelsOperation } from '../../../../../../lib/http/operations/runs.ts';
import { pageLimit } from '../../../../../../lib/http/paging.ts';
import { route } from '../../../../../../lib/http/route.ts';
import { begun, csvResponse, csvStream } from '../../../../../../lib/http/table.ts';

export const GET = route(runParcelsOperation, async ({ caller, params, query, units, csv }) => {
  if (!csv || query.limit || query.cursor) return answerRunParcels(caller, params.id, { ...query, limit: pageLimit(query, csv, 1000) });
  const { season } = await answerRun(caller, params.id);
  const pages = await begun(eachRunParcels(caller, params.id, query));
  return csvResponse(csvStream(runParcelsOperation.table, pages, units), `parcels-${season}-${query.period}`);
});
