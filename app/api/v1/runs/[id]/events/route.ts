import { answerRun } from '../../../../../../lib/http/answers/run.ts';
import { runEventsOperation } from '../../../../../../lib/http/operations/runs.ts';
import { route } from '../../../../../../lib/http/route.ts';
import { followRun } from '../../../../../../lib/http/run-events.ts';
import { eventStream } from '../../../../../../lib/http/streams.ts';

export const dynamic = 'force-dynamic';

export const GET = route(runEventsOperation, async ({ request, caller, params }) => {
  const run = await answerRun(caller, params.id);
  return eventStream(request, (sink) => followRun(caller, run, sink));
});
