import { mapValues, parsePeriod } from '../../../../../../../../lib/http/answers/map.ts';
import { answerRun } from '../../../../../../../../lib/http/answers/run.ts';
import { immutable, viewOf } from '../../../../../../../../lib/http/conditional.ts';
import { valuesOperation } from '../../../../../../../../lib/http/operations/runs.ts';
import { route } from '../../../../../../../../lib/http/route.ts';

export const GET = route(valuesOperation, async ({ request, caller, params }) => {
  const { id, variable, period } = params;
  const { finished_at: finished } = await answerRun(caller, id);
  return immutable(request, `${id}-${variable}-${period}-${Date.parse(finished ?? '')}${viewOf(caller)}`, async () => {
    const bytes = await mapValues(caller, id, { variable, ...parsePeriod(period) });
    return new Response(new Uint8Array(bytes), { headers: { 'content-type': 'application/octet-stream' } });
  });
});
