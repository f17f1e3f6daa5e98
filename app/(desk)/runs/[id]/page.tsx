import type { Metadata } from 'next';
import { answerRun } from '../../../../lib/http/answers/run.ts';
import { callerInView } from '../../../_components/in-view.ts';
import { orNotFound } from '../../../_components/or-not-found.ts';
import type { PageProps } from '../../../_components/page-props.ts';
import { RunView } from './run-view.tsx';

export const metadata: Metadata = { title: 'Run' };

export default async function RunPage({ params }: PageProps<'id'>) {
  const [caller, { id }] = await Promise.all([callerInView(), params]);
  const run = await orNotFound(answerRun(caller, id));
  return <RunView run={run} timeZone={caller.district.timeZone} units={caller.units} mayCancel={caller.scope !== 'read'} />;
}
