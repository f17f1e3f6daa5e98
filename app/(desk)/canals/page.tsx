import type { Metadata } from 'next';
import { answerReaches } from '../../../lib/http/answers/run-reaches.ts';
import { answerSummary } from '../../../lib/http/answers/summary.ts';
import { NoRunPage } from '../../_components/empty-state.tsx';
import { callerInView } from '../../_components/in-view.ts';
import type { PageProps } from '../../_components/page-props.ts';
import { busiestWeek, choosePeriod, weekStartOf } from '../../_components/period-choice.ts';
import { runAsked } from '../../_components/run-asked.ts';
import { CanalView } from './canal-view.tsx';

export const metadata: Metadata = { title: 'Canals' };

export default async function CanalsPage({ searchParams }: PageProps) {
  const [caller, query] = await Promise.all([callerInView(), searchParams]);
  const run = await runAsked(caller, query);
  if (!run) return <NoRunPage />;
  const { weeks } = await answerSummary(caller, run.id);
  const preferred = busiestWeek(weeks, (week) => week.headworks_inflow_m3);
  const choice = choosePeriod(query, run, weekStartOf(run, caller.district), { kind: 'week', preferred });
  const { items } = await answerReaches(caller, run.id, { period: choice.kind, from: choice.period.start, to: choice.period.end });
  return <CanalView run={run} reaches={items} choice={choice} query={query} grower={caller.role === 'grower'} units={caller.units} />;
}
