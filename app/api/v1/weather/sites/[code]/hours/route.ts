import { answerSiteHours } from '../../../../../../../lib/http/answers/weather-hours.ts';
import { siteHoursOperation } from '../../../../../../../lib/http/operations/weather.ts';
import { route } from '../../../../../../../lib/http/route.ts';

export const GET = route(siteHoursOperation, ({ caller, params, query }) => answerSiteHours(caller, params.code, query));
