import type { FlagAnswer } from '../../../../../lib/http/contract/quality.ts';
import { type Column, DataTable } from '../../../../_components/data-table.tsx';
import { significant } from '../../../../_components/figures.ts';
import { Go } from '../../../../_components/go.tsx';
import styles from './quality.module.css';
import { PATH, SEVERITY_TONE, SEVERITY_WORDS, STATE_WORDS, termOf } from './quality-words.ts';

/** Address of the page of one flag. */
export function flagHref(flag: FlagAnswer): string {
  const { source, site, variable, rule, first_day } = flag;
  return `${PATH}/flag?${new URLSearchParams({ source, site, variable, rule, first_day })}`;
}

export function SeverityTag({ severity }: { severity: FlagAnswer['severity'] }) {
  return <span className={`tag ${SEVERITY_TONE[severity]}`.trim()}>{SEVERITY_WORDS[severity]}</span>;
}

/** Flags, the gravest first; the day leads to the page of the flag. */
export function FlagTable({ flags }: { flags: readonly FlagAnswer[] }) {
  if (flags.length === 0) return <p className="muted">No flags fit this choice.</p>;
  return <DataTable caption="Flags" columns={COLUMNS} rows={flags} rowKey={flagHref} />;
}

const COLUMNS: readonly Column<FlagAnswer>[] = [
  {
    key: 'day',
    head: 'First day',
    rowHead: true,
    oneLine: true,
    cell: (flag) => <Go href={flagHref(flag)}>{flag.first_day}</Go>,
  },
  { key: 'days', head: 'Days', numeric: true, cell: (flag) => flag.day_count },
  { key: 'site', head: 'Site', oneLine: true, cell: (flag) => flag.site },
  { key: 'variable', head: 'Variable', cell: (flag) => termOf(flag.variable) },
  { key: 'rule', head: 'Rule', cell: (flag) => flag.rule_name },
  { key: 'severity', head: 'How grave', oneLine: true, cell: (flag) => <SeverityTag severity={flag.severity} /> },
  { key: 'value', head: 'Value', numeric: true, cell: (flag) => significant(flag.value, 4) },
  {
    key: 'limit',
    head: 'Limit',
    numeric: true,
    cell: (flag) => (
      <>
        {significant(flag.limit, 4)} {flag.unit === '1' ? null : <span className="unit">{flag.unit}</span>}
      </>
    ),
  },
  { key: 'state', head: 'State', cell: (flag) => STATE_WORDS[flag.state] },
  { key: 'detail', head: 'What was found', wide: true, cell: (flag) => <span className={styles.detail}>{flag.detail}</span> },
];
