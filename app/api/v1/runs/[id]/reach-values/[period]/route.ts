import { answerRun } from '../../../../../../../lib/http/answers/run.ts';
import { reachValues } from '../../../../../../../lib/http/answers/run-reaches.ts';
import { immutable, viewOf } from '../../../../../../../lib/http/conditional.ts';
import { reachValuesOperation } from '../../../../../../../lib/http/operations/runs.ts';
import { route } from '../../../../../../../lib/http/route.ts';

export const GET = route(reachValuesOperation, async ({ request, caller, params }) => {
  const { finished_at: finished } = await answerRun(caller, params.id);
  const tag = `${params.id}-reaches-${params.period}-${Date.parse(finished ?? '')}${viewOf(caller)}`;
  return immutable(request, tag, async () => Response.json(await reachValues(caller, params.id, params.period)));
});
