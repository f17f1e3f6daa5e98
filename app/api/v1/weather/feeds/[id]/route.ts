import { deleteFeedOf, patchFeed } from '../../../../../../lib/http/answers/feeds.ts';
import { changeFeedOperation, deleteFeedOperation } from '../../../../../../lib/http/operations/feeds.ts';
import { route } from '../../../../../../lib/http/route.ts';

export const PATCH = route(changeFeedOperation, ({ caller, params, body }) => patchFeed(caller, params.id, body));
export const DELETE = route(deleteFeedOperation, ({ caller, params }) => deleteFeedOf(caller, params.id));
