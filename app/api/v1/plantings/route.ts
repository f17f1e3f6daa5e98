import { answerPlantings } from '../../../../lib/http/answers/land.ts';
import { listPlantingsOperation } from '../../../../lib/http/operations/land.ts';
import { pageLimit } from '../../../../lib/http/paging.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(listPlantingsOperation, ({ caller, query, csv }) =>
  answerPlantings(caller, { ...query, limit: pageLimit(query, csv, 200) }),
);
