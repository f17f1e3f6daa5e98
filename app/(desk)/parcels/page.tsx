import type { Metadata } from 'next';
import { EmptyState, NoRun } from '../../_components/empty-state.tsx';
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
  const choice = run ? choosePeriod(query, run, weekStartOf(run, caller.district)) : null;
  const list = run && choice ? await loadParcelPage({ caller, run, choice, query }) : null;
  return (
    <div className="page">
      <PageHead
        title="Parcels"
        lead="What each parcel needs over a period. Open one for its water chain, its season and the working of any day."
      />
      {run && choice && list ? <ParcelTable run={run} choice={choice} list={list} query={query} units={caller.units} /> : <NoRun />}
      {list && list.count === 0 && !query.search && !query.reach ? (
        <EmptyState title="No parcels to show">Ask the district’s manager to give you parcels.</EmptyState>
      ) : null}
    </div>
  );
}
