import { answerParcels } from '../../../../lib/http/answers/land.ts';
import { listParcelsOperation } from '../../../../lib/http/operations/land.ts';
import { pageLimit } from '../../../../lib/http/paging.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(listParcelsOperation, ({ caller, query, csv }) =>
  answerParcels(caller, { ...query, limit: pageLimit(query, csv, 100) }),
);
