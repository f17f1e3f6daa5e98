import { answerDeliveries, recordDelivery } from '../../../../lib/http/answers/records.ts';
import { listDeliveriesOperation, putDeliveryOperation } from '../../../../lib/http/operations/records.ts';
import { pageLimit } from '../../../../lib/http/paging.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(listDeliveriesOperation, ({ caller, query, csv }) =>
  answerDeliveries(caller, { ...query, limit: pageLimit(query, csv, 1000) }),
);
export const POST = route(putDeliveryOperation, ({ caller, body }) => recordDelivery(caller, body));
