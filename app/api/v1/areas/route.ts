import { answerAreas } from '../../../../lib/http/answers/areas.ts';
import { listAreasOperation } from '../../../../lib/http/operations/land-places.ts';
import { route } from '../../../../lib/http/route.ts';

export const GET = route(listAreasOperation, async ({ caller }) => ({ items: await answerAreas(caller) }));
