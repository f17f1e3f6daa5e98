import { PROVENANCE_TEXT, shareOfTolerance, type ValidationRow } from '../../../../lib/report/validation.ts';
import { type Column, DataTable } from '../../../_components/data-table.tsx';
import { significant } from '../../../_components/figures.ts';
import { Section } from '../../../_components/page-head.tsx';
import type { ValidationTable } from './load-validation.ts';

interface Numbered extends ValidationRow {
  readonly number: number;
}

/** A summary of all tables, then each with its checks folded away. */
export function ValidationView({ tables }: { tables: readonly ValidationTable[] }) {
  return (
    <>
      <Section
        id="summary"
        title="All checks"
        note="A check passes within the tolerance beside it: half a unit of the last printed digit where the print is exact, more where it rounds on the way. “Largest share” says how much of its tolerance the worst check of a table uses."
      >
        <DataTable caption="Checks by source" columns={summaryColumns(tables)} rows={tables} rowKey={(table) => table.name} foot />
      </Section>
      {tables.map((table) => (
        <Section key={table.name} id={table.name} title={table.title} note={table.source}>
          <details className="stack">
            <summary>{table.rows.length} checks</summary>
            <DataTable
              caption={table.title}
              columns={ROW_COLUMNS}
              rows={table.rows.map((row, index) => ({ ...row, number: index + 1 }))}
              rowKey={(row) => String(row.number)}
            />
          </details>
        </Section>
      ))}
    </>
  );
}

function summaryColumns(tables: readonly ValidationTable[]): Column<ValidationTable>[] {
  const all = tables.flatMap(({ rows }) => rows);
  const kinds = (rows: readonly ValidationRow[]) => [...new Set(rows.map(({ provenance }) => PROVENANCE_TEXT[provenance]))].join('; ');
  return [
    { key: 'title', head: 'What', rowHead: true, wide: true, cell: (table) => <a href={`#${table.name}`}>{table.title}</a>, total: 'All' },
    { key: 'source', head: 'Source', wide: true, cell: (table) => table.source },
    { key: 'kinds', head: 'Where the values come from', wide: true, cell: (table) => kinds(table.rows) },
    { key: 'count', head: 'Checks', numeric: true, cell: (table) => table.rows.length, total: all.length },
    { key: 'worst', head: 'Largest share', numeric: true, cell: ({ rows }) => percentOf(worstOf(rows)), total: percentOf(worstOf(all)) },
  ];
}

function worstOf(rows: readonly ValidationRow[]): number {
  return Math.max(0, ...rows.map(shareOfTolerance).filter((share) => !Number.isNaN(share)));
}

function percentOf(share: number): string {
  return `${Math.round(100 * share)} %`;
}

const ROW_COLUMNS: readonly Column<Numbered>[] = [
  { key: 'number', head: 'No.', numeric: true, cell: (row) => row.number },
  { key: 'what', head: 'Check', rowHead: true, wide: true, cell: (row) => row.what },
  {
    key: 'expected',
    head: 'Outside',
    numeric: true,
    cell: (row) => (typeof row.expected === 'number' ? significant(row.expected, 6) : row.expected),
  },
  { key: 'computed', head: 'Computed', numeric: true, cell: (row) => significant(row.computed, 6) },
  {
    key: 'tolerance',
    head: 'Allowed difference',
    numeric: true,
    cell: (row) => (row.tolerance === null ? '–' : `± ${significant(row.tolerance, 3)}`),
  },
  { key: 'unit', head: 'Unit', cell: (row) => row.unit },
  { key: 'provenance', head: 'Value outside', cell: (row) => PROVENANCE_TEXT[row.provenance] },
];
