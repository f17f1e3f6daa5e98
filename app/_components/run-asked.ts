import { redirect } from 'next/navigation';
import type { Caller } from '../../lib/access/caller.ts';
import { answerRun } from '../../lib/http/answers/run.ts';
import type { RunAnswer } from '../../lib/http/contract/run.ts';
import { runInView } from './in-view.ts';
import { orNotFound } from './or-not-found.ts';
import { one, type Query } from './query.ts';

/** The run that the address names, else the standing run of the season in view. A run without results is shown as a run. */
export async function runAsked(caller: Caller, query: Query): Promise<RunAnswer | null> {
  const id = one(query, 'run');
  if (!id) return runInView();
  const run = await orNotFound(answerRun(caller, id));
  if (run.state !== 'done') redirect(`/runs/${run.id}`);
  return run;
}
