import type { Metadata } from 'next';
import { answerMethods, answerSoils } from '../../../lib/http/answers/land.ts';
import { answerRuns } from '../../../lib/http/answers/run.ts';
import { answerSites } from '../../../lib/http/answers/weather.ts';
import { callerInView, districtInView } from '../../_components/in-view.ts';
import { PageHead } from '../../_components/page-head.tsx';
import { RunList } from './run-list.tsx';
import { StartRun } from './start-run.tsx';

export const metadata: Metadata = { title: 'Runs' };

export default async function RunsPage() {
  const [caller, district] = await Promise.all([callerInView(), districtInView()]);
  const [runs, soils, methods, sites] = await Promise.all([
    answerRuns(caller),
    answerSoils(caller),
    answerMethods(caller),
    answerSites(caller),
  ]);
  return (
    <div className="page">
      <PageHead
        title="Runs"
        lead="A run computes a whole season from the weather, land, crops and canals of the moment. The newest finished run of a season stands: every screen shows its figures."
      />
      <RunList runs={runs} timeZone={caller.district.timeZone} mayCancel={caller.scope !== 'read'} />
      <StartRun
        district={district}
        soils={soils}
        methods={methods}
        sources={[...new Set(sites.map((site) => site.source))]}
        allowed={caller.scope !== 'read'}
      />
    </div>
  );
}
