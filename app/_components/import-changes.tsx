import type { ImportAnswer } from '../../lib/http/contract/rest.ts';
import { type Column, DataTable } from './data-table.tsx';
import { Go } from './go.tsx';
import { changesOf } from './import-words.ts';
import { Section } from './page-head.tsx';

interface Outcome {
  readonly runs?: readonly string[] | null;
  readonly runs_refused?: readonly string[];
}

type Change = ReturnType<typeof changesOf>[number];

const COLUMNS: readonly Column<Change>[] = [
  { key: 'thing', head: 'What', rowHead: true, cell: (row) => row.thing },
  { key: 'added', head: 'Added', numeric: true, cell: (row) => row.added },
  { key: 'changed', head: 'Changed', numeric: true, cell: (row) => row.changed },
  { key: 'removed', head: 'Removed', numeric: true, cell: (row) => row.removed },
];

/** After applying or undoing: what changed, and where to look next. */
export function ImportChanges({ now, when }: { now: ImportAnswer; when: { readonly applied: string; readonly undone: string } }) {
  if (now.state !== 'applied' && now.state !== 'undone') return null;
  const applied = (now.understood?.applied ?? {}) as Outcome & Record<string, unknown>;
  if (now.state === 'undone') {
    return (
      <Section title={`Undone ${when.undone}`}>
        <p>Everything this import changed is as it was before.</p>
        <RunLinks outcome={(now.understood?.undone ?? {}) as Outcome} />
      </Section>
    );
  }
  const rows = changesOf(applied);
  return (
    <Section title={`Applied ${when.applied}`}>
      {rows.length > 0 ? (
        <DataTable caption="What changed" columns={COLUMNS} rows={rows} rowKey={(row) => row.thing} />
      ) : (
        <p>The district already had all of it: nothing changed.</p>
      )}
      <p className="row">
        <Go href="/">Demand map</Go>
        <Go href="/parcels">Parcels</Go>
        <Go href="/canals">Canals</Go>
        <Go href="/weather">Weather</Go>
      </p>
      <RunLinks outcome={applied} />
    </Section>
  );
}

function RunLinks({ outcome }: { outcome: Outcome }) {
  return (
    <>
      {outcome.runs?.length ? (
        <p>
          Seasons being computed anew:{' '}
          {outcome.runs.map((run, at) => (
            <span key={run}>
              {at > 0 ? ', ' : ''}
              <Go href={`/runs/${run}`}>run {run.slice(0, 8)}</Go>
            </span>
          ))}
        </p>
      ) : null}
      {outcome.runs_refused?.map((reason) => (
        <p key={reason} className="notice caution">
          Not computed: {reason}
        </p>
      ))}
    </>
  );
}
