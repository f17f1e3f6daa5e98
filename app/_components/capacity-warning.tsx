import type { ReactNode } from 'react';
import type { UnitSystem } from '../../lib/base/units.ts';
import type { ReachPeriod } from '../../lib/http/contract/run.ts';
import { figure, percent, unitOf } from './figures.ts';
import { capacityWord } from './reach-table.tsx';

/** Reaches named before the rest is folded away. */
const NAMED_AT_ONCE = 8;

interface CapacityWarningProps {
  readonly reaches: readonly ReachPeriod[];
  readonly period: string;
  readonly units: UnitSystem;
  /** the period holds more than a week, so that its busiest one differs from its mean */
  readonly long: boolean;
}

/** Names the reaches that cannot carry what is asked of them in the period, those near it, and those that single days overfill. */
export function CapacityWarning({ reaches, period, units, long }: CapacityWarningProps) {
  const over = reaches.filter((row) => capacityWord(row.capacity_share) === 'over capacity').sort(fullestFirst);
  const tight = reaches.filter((row) => capacityWord(row.capacity_share) === 'tight').sort(fullestFirst);
  const crowded = reaches.filter((row) => isOverOnDays(row) && !over.includes(row)).sort(highestPeakFirst);
  const mean = long ? 'busiest seven days' : 'mean';
  const said = (row: ReachPeriod) =>
    `${row.name || row.reach}: ${mean} ${figure(row.busiest_week_inflow_m3_s, 'flow', units)} of ${capacityText(row, units)} (${percent(row.capacity_share, near(row))}), peak day ${figure(row.peak_inflow_m3_s, 'flow', units)}`;
  return (
    <div className="cautions">
      {over.length ? (
        <Warning
          tone="bad"
          rows={over}
          say={said}
          lead={`${over.length === 1 ? 'One reach' : `${over.length} reaches`} cannot carry the demand, ${period}.`}
        >
          {long ? 'The busiest seven days ask' : 'The week asks'} for more than the canal holds: cut demand or move it to another week,
          enlarge the reach, or share the shortage by the district’s rules.
        </Warning>
      ) : (
        <p className="notice good" role="status">
          Every reach of known capacity can carry {long ? 'its busiest seven days' : 'the week’s demand'}, {period}.
        </p>
      )}
      {tight.length ? (
        <p className="notice caution">
          Tight, 90 % or more of capacity: {tight.map((row) => `${row.name || row.reach} ${percent(row.capacity_share)}`).join(', ')}.
        </p>
      ) : null}
      {crowded.length ? <Crowded rows={crowded} units={units} /> : null}
    </div>
  );
}

/** The week fits, but not every day of it. */
function Crowded({ rows, units }: { rows: readonly ReachPeriod[]; units: UnitSystem }) {
  const said = (row: ReachPeriod) =>
    `${row.name || row.reach}: peak day ${figure(row.peak_inflow_m3_s, 'flow', units)} of ${capacityText(row, units)}`;
  return (
    <details className="notice">
      <summary>
        {rows.length === 1 ? 'One more reach is' : `${rows.length} more reaches are`} asked for more than capacity on single days only:
        spread deliveries within the week.
      </summary>
      <List rows={rows} say={said} />
    </details>
  );
}

interface WarningProps {
  readonly tone: 'bad' | 'caution';
  readonly lead: string;
  readonly rows: readonly ReachPeriod[];
  readonly say: (row: ReachPeriod) => string;
  readonly children: ReactNode;
}

function Warning({ tone, lead, rows, say, children }: WarningProps) {
  return (
    <div className={`notice ${tone}`} role="status">
      <p>
        <strong>{lead}</strong> {children}
      </p>
      <List rows={rows.slice(0, NAMED_AT_ONCE)} say={say} />
      {rows.length > NAMED_AT_ONCE ? (
        <details>
          <summary>The other {rows.length - NAMED_AT_ONCE}</summary>
          <List rows={rows.slice(NAMED_AT_ONCE)} say={say} />
        </details>
      ) : null}
    </div>
  );
}

function List({ rows, say }: Pick<WarningProps, 'rows' | 'say'>) {
  return (
    <ul>
      {rows.map((row) => (
        <li key={row.reach}>{say(row)}</li>
      ))}
    </ul>
  );
}

function capacityText(row: ReachPeriod, units: UnitSystem): string {
  return `${figure(row.capacity_m3_s, 'flow', units)} ${unitOf('flow', units)}`;
}

/** One decimal where whole percents would read as exactly full. */
function near(row: ReachPeriod): number {
  return Math.abs((row.capacity_share ?? 0) - 1) < 0.005 ? 1 : 0;
}

/** NaN and unknown capacities are over on no day. */
function isOverOnDays(row: ReachPeriod): boolean {
  return row.capacity_m3_s !== null && row.capacity_m3_s > 0 && (row.peak_inflow_m3_s ?? 0) > row.capacity_m3_s;
}

function fullestFirst(a: ReachPeriod, b: ReachPeriod): number {
  return (b.capacity_share ?? 0) - (a.capacity_share ?? 0);
}

function highestPeakFirst(a: ReachPeriod, b: ReachPeriod): number {
  return (b.peak_inflow_m3_s ?? 0) - (a.peak_inflow_m3_s ?? 0);
}
