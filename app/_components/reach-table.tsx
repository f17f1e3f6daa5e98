import type { UnitSystem } from '../../lib/base/units.ts';
import { capacityStatus } from '../../lib/canal/reach-period.ts';
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
export function ReachTable({ reaches, units, period }: { reaches: readonly ReachPeriod[]; units: UnitSystem; period: string }) {
  return <DataTable caption={`Reaches, ${period}`} rows={inTreeOrder(reaches)} rowKey={(row) => row.reach} columns={columnsOf(units)} />;
}

function columnsOf(units: UnitSystem): Column<ReachPeriod>[] {
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
    flow('mean', 'Mean', (row) => row.mean_inflow_m3_s),
    flow('peak', 'Peak day', (row) => row.peak_inflow_m3_s),
    flow('capacity', 'Capacity', (row) => row.capacity_m3_s),
    { key: 'share', head: 'Peak ÷ capacity', numeric: true, cell: (row) => <CapacityBar share={row.capacity_share} /> },
  ];
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

/** Reaches named before the rest is folded away. */
const NAMED_AT_ONCE = 8;

function OverList({ rows, units }: { rows: readonly ReachPeriod[]; units: UnitSystem }) {
  return (
    <ul>
      {rows.map((row) => (
        <li key={row.reach}>
          {row.name || row.reach}: peak {figure(row.peak_inflow_m3_s, 'flow', units)} of {figure(row.capacity_m3_s, 'flow', units)}{' '}
          {unitOf('flow', units)} ({percent(row.capacity_share)})
        </li>
      ))}
    </ul>
  );
}

/** Names the reaches that cannot carry what is asked of them in the period, and those near it. */
export function CapacityWarning({ reaches, period, units }: { reaches: readonly ReachPeriod[]; period: string; units: UnitSystem }) {
  const over = reaches
    .filter((row) => capacityWord(row.capacity_share) === 'over capacity')
    .sort((a, b) => (b.capacity_share ?? 0) - (a.capacity_share ?? 0));
  const tight = reaches.filter((row) => capacityWord(row.capacity_share) === 'tight');
  if (over.length === 0 && tight.length === 0) {
    return <p className="notice good">Every reach of known capacity can carry what is asked of it, {period}.</p>;
  }
  return (
    <div className={`notice ${over.length ? 'bad' : 'caution'}`} role="status">
      {over.length ? (
        <>
          <p>
            <strong>
              {over.length === 1 ? 'One reach' : `${over.length} reaches`} cannot carry the demand, {period}.
            </strong>{' '}
            Spread deliveries over more days, cut demand below, or carry the excess another way:
          </p>
          <OverList rows={over.slice(0, NAMED_AT_ONCE)} units={units} />
          {over.length > NAMED_AT_ONCE ? (
            <details>
              <summary>The other {over.length - NAMED_AT_ONCE}</summary>
              <OverList rows={over.slice(NAMED_AT_ONCE)} units={units} />
            </details>
          ) : null}
        </>
      ) : null}
      {tight.length ? (
        <p>Tight (90 % or more): {tight.map((row) => `${row.name || row.reach} ${percent(row.capacity_share)}`).join(', ')}.</p>
      ) : null}
    </div>
  );
}
