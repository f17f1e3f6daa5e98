'use client';

import { useState } from 'react';
import type { LineageItem, LineageSummary } from '../../lib/files/lineage-summary.ts';
import { type Column, DataTable } from './data-table.tsx';
import { longDate } from './date-words.ts';
import { Section } from './page-head.tsx';

type Change = LineageItem['change'];

const WORDS: Readonly<Record<Change, { readonly name: string; readonly says: string; readonly tone: string }>> = {
  overlaid: { name: 'stays under others', says: 'stored parcels that stay although parcels of the file lie on their ground', tone: 'bad' },
  vanished: { name: 'vanishes', says: 'on whose ground no parcel stands any more', tone: 'caution' },
  split: { name: 'split', says: 'cut into several', tone: 'caution' },
  merged: { name: 'merged', says: 'joined with others', tone: 'caution' },
  recoded: { name: 'another code', says: 'the same ground under another code', tone: 'caution' },
  reshaped: { name: 'reshaped', says: 'with another outline', tone: '' },
  new: { name: 'new', says: 'on ground that no parcel held', tone: 'good' },
};
const CHANGES = Object.keys(WORDS) as Change[];

/** Rows shown at a time. */
const SHOWN = 300;

const percent = (share: number) => `${(share * 100).toFixed(share < 0.1 ? 1 : 0)} %`;

const COLUMNS: readonly Column<LineageItem>[] = [
  { key: 'code', head: 'Parcel', rowHead: true, oneLine: true, cell: (item) => item.code },
  {
    key: 'change',
    head: 'What becomes of it',
    cell: ({ change }) => <span className={`tag ${WORDS[change].tone}`}>{WORDS[change].name}</span>,
  },
  { key: 'area', head: 'Area', unit: 'ha', numeric: true, cell: (item) => item.area_ha.toFixed(2) },
  {
    key: 'successors',
    head: 'Stands on its ground then, with the share of its area',
    wide: true,
    cell: ({ successors }) => successors.map(({ code, share }) => `${code} (${percent(share)})`).join(', ') || '–',
  },
];

/** What an import of parcels does to the parcels that stand, to be looked at before it is applied. */
export function ImportLineage({ lineage }: { lineage: LineageSummary }) {
  const [only, setOnly] = useState<Change | ''>('');
  const { counts, items } = lineage;
  const picked = only === '' ? items : items.filter(({ change }) => change === only);
  const present = CHANGES.filter((change) => counts[change] > 0);
  const until = lineage.valid_to ? ` Those that change are kept as valid to ${longDate(lineage.valid_to)}.` : '';
  return (
    <Section
      title="What becomes of the parcels"
      id="lineage"
      note={`Parcels of the file against those that stand, by shared area. ${counts.unchanged} are unchanged.${until}`}
    >
      {present.length === 0 ? <p>No parcel changes its ground.</p> : null}
      <ul>
        {present.map((change) => (
          <li key={change}>
            <strong>{counts[change]}</strong> {WORDS[change].says}
          </li>
        ))}
      </ul>
      {present.length > 1 ? (
        <label className="row no-print">
          Show
          <select value={only} onChange={(event) => setOnly(event.target.value as Change | '')}>
            <option value="">all changes</option>
            {present.map((change) => (
              <option key={change} value={change}>
                {WORDS[change].name}
              </option>
            ))}
          </select>
        </label>
      ) : null}
      {picked.length > 0 ? (
        <DataTable
          caption="Parcels that change"
          columns={COLUMNS}
          rows={picked.slice(0, SHOWN)}
          rowKey={(item) => `${item.change} ${item.code}`}
        />
      ) : null}
      {picked.length > SHOWN || !lineage.listed_all ? (
        <p className="muted">
          The first {Math.min(SHOWN, picked.length)} are shown
          {lineage.listed_all ? '' : `; of all changes the first ${items.length} are listed`}.
        </p>
      ) : null}
    </Section>
  );
}
