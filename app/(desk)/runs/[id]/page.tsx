import type { Metadata } from 'next';
import { districtBand } from '../../../../lib/http/answers/band.ts';
import { answerRun } from '../../../../lib/http/answers/run.ts';
import { callerInView } from '../../../_components/in-view.ts';
import { orNotFound } from '../../../_components/or-not-found.ts';
import type { PageProps } from '../../../_components/page-props.ts';
import { RunView } from './run-view.tsx';

export const metadata: Metadata = { title: 'Run' };

export default async function RunPage({ params }: PageProps<'id'>) {
  const [caller, { id }] = await Promise.all([callerInView(), params]);
  const run = await orNotFound(answerRun(caller, id));
  const band = run.state === 'done' ? await districtBand(caller, id) : null;
  const shown = { run, band, timeZone: caller.district.timeZone, units: caller.units };
  return <RunView {...shown} mayCancel={caller.scope !== 'read'} />;
}
