import type { Metadata } from 'next';
import { NoRunPage } from '../../_components/empty-state.tsx';
import { callerInView } from '../../_components/in-view.ts';
import { PageHead } from '../../_components/page-head.tsx';
import type { PageProps } from '../../_components/page-props.ts';
import { choosePeriod, weekStartOf } from '../../_components/period-choice.ts';
import { runAsked } from '../../_components/run-asked.ts';
import { loadParcelPage } from './load-parcel-page.ts';
import { ParcelTable } from './parcel-table.tsx';

export const metadata: Metadata = { title: 'Parcels' };

export default async function ParcelsPage({ searchParams }: PageProps) {
  const [caller, query] = await Promise.all([callerInView(), searchParams]);
  const run = await runAsked(caller, query);
  if (!run) return <NoRunPage />;
  const choice = choosePeriod(query, run, weekStartOf(run, caller.district));
  const list = await loadParcelPage({ caller, run, choice, query });
  return (
    <div className="page">
      <PageHead title="Parcels" lead="What each parcel needs over a period. Open one for its season and the working of any day." />
      <ParcelTable run={run} choice={choice} list={list} query={query} units={caller.units} />
    </div>
  );
}
