import type { Metadata } from 'next';
import { NoRunPage } from '../../../../../_components/empty-state.tsx';
import { callerInView } from '../../../../../_components/in-view.ts';
import { decoded, type PageProps } from '../../../../../_components/page-props.ts';
import { runAsked } from '../../../../../_components/run-asked.ts';
import { loadWorking } from './load-working.ts';
import { NoSuchDay, WorkingView } from './working-view.tsx';

export async function generateMetadata({ params }: PageProps<'code' | 'date'>): Promise<Metadata> {
  const { code, date } = await params;
  return { title: `Working of parcel ${decoded(code)}, ${date}` };
}

export default async function WorkingPage({ params, searchParams }: PageProps<'code' | 'date'>) {
  const [caller, { code, date }, query] = await Promise.all([callerInView(), params, searchParams]);
  const run = await runAsked(caller, query);
  if (!run) return <NoRunPage />;
  const working = await loadWorking({ caller, run, parcel: decoded(code), date });
  return working ? <WorkingView run={run} working={working} query={query} /> : <NoSuchDay run={run} date={date} />;
}
