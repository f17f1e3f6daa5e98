import type { Metadata } from 'next';
import type { Caller } from '../../../../lib/access/caller.ts';
import { NotFound } from '../../../../lib/base/errors.ts';
import { answerImages } from '../../../../lib/http/answers/images.ts';
import { answerCrops } from '../../../../lib/http/answers/land.ts';
import { answerParcelHistory } from '../../../../lib/http/answers/parcel-history.ts';
import { answerParcelSeason } from '../../../../lib/http/answers/parcel-season.ts';
import { answerYields } from '../../../../lib/http/answers/yields.ts';
import type { ParcelHistoryAnswer } from '../../../../lib/http/contract/land-places.ts';
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
  const [season, crops, history, yields, images] = await Promise.all([
    orNotFound(answerParcelSeason(caller, run.id, decoded(code))),
    answerCrops(caller),
    historyOf(caller, decoded(code)),
    orNotFound(answerYields(caller, run.id, { parcel: decoded(code), limit: 1 })),
    answerImages(caller, { from: run.start_date, to: run.end_date, parcel: decoded(code), limit: 200 }),
  ]);
  return (
    <ParcelView
      run={run}
      season={season}
      crops={crops}
      history={history}
      yields={yields.items}
      images={images.items}
      query={query}
      weekStart={weekStartOf(run, caller.district)}
      units={caller.units}
    />
  );
}

/** A parcel that an old run knows may be gone without a trace. */
async function historyOf(caller: Caller, code: string): Promise<ParcelHistoryAnswer> {
  try {
    return await answerParcelHistory(caller, code);
  } catch (error) {
    if (error instanceof NotFound) return { parcel: code, stands: false, items: [] };
    throw error;
  }
}
