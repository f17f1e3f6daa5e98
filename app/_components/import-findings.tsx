'use client';

import { useState } from 'react';
import type { ImportAnswer } from '../../lib/http/contract/rest.ts';
import { Choice } from './choice.tsx';
import { type Column, DataTable } from './data-table.tsx';
import styles from './import.module.css';

type Finding = ImportAnswer['findings'][number];

/** Rows drawn at once; the rest is in the CSV. */
const DRAWN = 200;
const TONES = { error: 'bad', warning: 'caution', note: '' } as const;

const COLUMNS: readonly Column<Finding>[] = [
  { key: 'severity', head: 'Severity', cell: (one) => <span className={`tag ${TONES[one.severity]}`}>{one.severity}</span> },
  { key: 'row', head: 'Row', numeric: true, cell: (one) => one.row ?? '–' },
  { key: 'column', head: 'Column', cell: (one) => one.column ?? '–' },
  { key: 'message', head: 'What is wrong', rowHead: true, cell: (one) => <div className={styles.message}>{one.message}</div> },
  { key: 'value', head: 'Value', cell: (one) => (one.value === undefined ? '–' : <code>{one.value}</code>) },
  { key: 'limit', head: 'Limit', cell: (one) => one.limit ?? '–' },
  { key: 'advice', head: 'What to do', cell: (one) => <div className={styles.message}>{one.advice}</div> },
  { key: 'file', head: 'File', cell: (one) => one.file ?? '' },
];

/** Findings by severity, errors first. */
export function FindingTable({
  findings,
  counts,
  id,
}: {
  findings: readonly Finding[];
  counts: ImportAnswer['finding_counts'];
  id: string;
}) {
  const [severity, setSeverity] = useState('all');
  if (findings.length === 0) return <p>Every row was understood.</p>;
  const chosen = findings
    .map((finding, at) => ({ ...finding, at }))
    .filter((finding) => severity === 'all' || finding.severity === severity);
  const options = [
    { value: 'all', label: `All ${counts.error + counts.warning + counts.note}` },
    { value: 'error', label: `Errors ${counts.error}` },
    { value: 'warning', label: `Warnings ${counts.warning}` },
    { value: 'note', label: `Notes ${counts.note}` },
  ];
  const total = counts.error + counts.warning + counts.note;
  return (
    <>
      <div className="spread">
        <Choice legend="Severity" options={options} value={severity} onChange={setSeverity} />
        <a href={`/api/v1/imports/${id}/findings.csv`} download>
          Download as CSV
        </a>
      </div>
      {chosen.length > 0 ? (
        <DataTable
          caption="Findings"
          columns={COLUMNS}
          rows={chosen.slice(0, DRAWN)}
          rowKey={(one) => String((one as { at?: number }).at)}
        />
      ) : (
        <p>None of this severity.</p>
      )}
      {chosen.length > DRAWN ? (
        <p className="small muted">
          The first {DRAWN} of {chosen.length} are shown; the CSV has all that were kept.
        </p>
      ) : null}
      {total > findings.length ? (
        <p className="small muted">
          {total} were found; {findings.length} were kept. Correct the most frequent and read again.
        </p>
      ) : null}
    </>
  );
}
