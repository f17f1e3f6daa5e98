import { answerParcelHistory } from '../../../../../../lib/http/answers/parcel-history.ts';
import { parcelHistoryOperation } from '../../../../../../lib/http/operations/land-places.ts';
import { route } from '../../../../../../lib/http/route.ts';

export const GET = route(parcelHistoryOperation, ({ caller, params }) => answerParcelHistory(caller, params.code));
