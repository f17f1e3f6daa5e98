import type { Metadata } from 'next';
import type { Caller } from '../../../../lib/access/caller.ts';
import { NotFound } from '../../../../lib/base/errors.ts';
import { answerBand } from '../../../../lib/http/answers/band.ts';
import { answerImages } from '../../../../lib/http/answers/images.ts';
import { answerParcelHistory } from '../../../../lib/http/answers/parcel-history.ts';
import { answerParcelSeason } from '../../../../lib/http/answers/parcel-season.ts';
import { answerDeliveries, answerMeasurements } from '../../../../lib/http/answers/records.ts';
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
  const banded = { level: 'parcel', place: decoded(code), limit: 100 } as const;
  const recorded = { from: run.start_date, to: run.end_date, parcel: decoded(code), limit: 400 };
  const [season, history, yields, images, bandSeason, bandWeeks, deliveries, measurements] = await Promise.all([
    orNotFound(answerParcelSeason(caller, run.id, decoded(code))),
    historyOf(caller, decoded(code)),
    orNotFound(answerYields(caller, run.id, { parcel: decoded(code), limit: 1 })),
    answerImages(caller, { from: run.start_date, to: run.end_date, parcel: decoded(code), limit: 200 }),
    orNotFound(answerBand(caller, run.id, { ...banded, period: 'season' })),
    orNotFound(answerBand(caller, run.id, { ...banded, period: 'week' })),
    answerDeliveries(caller, recorded),
    answerMeasurements(caller, { ...recorded, from: '1900-01-01' }),
  ]);
  return (
    <ParcelView
      run={run}
      season={season}
      history={history}
      yields={yields.items}
      images={images.items}
      records={{ deliveries: deliveries.items, measurements: measurements.items, mayWrite: caller.scope !== 'read' }}
      band={{ season: bandSeason, weeks: bandWeeks }}
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
