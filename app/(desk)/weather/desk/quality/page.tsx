import type { Metadata } from 'next';
import { answerChecks, answerCorrections, answerFlags } from '../../../../../lib/http/answers/quality.ts';
import { callerInView } from '../../../../_components/in-view.ts';
import type { PageProps } from '../../../../_components/page-props.ts';
import { filterAsked, pageAsked } from './flag-filter.tsx';
import { QualityView } from './quality-view.tsx';

export const metadata: Metadata = { title: 'Weather quality' };

export default async function QualityPage({ searchParams }: PageProps) {
  const [caller, query] = await Promise.all([callerInView(), searchParams]);
  const filter = filterAsked(query);
  const [checks, flags, corrections] = await Promise.all([
    answerChecks(caller),
    answerFlags(caller, { ...filter, ...pageAsked(query) }),
    answerCorrections(caller, { limit: 100 }),
  ]);
  return (
    <QualityView
      checks={checks}
      flags={flags}
      corrections={corrections.items}
      query={query}
      mayAct={caller.scope !== 'read'}
      timeZone={caller.district.timeZone}
    />
  );
}
