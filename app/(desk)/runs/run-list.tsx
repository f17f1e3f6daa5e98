import type { RunAnswer } from '../../../lib/http/contract/run.ts';
import { type Column, DataTable } from '../../_components/data-table.tsx';
import { moment } from '../../_components/date-words.ts';
import { EmptyState } from '../../_components/empty-state.tsx';
import { MISSING_MARK, percent, plain, significant } from '../../_components/figures.ts';
import { Go } from '../../_components/go.tsx';
import { Section } from '../../_components/page-head.tsx';
import { RunProgress } from '../../_components/run-progress.tsx';
import { STATES } from '../../_components/run-words.ts';

/** Runs under way with their progress, then every run. */
export function RunList({ runs, timeZone, mayCancel }: { runs: readonly RunAnswer[]; timeZone: string; mayCancel: boolean }) {
  const going = runs.filter((run) => run.state === 'queued' || run.state === 'running');
  if (runs.length === 0)
    return <EmptyState title="No run yet">Choose a season below and start one. Every screen fills when it is done.</EmptyState>;
  return (
    <>
      {going.map((run) => (
        <RunProgress
          key={run.id}
          id={run.id}
          season={run.season}
          state={run.state}
          stage={run.stage}
          progress={run.progress}
          mayCancel={mayCancel}
        />
      ))}
      <Section id="runs" title="Every run">
        <DataTable caption="Runs, newest first" columns={columnsOf(timeZone)} rows={runs} rowKey={(run) => run.id} />
      </Section>
    </>
  );
}

function columnsOf(timeZone: string): Column<RunAnswer>[] {
  return [
    {
      key: 'started',
      head: 'Asked for',
      rowHead: true,
      oneLine: true,
      cell: (run) => <Go href={`/runs/${run.id}`}>{moment(run.created_at, timeZone)}</Go>,
    },
    { key: 'season', head: 'Season', cell: (run) => run.season },
    { key: 'state', head: 'State', cell: (run) => <RunState run={run} /> },
    { key: 'parcels', head: 'Parcels', numeric: true, cell: (run) => plain(run.parcel_count, 0) },
    { key: 'method', head: 'Reference ET', cell: (run) => (run.settings.method === 'fao56' ? 'FAO-56' : 'ASCE 2005') },
    { key: 'seconds', head: 'Took', unit: 's', numeric: true, cell: (run) => plain(run.balance.seconds, 1) },
    { key: 'balance', head: 'Water balance', oneLine: true, cell: (run) => <Closes residual={run.balance.max_residual_mm} /> },
    { key: 'estimated', head: 'Most used estimate', numeric: true, cell: (run) => percent(mostUsed(run)) },
  ];
}

export function RunState({ run }: { run: RunAnswer }) {
  const tone = { done: 'good', failed: 'bad', cancelled: '', queued: '', running: 'caution' }[run.state];
  return (
    <>
      <span className={`tag ${tone}`}>{STATES[run.state]}</span> {run.standing ? <strong>in use</strong> : null}
      {run.stale_since ? <span className="tag caution">older than the data</span> : null}
    </>
  );
}

/** Residual up to which a balance closes: rounding of double precision over a season stays far below it [mm]. */
const CLOSES_WITHIN = 1e-6;

function Closes({ residual }: { residual: number | undefined }) {
  if (residual === undefined) return MISSING_MARK;
  const text = `${significant(residual, 1)} mm`;
  if (residual <= CLOSES_WITHIN) return <span className="muted">closes to {text}</span>;
  return <span className="tag bad">off by up to {text}</span>;
}

function mostUsed(run: RunAnswer): number | undefined {
  const shares = Object.entries(run.balance.fallback_shares ?? {}).filter(([name]) => name !== 'humidityFromDewPoint');
  return shares.length ? Math.max(...shares.map(([, share]) => share)) : undefined;
}
