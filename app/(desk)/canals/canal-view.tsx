import type { UnitSystem } from '../../../lib/base/units.ts';
import type { BandRow } from '../../../lib/http/contract/band.ts';
import type { ReachPeriod, RunAnswer } from '../../../lib/http/contract/run.ts';
import { AheadPeriod } from '../../_components/ahead-period.tsx';
import { betweenText } from '../../_components/band-words.ts';
import { CapacityWarning } from '../../_components/capacity-warning.tsx';
import { periodName } from '../../_components/date-words.ts';
import { Cautions, EmptyState } from '../../_components/empty-state.tsx';
import { headline, type Quantity } from '../../_components/figures.ts';
import { FlowProfile } from '../../_components/flow-profile.tsx';
import { Go } from '../../_components/go.tsx';
import { PageHead, Section } from '../../_components/page-head.tsx';
import type { PeriodChoice } from '../../_components/period-choice.ts';
import { PeriodPicker } from '../../_components/period-picker.tsx';
import type { Query } from '../../_components/query.ts';
import { ReachDiagram } from '../../_components/reach-diagram.tsx';
import { headsOf } from '../../_components/reach-order.ts';
import { CapacityBar, ReachTable, shareHead } from '../../_components/reach-table.tsx';

interface CanalViewProps {
  readonly run: RunAnswer;
  readonly reaches: readonly ReachPeriod[];
  /** head inflow of the period by reach; empty where the run has no band */
  readonly band: ReadonlyMap<string, BandRow>;
  readonly choice: PeriodChoice;
  readonly query: Query;
  readonly grower: boolean;
  readonly units: UnitSystem;
}

/** What every reach must carry in a period: warnings, line diagram, profile, table. */
export function CanalView({ run, reaches, band, choice, query, grower, units }: CanalViewProps) {
  const period = periodName(choice.kind, choice.period);
  const long = choice.kind !== 'week';
  const shown = { reaches, units, period, long };
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
      <AheadPeriod ahead={run.days_ahead} period={choice.period} />
      {reaches.length === 0 ? (
        <NoReaches grower={grower} />
      ) : (
        <>
          <CapacityWarning {...shown} />
          <Headworks reaches={reaches} units={units} long={long} />
          <HeadworksBand reaches={reaches} band={band} units={units} />
          <Section id="diagram-section" title="Line diagram">
            <ReachDiagram reaches={reaches} units={units} period={period} />
          </Section>
          <Section id="profile-section" title="Profile of the main canal">
            <FlowProfile {...shown} />
          </Section>
          <Section
            id="table"
            title="Reach by reach"
            note="A reach stands under the one that feeds it. Inflow = taken by its turnouts + lost in the reach + inflow of the reaches it feeds. It is held against its capacity by the mean of its busiest seven days, because turns within a week level out single days; the peak day stands beside it."
          >
            <ReachTable {...shown} band={band} />
          </Section>
        </>
      )}
      <Cautions which={['decisions', 'losses']}>
        These flows follow from computed demand. They do not replace canal operation rules or measured flow, and leave out the time that
        water takes to arrive.
      </Cautions>
    </div>
  );
}

function Headworks({ reaches, units, long }: { reaches: readonly ReachPeriod[]; units: UnitSystem; long: boolean }) {
  return headsOf(reaches).map((head) => (
    <dl key={head.reach} className="figures">
      <Big name={`Diversion at ${head.name || head.reach}`} value={head.head_inflow_m3} quantity="volume" units={units} />
      <Big name="Mean flow" value={head.mean_inflow_m3_s} quantity="flow" units={units} />
      {long ? <Big name="Mean of its busiest seven days" value={head.busiest_week_inflow_m3_s} quantity="flow" units={units} /> : null}
      <Big name="Peak day" value={head.peak_inflow_m3_s} quantity="flow" units={units} />
      <Big name="Delivered to turnouts" value={head.demand_below_m3} quantity="volume" units={units} />
      <Big name="Lost on the way" value={head.loss_below_m3} quantity="volume" units={units} />
      <div>
        <dt>{shareHead(long)}, first reach</dt>
        <dd>
          <CapacityBar share={head.capacity_share} />
        </dd>
      </div>
    </dl>
  ));
}

/** How sure the diversion is, in a sentence; nothing where the run has no band. */
function HeadworksBand({ reaches, band, units }: Pick<CanalViewProps, 'reaches' | 'band' | 'units'>) {
  return headsOf(reaches).map(({ reach, name }) => {
    const between = betweenText(band.get(reach), 'volume', units);
    return between ? (
      <p key={reach}>
        In 8 of 10 cases the diversion at {name || reach} lies {between}. <Go href="/methods#band">How this is computed</Go>
      </p>
    ) : null;
  });
}

function Big(props: { name: string; value: number | null; quantity: Quantity; units: UnitSystem }) {
  const [number, unit] = headline(props.value, props.quantity, props.units);
  return (
    <div>
      <dt>{props.name}</dt>
      <dd>
        {number} <span className="unit">{unit}</span>
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
