import { answerMeasurements, recordMeasurement } from '../../../../lib/http/answers/records.ts';
import { listMeasurementsOperation, putMeasurementOperation } from '../../../../lib/http/operations/records.ts';
import { pageLimit } from '../../../../lib/http/paging.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(listMeasurementsOperation, ({ caller, query, csv }) =>
  answerMeasurements(caller, { ...query, limit: pageLimit(query, csv, 1000) }),
);
export const POST = route(putMeasurementOperation, ({ caller, body }) => recordMeasurement(caller, body));
