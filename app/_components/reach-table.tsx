import type { UnitSystem } from '../../lib/base/units.ts';
import { capacityStatus } from '../../lib/canal/reach-period.ts';
import type { BandRow } from '../../lib/http/contract/band.ts';
import type { ReachPeriod } from '../../lib/http/contract/run.ts';
import { type Column, DataTable } from './data-table.tsx';
import { figure, percent, unitOf } from './figures.ts';
import { Go } from './go.tsx';
import { inTreeOrder } from './reach-order.ts';

const WORDS = { within: '', tight: 'tight', over: 'over capacity' } as const;

/** What the share of capacity means, in a word; blank while there is room or the capacity is not known. */
export function capacityWord(share: number | null): string {
  const status = share === null ? null : capacityStatus(share);
  return status ? WORDS[status] : '';
}

/** The tree as a table: each reach under the one that feeds it. */
export function ReachTable({ reaches, band, units, period, long }: ReachTableProps) {
  return (
    <DataTable
      caption={`Reaches, ${period}`}
      rows={inTreeOrder(reaches)}
      rowKey={(row) => row.reach}
      columns={columnsOf(units, long, band)}
      unitsBelow
    />
  );
}

interface ReachTableProps {
  readonly reaches: readonly ReachPeriod[];
  /** head inflow by reach; without rows where the run has no band */
  readonly band?: ReadonlyMap<string, BandRow>;
  readonly units: UnitSystem;
  readonly period: string;
  /** the period holds more than a week, so that its busiest one differs from its mean */
  readonly long: boolean;
}

function columnsOf(units: UnitSystem, long: boolean, band: ReadonlyMap<string, BandRow> = new Map()): Column<ReachPeriod>[] {
  const volume = (key: string, head: string, pick: (row: ReachPeriod) => number | null): Column<ReachPeriod> => ({
    key,
    head,
    unit: unitOf('volume', units),
    numeric: true,
    cell: (row) => figure(pick(row), 'volume', units),
  });
  const flow = (key: string, head: string, pick: (row: ReachPeriod) => number | null): Column<ReachPeriod> => ({
    key,
    head,
    unit: unitOf('flow', units),
    numeric: true,
    cell: (row) => figure(pick(row), 'flow', units),
  });
  return [
    { key: 'reach', head: 'Reach', rowHead: true, cell: (row) => <ReachName row={row} /> },
    { key: 'kind', head: 'Kind', cell: (row) => row.kind },
    {
      key: 'length',
      head: 'Length',
      unit: unitOf('distance', units),
      numeric: true,
      cell: (row) => figure(row.length_km, 'distance', units),
    },
    volume('demand', 'Turnouts', (row) => row.turnout_demand_m3),
    volume('loss', 'Lost', (row) => row.reach_loss_m3),
    volume('inflow', 'Head inflow', (row) => row.head_inflow_m3),
    ...(band.size > 0
      ? [
          volume('low', 'Low (P10)', (row) => band.get(row.reach)?.p10_m3 ?? null),
          volume('high', 'High (P90)', (row) => band.get(row.reach)?.p90_m3 ?? null),
        ]
      : []),
    flow('mean', 'Mean', (row) => row.mean_inflow_m3_s),
    ...(long ? [flow('busiest', 'Busiest 7 days', (row) => row.busiest_week_inflow_m3_s)] : []),
    flow('peak', 'Peak day', (row) => row.peak_inflow_m3_s),
    flow('capacity', 'Capacity', (row) => row.capacity_m3_s),
    {
      key: 'share',
      head: shareHead(long),
      numeric: true,
      cell: (row) => <CapacityBar share={row.capacity_share} />,
    },
    { key: 'estimated', head: 'Estimated weather', numeric: true, cell: (row) => percent(row.estimated_share) },
  ];
}

/** What a reach is held against its capacity by: within a week, its mean. */
export function shareHead(long: boolean): string {
  return long ? 'Busiest 7 days ÷ capacity' : 'Mean ÷ capacity';
}

function ReachName({ row }: { row: ReachPeriod }) {
  return (
    <span id={row.reach} style={{ paddingInlineStart: `${row.level * 0.6}rem`, whiteSpace: 'nowrap' }}>
      <Go href={`/parcels?reach=${encodeURIComponent(row.reach)}`} title={`Parcels on ${row.name}`}>
        {row.name || row.reach}
      </Go>{' '}
      {row.name && row.name !== row.reach ? <span className="muted mono">{row.reach}</span> : null}
    </span>
  );
}

/** Share of capacity: bar, number and a word when it is nearly or more than full. */
export function CapacityBar({ share }: { share: number | null }) {
  if (share === null) return <span className="muted">capacity not known</span>;
  const word = capacityWord(share);
  return (
    <>
      {word ? <span className={`tag ${word === 'tight' ? 'caution' : 'bad'}`}>{word}</span> : null}{' '}
      <span className="bar" data-over={share > 1} style={{ '--share': share } as React.CSSProperties}>
        {percent(share, Math.abs(share - 1) < 0.005 ? 1 : 0)}
      </span>
    </>
  );
}
