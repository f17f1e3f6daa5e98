import type { Metadata } from 'next';
import { answerCrops } from '../../../../lib/http/answers/land.ts';
import { answerParcelSeason } from '../../../../lib/http/answers/parcel-season.ts';
import { NoRunPage } from '../../../_components/empty-state.tsx';
import { callerInView } from '../../../_components/in-view.ts';
import { orNotFound } from '../../../_components/or-not-found.ts';
import { decoded, type PageProps } from '../../../_components/page-props.ts';
import { weekStartOf } from '../../../_components/period-choice.ts';
import { runAsked } from '../../../_components/run-asked.ts';
import { ParcelView } from './parcel-view.tsx';

export async function generateMetadata({ params }: PageProps<'code'>): Promise<Metadata> {
  return { title: `Parcel ${decoded((await params).code)}` };
}

export default async function ParcelPage({ params, searchParams }: PageProps<'code'>) {
  const [caller, { code }, query] = await Promise.all([callerInView(), params, searchParams]);
  const run = await runAsked(caller, query);
  if (!run) return <NoRunPage />;
  const [season, crops] = await Promise.all([orNotFound(answerParcelSeason(caller, run.id, decoded(code))), answerCrops(caller)]);
  return (
    <ParcelView run={run} season={season} crops={crops} query={query} weekStart={weekStartOf(run, caller.district)} units={caller.units} />
  );
}
