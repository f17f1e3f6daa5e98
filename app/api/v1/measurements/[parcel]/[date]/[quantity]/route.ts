import { removeMeasurementOf } from '../../../../../../../lib/http/answers/records.ts';
import { deleteMeasurementOperation } from '../../../../../../../lib/http/operations/records.ts';
import { route } from '../../../../../../../lib/http/route.ts';

export const DELETE = route(deleteMeasurementOperation, ({ caller, params, query }) =>
  removeMeasurementOf(caller, { ...params, depth: query.soil_depth_m }),
);
