import { answerSites } from '../../../../../lib/http/answers/weather.ts';
import { listSitesOperation } from '../../../../../lib/http/operations/weather.ts';
import { route } from '../../../../../lib/http/route.ts';

export const GET = route(listSitesOperation, async ({ caller }) => ({ items: await answerSites(caller) }));
