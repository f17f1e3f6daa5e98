import type { Metadata } from 'next';
import { answerBand } from '../../../lib/http/answers/band.ts';
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
  const band = await answerBand(caller, run.id, { level: 'reach', period: choice.kind, limit: 60_000 });
  const banded = new Map(band.items.filter(({ start }) => start === choice.period.start).map((row) => [row.place, row]));
  const shown = { run, reaches: items, band: banded, choice, query, units: caller.units };
  return <CanalView {...shown} grower={caller.role === 'grower'} />;
}
