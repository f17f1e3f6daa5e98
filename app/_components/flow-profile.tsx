import { scaleLinear } from 'd3-scale';
import type { UnitSystem } from '../../lib/base/units.ts';
import type { ReachPeriod } from '../../lib/http/contract/run.ts';
import { type Box, ChartFrame, type LegendItem, markClass, NamedAxis, ValueAxis, valueScale } from './chart-frame.tsx';
import { DataTable, FiguresBelow } from './data-table.tsx';
import { figure, figureWithUnit, inUnits, plain, unitOf } from './figures.ts';
import { type DrawnReach, drawnTree, mainCanal } from './reach-order.ts';

const BOX: Box = { left: 54, right: 950, top: 30, bottom: 250 };
const MEAN: LegendItem = { label: 'Mean inflow of the reach', mark: 'first' };
const BUSIEST: LegendItem = { label: 'Mean of its busiest seven days', mark: 'third' };
const PEAK: LegendItem = { label: 'Peak day', mark: 'second' };
const CAPACITY: LegendItem = { label: 'Capacity', mark: 'raw' };

type Drawn = DrawnReach<ReachPeriod>;
type Pick = (row: ReachPeriod) => number | null;

interface FlowProfileProps {
  readonly reaches: readonly ReachPeriod[];
  readonly units: UnitSystem;
  readonly period: string;
  /** the period holds more than a week, so that its busiest one differs from its mean */
  readonly long: boolean;
}

/** Flow along the main canal, from the headworks to its tail. */
export function FlowProfile({ reaches, units, period, long }: FlowProfileProps) {
  const main = mainCanal(drawnTree(reaches));
  const distance = (km: number) => inUnits(km, 'distance', units);
  const end = distance(main[main.length - 1].to);
  const x = scaleLinear().domain([0, end]).range([BOX.left, BOX.right]);
  const flows = (pick: Pick) => main.map((reach) => inUnits(pick(reach.row), 'flow', units));
  const [mean, busiest, peak, capacity] = [
    flows((row) => row.mean_inflow_m3_s),
    flows((row) => row.busiest_week_inflow_m3_s),
    flows((row) => row.peak_inflow_m3_s),
    flows((row) => row.capacity_m3_s),
  ];
  const y = valueScale([mean, peak, capacity], BOX);
  const steps = (values: readonly number[]) =>
    stepPath(main.map((reach, at) => ({ from: x(distance(reach.from)), to: x(distance(reach.to)), y: y(values[at]) })));
  return (
    <ChartFrame
      id="profile"
      title={`Flow along the main canal, ${period}`}
      description={chartWords(main, units)}
      width={960}
      height={292}
      legend={long ? [MEAN, BUSIEST, PEAK, CAPACITY] : [MEAN, PEAK, CAPACITY]}
      below={<ProfileTable main={main} units={units} long={long} />}
    >
      <ValueAxis scale={y} box={BOX} label={`Flow, ${unitOf('flow', units)}`} />
      <path className={markClass('raw')} d={steps(capacity)} />
      <path className={markClass('second')} d={steps(peak)} />
      {long ? <path className={markClass('third')} d={steps(busiest)} /> : null}
      <path className={markClass('first')} d={steps(mean)} />
      <NamedAxis
        scale={x}
        box={BOX}
        ticks={x.ticks(8).map((offset) => ({ offset, name: plain(offset, end < 8 ? 1 : 0) }))}
        label={`Distance from the headworks, ${unitOf('distance', units)}`}
      />
    </ChartFrame>
  );
}

interface FlowStep {
  readonly from: number;
  readonly to: number;
  readonly y: number;
}

/** A path that is level along each reach and steps between them; broken where a value is missing. */
export function stepPath(steps: readonly FlowStep[]): string {
  let open = false;
  const parts: string[] = [];
  for (const step of steps) {
    if (Number.isFinite(step.y)) parts.push(`${open ? `V${round(step.y)}` : `M${round(step.from)} ${round(step.y)}`}H${round(step.to)}`);
    open = Number.isFinite(step.y);
  }
  return parts.join('');
}

function round(value: number): number {
  return Math.round(value * 10) / 10;
}

function ProfileTable({ main, units, long }: { main: readonly Drawn[]; units: UnitSystem; long: boolean }) {
  const flow = (key: string, head: string, pick: Pick) => ({
    key,
    head,
    unit: unitOf('flow', units),
    numeric: true,
    cell: (reach: Drawn) => figure(pick(reach.row), 'flow', units),
  });
  return (
    <FiguresBelow summary="The profile as a table" printed>
      <DataTable
        caption="Flow along the main canal"
        rows={main}
        rowKey={(reach) => reach.row.reach}
        columns={[
          { key: 'reach', head: 'Reach', rowHead: true, cell: (reach) => reach.row.name || reach.row.reach },
          {
            key: 'from',
            head: 'From',
            unit: unitOf('distance', units),
            numeric: true,
            cell: (reach) => figure(reach.from, 'distance', units),
          },
          { key: 'to', head: 'To', unit: unitOf('distance', units), numeric: true, cell: (reach) => figure(reach.to, 'distance', units) },
          flow('mean', 'Mean', (row) => row.mean_inflow_m3_s),
          ...(long ? [flow('busiest', 'Busiest 7 days', (row) => row.busiest_week_inflow_m3_s)] : []),
          flow('peak', 'Peak day', (row) => row.peak_inflow_m3_s),
          flow('capacity', 'Capacity', (row) => row.capacity_m3_s),
        ]}
      />
    </FiguresBelow>
  );
}

function chartWords(main: readonly Drawn[], units: UnitSystem): string {
  const [first, last] = [main[0], main[main.length - 1]];
  return `From ${figureWithUnit(first.row.mean_inflow_m3_s, 'flow', units)} at the headworks to ${figureWithUnit(last.row.mean_inflow_m3_s, 'flow', units)} into the last reach, ${figureWithUnit(last.to, 'distance', units)} on.`;
}
