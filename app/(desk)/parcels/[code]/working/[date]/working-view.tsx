import { addDays } from '../../../../../../lib/base/civil-date.ts';
import type { RunAnswer, WorkingAnswer } from '../../../../../../lib/http/contract/run.ts';
import { longDate } from '../../../../../_components/date-words.ts';
import { Caution, EmptyState } from '../../../../../_components/empty-state.tsx';
import { Go } from '../../../../../_components/go.tsx';
import { PageHead } from '../../../../../_components/page-head.tsx';
import { decoded } from '../../../../../_components/page-props.ts';
import { hrefWith, one, type Query } from '../../../../../_components/query.ts';
import { groupSteps, partName, WorkingSteps } from '../../../../../_components/working-steps.tsx';

/** The derivation of one parcel and day, as a page of a handbook. */
export function WorkingView({ run, working, query }: { run: RunAnswer; working: WorkingAnswer; query: Query }) {
  const parcel = `/parcels/${encodeURIComponent(working.parcel)}`;
  const kept = { run: one(query, 'run') ?? null };
  return (
    <div className="page">
      <PageHead
        title={`Working of parcel ${working.parcel}, ${longDate(working.date)}`}
        lead={`Written out by the code that computes the season: the weather of the day, each equation with the numbers put in, its source and its result. Units are those of the published equations. Run of season ${run.season}, ${run.settings.method === 'fao56' ? 'FAO-56' : 'ASCE 2005'} reference ET.`}
        crumbs={[
          ['/parcels', 'Parcels'],
          [hrefWith(parcel, {}, { ...kept, date: working.date }), working.parcel],
        ]}
      >
        <DayLink
          run={run}
          date={addDays(working.date, -1)}
          href={(date) => hrefWith(`${parcel}/working/${date}`, {}, kept)}
          label="Day before"
        />
        <DayLink
          run={run}
          date={addDays(working.date, 1)}
          href={(date) => hrefWith(`${parcel}/working/${date}`, {}, kept)}
          label="Day after"
        />
      </PageHead>
      <Parts working={working} />
      <WorkingSteps working={working} />
      <Caution>
        Coefficients describe well-managed crops in published conditions. Where a field differs, the figures differ with it; they do not
        replace measurement.
      </Caution>
    </div>
  );
}

/** The date is none, or lies outside the run. */
export function NoSuchDay({ run, date }: { run: RunAnswer; date: string }) {
  return (
    <div className="page">
      <EmptyState title={`${decoded(date)} is not a day of this run`}>
        Choose a day from {longDate(run.start_date)} to {longDate(run.end_date)}.
      </EmptyState>
    </div>
  );
}

function DayLink({ run, date, href, label }: { run: RunAnswer; date: string; href: (date: string) => string; label: string }) {
  if (date < run.start_date || date > run.end_date) return null;
  return (
    <Go className="button" href={href(date)}>
      {label}
    </Go>
  );
}

function Parts({ working }: { working: WorkingAnswer }) {
  const parts = [...new Set(groupSteps(working.steps).map((group) => group.part))];
  return (
    <nav className="row small no-print" aria-label="Parts of the working">
      <a href="#sites">Weather at the sites</a>
      {parts.map((part) => (
        <a key={part} href={`#${part}`}>
          {partName(part)}
        </a>
      ))}
      <a href="#results">Results</a>
    </nav>
  );
}
