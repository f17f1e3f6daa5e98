import type { GapRow, GapsAnswer } from '../../../../../lib/http/contract/gaps.ts';
import { type Column, DataTable } from '../../../../_components/data-table.tsx';
import { dateRange } from '../../../../_components/date-words.ts';
import { MISSING_MARK } from '../../../../_components/figures.ts';

/** Every gap of the days shown, with how its days were filled. */
export function GapTable({ rows }: { rows: readonly GapRow[] }) {
  return (
    <DataTable
      caption="Gaps and how their days were filled"
      rows={rows}
      rowKey={(row) => `${row.site} ${row.variable} ${row.from}`}
      columns={[
        { key: 'site', head: 'Site', rowHead: true, cell: (row) => row.name },
        { key: 'term', head: 'Variable', cell: (row) => row.term },
        { key: 'when', head: 'From – to', oneLine: true, cell: (row) => dateRange(row.from, row.to) },
        counted('days', 'Length', (row) => row.days),
        counted('neighbour', 'Neighbour', (row) => row.from_neighbour_days),
        counted('source', 'Other source', (row) => row.from_source_days),
        counted('time', 'Between days', (row) => row.in_time_days),
        counted('normal', 'Normal', (row) => row.from_normal_days),
        counted('left', 'Left to the estimate', (row) => row.left_days),
      ]}
    />
  );
}

function counted(key: string, head: string, count: (row: GapRow) => number): Column<GapRow> {
  return { key, head, unit: 'd', numeric: true, cell: (row) => (count(row) === 0 ? MISSING_MARK : count(row)) };
}

interface Regression {
  readonly gap: GapRow;
  readonly figures: GapRow['neighbours'][number];
}

/** The regressions behind the fills, and the best of those that were refused. */
export function RegressionTable({ rows, limits }: { rows: readonly GapRow[]; limits: GapsAnswer['limits'] }) {
  const regressions: Regression[] = rows.flatMap((gap) => gap.neighbours.map((figures) => ({ gap, figures })));
  return (
    <DataTable
      caption="Regressions on neighbouring sites"
      rows={regressions}
      rowKey={({ gap, figures }) => `${gap.site} ${gap.variable} ${gap.from} ${figures.neighbour}`}
      columns={[
        { key: 'site', head: 'Site', rowHead: true, cell: ({ gap }) => gap.name },
        { key: 'term', head: 'Variable', cell: ({ gap }) => gap.term },
        { key: 'when', head: 'Gap', oneLine: true, cell: ({ gap }) => dateRange(gap.from, gap.to) },
        { key: 'neighbour', head: 'Neighbour', cell: ({ figures }) => figures.neighbour },
        { key: 'distance', head: 'Distance', unit: 'km', numeric: true, cell: ({ figures }) => written(figures.distance_km, 1) },
        { key: 'n', head: `Common days (≥ ${limits.least_common_days})`, numeric: true, cell: ({ figures }) => figures.common_days },
        { key: 'r2', head: `r² (≥ ${limits.least_r2})`, numeric: true, cell: ({ figures }) => written(figures.r2, 2) },
        {
          key: 'slope',
          head: `Slope b (${limits.least_slope}–${limits.greatest_slope})`,
          numeric: true,
          cell: ({ figures }) => written(figures.slope, 2),
        },
        {
          key: 'intercept',
          head: 'Intercept a',
          numeric: true,
          cell: ({ gap, figures }) => (figures.intercept === null ? MISSING_MARK : `${written(figures.intercept, 2)} ${gap.unit}`),
        },
        {
          key: 'outcome',
          head: 'Outcome',
          wide: true,
          cell: ({ figures }) =>
            figures.accepted ? (
              <span className="tag good">filled {figures.filled_days} d</span>
            ) : (
              <span className="tag caution">not taken: {figures.refused_because}</span>
            ),
        },
      ]}
    />
  );
}

interface Borrowed {
  readonly gap: GapRow;
  readonly figures: GapRow['sources'][number];
}

/** What was taken from other sources, and what was taken off. */
export function SourceTable({ rows }: { rows: readonly GapRow[] }) {
  const borrowed: Borrowed[] = rows.flatMap((gap) => gap.sources.map((figures) => ({ gap, figures })));
  if (borrowed.length === 0) return <p className="muted">No day was filled from another source.</p>;
  return (
    <DataTable
      caption="Days filled from other sources"
      rows={borrowed}
      rowKey={({ gap, figures }) => `${gap.site} ${gap.variable} ${gap.from} ${figures.source} ${figures.site}`}
      columns={[
        { key: 'site', head: 'Site', rowHead: true, cell: ({ gap }) => gap.name },
        { key: 'term', head: 'Variable', cell: ({ gap }) => gap.term },
        { key: 'when', head: 'Gap', oneLine: true, cell: ({ gap }) => dateRange(gap.from, gap.to) },
        { key: 'source', head: 'Source', cell: ({ figures }) => `${figures.source}, ${figures.site}` },
        { key: 'distance', head: 'Distance', unit: 'km', numeric: true, cell: ({ figures }) => written(figures.distance_km, 1) },
        { key: 'n', head: 'Common days', numeric: true, cell: ({ figures }) => figures.common_days },
        {
          key: 'adjustment',
          head: 'Adjusted by',
          cell: ({ gap, figures }) =>
            figures.by === 'difference' ? `${signed(figures.adjustment)} ${gap.unit}` : `× ${written(figures.adjustment, 3)}`,
        },
        { key: 'days', head: 'Filled', unit: 'd', numeric: true, cell: ({ figures }) => figures.filled_days },
      ]}
    />
  );
}

function written(value: number | null, decimals: number): string {
  return value === null ? MISSING_MARK : value.toFixed(decimals).replace('-', '−');
}

function signed(value: number | null): string {
  return value !== null && value > 0 ? `+${written(value, 2)}` : written(value, 2);
}
