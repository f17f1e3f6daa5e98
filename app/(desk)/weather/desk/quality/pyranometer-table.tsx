import type { CheckAnswer } from '../../../../../lib/http/contract/quality.ts';
import { type Column, DataTable } from '../../../../_components/data-table.tsx';
import { percent, plain } from '../../../../_components/figures.ts';
import { Go } from '../../../../_components/go.tsx';
import { PATH } from './quality-words.ts';

interface Row {
  readonly source: string;
  readonly own: CheckAnswer['pyranometers'][number];
}

/** Every pyranometer with its level on clear days, its drift, and the factor that would bring it to the curve. */
export function PyranometerTable({ checks }: { checks: readonly CheckAnswer[] }) {
  const rows = checks.flatMap(({ source, pyranometers }) => pyranometers.map((own): Row => ({ source, own })));
  if (rows.length === 0) return <p className="muted">No station measures solar radiation.</p>;
  return <DataTable caption="Pyranometers" columns={COLUMNS} rows={rows} rowKey={(row) => `${row.source}/${row.own.site}`} />;
}

const COLUMNS: readonly Column<Row>[] = [
  {
    key: 'site',
    head: 'Site',
    rowHead: true,
    oneLine: true,
    cell: ({ source, own }) => <Go href={`${PATH}/pyranometer?${new URLSearchParams({ source, site: own.site })}`}>{own.site}</Go>,
  },
  { key: 'level', head: 'Clear days of the last year', numeric: true, cell: ({ own }) => percent(lastRatio(own), 1) },
  {
    key: 'years',
    head: 'By year',
    wide: true,
    cell: ({ own }) => own.years.map(({ year, ratio }) => `${year}: ${percent(ratio, 1)}`).join(', ') || '–',
  },
  {
    key: 'drift',
    head: 'Drift',
    unit: '% per year',
    numeric: true,
    cell: ({ own }) =>
      own.drift_pct_per_year === null ? '–' : `${plain(own.drift_pct_per_year, 1)} ± ${plain(own.drift_error_pct_per_year, 1)}`,
  },
  { key: 'drifting', head: 'Verdict', cell: ({ own }) => verdict(own) },
  { key: 'factor', head: 'Factor to the curve', numeric: true, cell: ({ own }) => plain(own.suggested_factor, 3) },
];

/** Share of the clear-sky curve that the clear days of the last year reach, or those of a record too short for years. */
function lastRatio(own: Row['own']): number | null {
  return own.years.at(-1)?.ratio ?? own.clear_day_ratio;
}

function verdict(own: Row['own']): string {
  const ratio = lastRatio(own);
  if (ratio === null) return 'too short to say';
  const off = Math.abs(ratio - 1);
  const level = off > 0.05 ? 'off the curve' : off > 0.03 ? 'at the edge' : 'sound';
  return own.drifting ? `${level}, drifting` : level;
}
