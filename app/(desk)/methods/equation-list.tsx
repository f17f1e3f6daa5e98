import { DataTable } from '../../_components/data-table.tsx';
import { longDate } from '../../_components/date-words.ts';
import { Go } from '../../_components/go.tsx';
import { Section } from '../../_components/page-head.tsx';
import { partName } from '../../_components/working-steps.tsx';
import type { WorkedEquations } from './load-equations.ts';

/** The equations of an actual derivation, part by part. */
export function EquationList({ worked }: { worked: WorkedEquations | null }) {
  if (!worked) {
    return (
      <Section id="equations" title="Equations of the water chain">
        <p>
          They are listed here from the working of a real parcel as soon as a season has been run. <Go href="/runs">Start a run.</Go>
        </p>
      </Section>
    );
  }
  const parts = [...new Set(worked.equations.map((equation) => equation.part))];
  return (
    <Section id="equations" title="Equations of the water chain" note={<From worked={worked} />}>
      {parts.map((part) => (
        <div key={part} className="stack">
          <h3>{partName(part)}</h3>
          <DataTable
            caption={`Equations: ${partName(part)}`}
            rows={worked.equations.filter((equation) => equation.part === part)}
            rowKey={(equation) => `${equation.symbol} ${equation.expression} ${equation.source}`}
            columns={[
              { key: 'symbol', head: 'Symbol', rowHead: true, cell: (equation) => <var>{equation.symbol}</var> },
              { key: 'name', head: 'Quantity', cell: (equation) => equation.name },
              { key: 'expression', head: 'Equation', cell: (equation) => <span className="mono">{equation.expression}</span> },
              { key: 'unit', head: 'Unit', cell: (equation) => (equation.unit === '1' ? '' : equation.unit) },
              { key: 'source', head: 'Source', cell: (equation) => equation.source },
            ]}
          />
        </div>
      ))}
    </Section>
  );
}

function From({ worked }: { worked: WorkedEquations }) {
  return (
    <>
      As the code wrote them for parcel {worked.parcel} on{' '}
      {worked.dates.map((date, at) => (
        <span key={date}>
          {at > 0 ? ', ' : ''}
          <Go href={`/parcels/${encodeURIComponent(worked.parcel)}/working/${date}`}>{longDate(date)}</Go>
        </span>
      ))}
      . Other crops and methods use the same equations with their own numbers.
    </>
  );
}
