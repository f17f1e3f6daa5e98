import { answerFetches } from '../../../../../../../lib/http/answers/feeds.ts';
import { listFetchesOperation } from '../../../../../../../lib/http/operations/feeds.ts';
import { route } from '../../../../../../../lib/http/route.ts';

export const GET = route(listFetchesOperation, async ({ caller, params }) => ({ items: await answerFetches(caller, params.id) }));
