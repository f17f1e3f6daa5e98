import type { UnitSystem } from '../../../lib/base/units.ts';
import type { ReachPeriod, RunAnswer } from '../../../lib/http/contract/run.ts';
import { periodName } from '../../_components/date-words.ts';
import { Caution, Cautions, EmptyState } from '../../_components/empty-state.tsx';
import { figure, unitOf } from '../../_components/figures.ts';
import { FlowProfile } from '../../_components/flow-profile.tsx';
import { Go } from '../../_components/go.tsx';
import { PageHead, Section } from '../../_components/page-head.tsx';
import type { PeriodChoice } from '../../_components/period-choice.ts';
import { PeriodPicker } from '../../_components/period-picker.tsx';
import type { Query } from '../../_components/query.ts';
import { ReachDiagram } from '../../_components/reach-diagram.tsx';
import { headsOf } from '../../_components/reach-order.ts';
import { CapacityBar, CapacityWarning, ReachTable } from '../../_components/reach-table.tsx';

interface CanalViewProps {
  readonly run: RunAnswer;
  readonly reaches: readonly ReachPeriod[];
  readonly choice: PeriodChoice;
  readonly query: Query;
  readonly grower: boolean;
  readonly units: UnitSystem;
}

/** What every reach must carry in a period: warnings, line diagram, profile, table. */
export function CanalView({ run, reaches, choice, query, grower, units }: CanalViewProps) {
  const period = periodName(choice.kind, choice.period);
  return (
    <div className="page">
      <PageHead
        title="Canals"
        lead="What each reach must carry to meet the demand below it: turnouts, its own losses, and everything it feeds."
      >
        <a className="button" href={`/api/v1/runs/${run.id}/reports/reaches.csv?period=${choice.kind}&units=${units}`}>
          CSV, every {choice.kind}
        </a>
      </PageHead>
      <PeriodPicker path="/canals" query={{ ...query, period: choice.kind }} choice={choice} />
      {reaches.length === 0 ? (
        <NoReaches grower={grower} />
      ) : (
        <>
          <CapacityWarning reaches={reaches} period={period} units={units} />
          <Headworks reaches={reaches} units={units} />
          <Section id="diagram-section" title="Line diagram">
            <ReachDiagram reaches={reaches} units={units} period={period} />
          </Section>
          <Section id="profile-section" title="Profile of the main canal">
            <FlowProfile reaches={reaches} units={units} period={period} />
          </Section>
          <Section
            id="table"
            title="Reach by reach"
            note="A reach stands under the one that feeds it. Inflow = taken by its turnouts + lost in the reach + inflow of the reaches it feeds."
          >
            <ReachTable reaches={reaches} units={units} period={period} />
          </Section>
        </>
      )}
      <Caution>
        These flows follow from computed demand. They do not replace canal operation rules, measured flow, water law or licensed engineering
        judgement, and leave out the time that water takes to arrive.
      </Caution>
      <Cautions which={['decisions', 'losses']} />
    </div>
  );
}

function Headworks({ reaches, units }: { reaches: readonly ReachPeriod[]; units: UnitSystem }) {
  return headsOf(reaches).map((head) => (
    <dl key={head.reach} className="figures">
      <Big
        name={`Diversion at ${head.name || head.reach}`}
        value={figure(head.head_inflow_m3, 'volume', units)}
        unit={unitOf('volume', units)}
      />
      <Big name="Mean flow" value={figure(head.mean_inflow_m3_s, 'flow', units)} unit={unitOf('flow', units)} />
      <Big name="Delivered to turnouts" value={figure(head.demand_below_m3, 'volume', units)} unit={unitOf('volume', units)} />
      <Big name="Lost on the way" value={figure(head.loss_below_m3, 'volume', units)} unit={unitOf('volume', units)} />
      <div>
        <dt>Peak ÷ capacity of the first reach</dt>
        <dd>
          <CapacityBar share={head.capacity_share} />
        </dd>
      </div>
    </dl>
  ));
}

function Big({ name, value, unit }: { name: string; value: string; unit: string }) {
  return (
    <div>
      <dt>{name}</dt>
      <dd>
        {value} <span className="unit">{unit}</span>
      </dd>
    </div>
  );
}

function NoReaches({ grower }: { grower: boolean }) {
  if (grower)
    return (
      <EmptyState title="Canals are shown to the district only">The flow of a small reach would tell what a neighbour uses.</EmptyState>
    );
  return (
    <EmptyState title="No canals yet">
      <Go href="/imports">Bring in</Go> canals: lines with a code, the reach that feeds each, capacity and a loss rule. Then run the season
      again.
    </EmptyState>
  );
}
