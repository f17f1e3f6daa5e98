import { answerSources } from '../../../../../lib/http/answers/weather.ts';
import { listSourcesOperation } from '../../../../../lib/http/operations/weather.ts';
import { route } from '../../../../../lib/http/route.ts';

export const GET = route(listSourcesOperation, async ({ caller }) => ({ items: await answerSources(caller) }));
