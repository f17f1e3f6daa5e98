import type { Metadata } from 'next';
import { TillwaterError } from '../../../../lib/base/errors.ts';
import { answerFrostWorking } from '../../../../lib/http/answers/frost.ts';
import { EmptyState } from '../../../_components/empty-state.tsx';
import { callerInView } from '../../../_components/in-view.ts';
import { orNotFound } from '../../../_components/or-not-found.ts';
import { one, type Query } from '../../../_components/query.ts';
import { frostAsked } from '../load-frost.ts';
import { FrostWorkingView } from './working-view.tsx';

export const metadata: Metadata = { title: 'Working of a frost night' };

export default async function FrostWorkingPage({ searchParams }: { searchParams: Promise<Query> }) {
  const [caller, query] = await Promise.all([callerInView(), searchParams]);
  const [date, parcel] = [one(query, 'date'), one(query, 'parcel')];
  if (!date || !parcel) {
    return (
      <div className="page">
        <EmptyState title="No parcel and night were asked for">Choose a parcel from the list of a frost night.</EmptyState>
      </div>
    );
  }
  const planting = one(query, 'planting');
  const asked = { ...frostAsked(query, date), parcel, planting: planting === undefined ? undefined : Number(planting) };
  try {
    return <FrostWorkingView working={await orNotFound(answerFrostWorking(caller, asked))} query={query} />;
  } catch (error) {
    if (!(error instanceof TillwaterError)) throw error;
    return (
      <div className="page">
        <EmptyState title="This night cannot be computed">{error.message}</EmptyState>
      </div>
    );
  }
}
