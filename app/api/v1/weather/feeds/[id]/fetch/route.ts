import { fetchFeedNow } from '../../../../../../../lib/http/answers/feeds.ts';
import { fetchNowOperation } from '../../../../../../../lib/http/operations/feeds.ts';
import { route } from '../../../../../../../lib/http/route.ts';

export const POST = route(fetchNowOperation, ({ caller, params }) => fetchFeedNow(caller, params.id));
