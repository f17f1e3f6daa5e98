import type { Metadata } from 'next';
import { Cautions, NoRunPage } from '../../_components/empty-state.tsx';
import { callerInView } from '../../_components/in-view.ts';
import { PageHead } from '../../_components/page-head.tsx';
import type { PageProps } from '../../_components/page-props.ts';
import { ReportLinks } from '../../_components/report-links.tsx';
import { runAsked } from '../../_components/run-asked.ts';

export const metadata: Metadata = { title: 'Reports' };

export default async function ReportsPage({ searchParams }: PageProps) {
  const [caller, query] = await Promise.all([callerInView(), searchParams]);
  const run = await runAsked(caller, query);
  if (!run) return <NoRunPage />;
  return (
    <div className="page">
      <PageHead title="Reports" lead={`Documents of season ${run.season}, from the same figures as the screens.`} />
      <ReportLinks run={run.id} units={caller.units} />
      <Cautions which={['decisions', 'estimates', 'losses']} />
    </div>
  );
}
