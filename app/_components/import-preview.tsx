'use client';

import dynamic from 'next/dynamic';
import { useState } from 'react';
import type { MapPreview, TablePreview } from '../../lib/files/reading.ts';
import { type Column, DataTable } from './data-table.tsx';
import styles from './import.module.css';
import { Section } from './page-head.tsx';

const PreviewMap = dynamic(() => import('./preview-map.tsx').then((module) => module.PreviewMap), {
  ssr: false,
  loading: () => (
    <p className="muted" role="status">
      Drawing the map …
    </p>
  ),
});

/** A sample for the eye: rows of a table, or features on a map. */
export function PreviewPart({ preview }: { preview: TablePreview | MapPreview | null }) {
  if (!preview) return null;
  if (preview.kind === 'table') return preview.rows.length > 0 ? <RowsPreview preview={preview} /> : null;
  return preview.collection.features.length > 0 ? <FeaturesPreview preview={preview} /> : null;
}

type Row = TablePreview['rows'][number] & { readonly at: number };

/** One line for each row of the file: a row with several faults has all its reasons. */
function mergedRows(rows: TablePreview['rows']): Row[] {
  const merged: Row[] = [];
  for (const row of rows) {
    const last = merged.at(-1);
    const same = last?.row === row.row && last.cells.join() === row.cells.join();
    if (last && same) merged[merged.length - 1] = { ...last, status: 'bad', reason: [last.reason, row.reason].filter(Boolean).join('; ') };
    else merged.push({ ...row, at: merged.length });
  }
  return merged;
}

function RowsPreview({ preview }: { preview: TablePreview }) {
  const columns: readonly Column<Row>[] = [
    { key: 'row', head: 'Row', numeric: true, cell: (row) => row.row },
    {
      key: 'status',
      head: 'At fault',
      cell: (row) => (row.status === 'bad' ? <span className={styles.reason}>{row.reason}</span> : ''),
    },
    ...preview.header.map((head, i): Column<Row> => ({ key: `c${i}`, head: head || `(${i + 1})`, cell: (row) => row.cells[i] ?? '' })),
  ];
  const rows = mergedRows(preview.rows);
  const bad = rows.filter((row) => row.status === 'bad').length;
  return (
    <Section title="Sample" note={`${rows.length} rows, ${bad} of them at fault and marked in the margin.`}>
      <DataTable
        caption="Sample of rows"
        columns={columns}
        rows={rows}
        rowKey={(row) => String(row.at)}
        rowClass={(row) => (row.status === 'bad' ? styles.bad : undefined)}
      />
    </Section>
  );
}

type Properties = MapPreview['collection']['features'][number]['properties'];

const STATUS_WORDS: Readonly<Record<Properties['status'], string>> = { ok: 'taken as drawn', repaired: 'repaired', refused: 'left out' };

function FeaturesPreview({ preview }: { preview: MapPreview }) {
  const [chosen, setChosen] = useState<Properties | null>(null);
  const { features } = preview.collection;
  const count = (status: Properties['status']) => features.filter((feature) => feature.properties.status === status).length;
  const notable = features.map((feature) => feature.properties).filter((properties) => properties.status !== 'ok');
  const columns: readonly Column<Properties>[] = [
    { key: 'row', head: 'Feature', numeric: true, cell: (one) => one.row },
    { key: 'code', head: 'Code', rowHead: true, cell: (one) => one.code ?? '–' },
    {
      key: 'status',
      head: 'Status',
      cell: (one) => <span className={`tag ${one.status === 'refused' ? 'bad' : 'caution'}`}>{STATUS_WORDS[one.status]}</span>,
    },
    { key: 'reason', head: 'Reason', cell: (one) => one.reason ?? '' },
  ];
  return (
    <Section
      title="Map of the sample"
      note={`${features.length} features: ${count('ok')} taken as drawn, ${count('repaired')} repaired, ${count('refused')} left out. Click one for the reason.`}
    >
      <ul className={styles.legend}>
        <LegendItem name="taken as drawn" stroke="var(--good)" />
        <LegendItem name="repaired (dashed)" stroke="var(--caution)" dash="4 2" />
        <LegendItem name="left out (dotted)" stroke="var(--bad)" dash="1 2" />
      </ul>
      <PreviewMap collection={preview.collection} onChoose={setChosen} />
      <p aria-live="polite">
        {chosen ? (
          <>
            <strong>{chosen.code ?? `Feature ${chosen.row}`}</strong>: {STATUS_WORDS[chosen.status]}
            {chosen.reason ? `. ${chosen.reason}` : ''}
          </>
        ) : null}
      </p>
      {notable.length > 0 ? (
        <DataTable
          caption="Features that were repaired or left out"
          showCaption
          columns={columns}
          rows={notable.slice(0, 300)}
          rowKey={(one) => `${one.row} ${one.code} ${one.reason}`}
        />
      ) : null}
    </Section>
  );
}

function LegendItem({ name, stroke, dash }: { name: string; stroke: string; dash?: string }) {
  return (
    <li>
      <svg viewBox="0 0 24 14" aria-hidden="true" focusable="false">
        <rect
          x="1.5"
          y="1.5"
          width="21"
          height="11"
          fill={stroke}
          fillOpacity="0.25"
          stroke={stroke}
          strokeWidth="2"
          strokeDasharray={dash}
        />
      </svg>
      {name}
    </li>
  );
}
