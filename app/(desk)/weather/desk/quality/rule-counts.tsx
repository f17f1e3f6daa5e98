import type { CheckAnswer } from '../../../../../lib/http/contract/quality.ts';
import { type Column, DataTable } from '../../../../_components/data-table.tsx';
import { Go } from '../../../../_components/go.tsx';
import { PATH, ruleName, SEVERITY_WORDS } from './quality-words.ts';

interface Row {
  readonly rule: string;
  readonly severity: CheckAnswer['counts'][number]['severity'];
  readonly bySite: ReadonlyMap<string, { flags: number; days: number }>;
  readonly flags: number;
}

const RANK = { impossible: 0, suspect: 1, note: 2 };

/** Open flags: a row for each rule and how grave it is, a column for each site that has any. */
export function RuleCounts({ checks }: { checks: readonly CheckAnswer[] }) {
  const open = checks.flatMap(({ counts }) => counts.filter(({ state }) => state === 'open'));
  if (open.length === 0) return <p className="muted">No open flags.</p>;
  const sites = [...new Set(open.map(({ site }) => site))].sort();
  const rows = new Map<string, Row>();
  for (const count of open) {
    const key = `${count.rule}/${count.severity}`;
    const row = rows.get(key) ?? { rule: count.rule, severity: count.severity, bySite: new Map(), flags: 0 };
    const known = row.bySite.get(count.site);
    const cell = { flags: count.flags + (known?.flags ?? 0), days: count.days + (known?.days ?? 0) };
    rows.set(key, { ...row, flags: row.flags + count.flags, bySite: new Map([...row.bySite, [count.site, cell]]) });
  }
  const sorted = [...rows.values()].sort((a, b) => RANK[a.severity] - RANK[b.severity] || b.flags - a.flags);
  return (
    <DataTable
      caption="Open flags by rule and site"
      columns={columnsOf(sites)}
      rows={sorted}
      rowKey={(row) => `${row.rule}/${row.severity}`}
    />
  );
}

function columnsOf(sites: readonly string[]): Column<Row>[] {
  const href = (row: Row, site?: string) =>
    `${PATH}?${new URLSearchParams({ rule: row.rule, severity: row.severity, ...(site ? { site } : {}) })}#flags`;
  return [
    { key: 'rule', head: 'Rule', rowHead: true, wide: true, cell: (row) => ruleName(row.rule) },
    { key: 'severity', head: 'How grave', cell: (row) => SEVERITY_WORDS[row.severity] },
    { key: 'all', head: 'Flags', numeric: true, cell: (row) => <Go href={href(row)}>{row.flags}</Go> },
    ...sites.map(
      (site): Column<Row> => ({
        key: site,
        head: site,
        numeric: true,
        cell: (row) => {
          const cell = row.bySite.get(site);
          if (!cell) return '';
          return (
            <Go href={href(row, site)}>
              {cell.flags} <span className="unit">({cell.days} d)</span>
            </Go>
          );
        },
      }),
    ),
  ];
}
