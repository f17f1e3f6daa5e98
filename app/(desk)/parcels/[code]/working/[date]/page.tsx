import type { Metadata } from 'next';
import { isIsoDate } from '../../../../../../lib/base/civil-date.ts';
import { answerWorking } from '../../../../../../lib/http/answers/parcel-season.ts';
import { EmptyState, NoRunPage } from '../../../../../_components/empty-state.tsx';
import { callerInView } from '../../../../../_components/in-view.ts';
import { orNotFound } from '../../../../../_components/or-not-found.ts';
import { decoded, type PageProps } from '../../../../../_components/page-props.ts';
import { runAsked } from '../../../../../_components/run-asked.ts';
import { WorkingView } from './working-view.tsx';

export async function generateMetadata({ params }: PageProps<'code' | 'date'>): Promise<Metadata> {
  const { code, date } = await params;
  return { title: `Working of parcel ${decoded(code)}, ${date}` };
}

export default async function WorkingPage({ params, searchParams }: PageProps<'code' | 'date'>) {
  const [caller, { code, date }, query] = await Promise.all([callerInView(), params, searchParams]);
  const run = await runAsked(caller, query);
  if (!run) return <NoRunPage />;
  const inside = isIsoDate(date) && run.start_date <= date && date <= run.end_date;
  if (!inside)
    return (
      <div className="page">
        <EmptyState title={`${date} is not a day of this run`}>
          Choose a day from {run.start_date} to {run.end_date}.
        </EmptyState>
      </div>
    );
  const working = await orNotFound(answerWorking(caller, run.id, decoded(code), date));
  return <WorkingView run={run} working={working} query={query} />;
}
