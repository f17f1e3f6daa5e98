import { answerDistricts } from '../../../../lib/http/answers/district.ts';
import { createDistrictOperation, listDistrictsOperation } from '../../../../lib/http/operations/district.ts';
import { openRoute, route } from '../../../../lib/http/route.ts';
import { createDistrictFor } from '../../../../lib/http/set-up.ts';

export const POST = openRoute(createDistrictOperation, ({ request, body }) => createDistrictFor(request, body));
export const GET = route(listDistrictsOperation, async ({ caller }) => ({ items: await answerDistricts(caller) }));
