import type { Metadata } from 'next';
import { answerRuns } from '../../../lib/http/answers/run.ts';
import { callerInView } from '../../_components/in-view.ts';
import { PageHead } from '../../_components/page-head.tsx';
import { loadRunChoices } from './load-run-choices.ts';
import { RunList } from './run-list.tsx';
import { StartRun } from './start-run.tsx';

export const metadata: Metadata = { title: 'Runs' };

export default async function RunsPage() {
  const caller = await callerInView();
  const [runs, choices] = await Promise.all([answerRuns(caller), loadRunChoices(caller)]);
  return (
    <div className="page">
      <PageHead
        title="Runs"
        lead="A run computes a whole season. The newest finished run of a season is in use: every screen shows its figures."
      />
      <RunList runs={runs} timeZone={caller.district.timeZone} mayCancel={choices.allowed} />
      <StartRun {...choices} />
    </div>
  );
}
