import type { Metadata } from 'next';
import { TillwaterError } from '../../../../../lib/base/errors.ts';
import { answerGaps } from '../../../../../lib/http/answers/gaps.ts';
import type { GapsAnswer } from '../../../../../lib/http/contract/gaps.ts';
import { callerInView } from '../../../../_components/in-view.ts';
import type { PageProps } from '../../../../_components/page-props.ts';
import { one, type Query } from '../../../../_components/query.ts';
import { GapsView } from './gaps-view.tsx';

export const metadata: Metadata = { title: 'Weather: gaps' };

export default async function GapsPage({ searchParams }: PageProps) {
  const [caller, query] = await Promise.all([callerInView(), searchParams]);
  const asked = askedOf(query);
  const answer: GapsAnswer | string = await answerGaps(caller, asked).catch((error: unknown) => {
    if (error instanceof TillwaterError) return error.message;
    throw error;
  });
  return <GapsView answer={answer} asked={asked} />;
}

function askedOf(query: Query) {
  return { source: one(query, 'source'), site: one(query, 'site'), from: one(query, 'from'), to: one(query, 'to') };
}
