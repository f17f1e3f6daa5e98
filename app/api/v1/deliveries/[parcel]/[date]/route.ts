import { removeDeliveryOf } from '../../../../../../lib/http/answers/records.ts';
import { deleteDeliveryOperation } from '../../../../../../lib/http/operations/records.ts';
import { route } from '../../../../../../lib/http/route.ts';

export const DELETE = route(deleteDeliveryOperation, ({ caller, params }) => removeDeliveryOf(caller, params));
