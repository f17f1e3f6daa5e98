import { answerSiteDays } from '../../../../../../../lib/http/answers/weather.ts';
import { siteDaysOperation } from '../../../../../../../lib/http/operations/weather.ts';
import { route } from '../../../../../../../lib/http/route.ts';

export const GET = route(siteDaysOperation, async ({ caller, params, query }) => ({
  items: await answerSiteDays(caller, params.code, query),
}));
