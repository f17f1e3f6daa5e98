import { answerFeeds, createFeed } from '../../../../../lib/http/answers/feeds.ts';
import { createFeedOperation, listFeedsOperation } from '../../../../../lib/http/operations/feeds.ts';
import { route } from '../../../../../lib/http/route.ts';

export const GET = route(listFeedsOperation, async ({ caller }) => ({ items: await answerFeeds(caller) }));
export const POST = route(createFeedOperation, ({ caller, body }) => createFeed(caller, body));
