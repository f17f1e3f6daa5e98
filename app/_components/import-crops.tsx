'use client';

import { useState } from 'react';
import type { CropCount, Understood } from '../../lib/files/reading.ts';
import type { ImportAnswer } from '../../lib/http/contract/rest.ts';
import { type Column, DataTable } from './data-table.tsx';
import { Section } from './page-head.tsx';
import type { Patch } from './use-import.ts';

export interface CropChoice {
  readonly code: string;
  readonly name: string;
}

interface CropTableProps {
  readonly now: ImportAnswer;
  readonly crops: readonly CropChoice[];
  readonly mayChange: boolean;
  readonly patch: Patch;
  readonly busy: boolean;
}

const NO_CROP = '-';
const BY: Readonly<Record<string, string>> = {
  option: 'chosen here',
  stored: 'as in an earlier import',
  code: 'same code',
  name: 'same name',
  similar: 'similar name: confirm it',
};

/** Crop codes of the file and the crop of the library each stands for. */
export function CropTable({ now, crops, mayChange, patch, busy }: CropTableProps) {
  const understood = now.understood as unknown as Understood;
  const [changed, setChanged] = useState<Readonly<Record<string, string | null>>>({});
  const nameOf = (code: string | null) => crops.find((crop) => crop.code === code)?.name ?? code;
  const chosenFor = (row: CropCount) => {
    const chosen = row.foreignCode in changed ? changed[row.foreignCode] : row.cropCode;
    if (chosen !== null) return chosen;
    return row.foreignCode in changed || row.by === 'option' || row.by === 'stored' ? NO_CROP : '';
  };
  const choose = (foreign: string, value: string) =>
    setChanged(({ [foreign]: _dropped, ...rest }) => (value === '' ? rest : { ...rest, [foreign]: value === NO_CROP ? null : value }));
  const similar = understood.crops.filter((row) => row.by === 'similar' && row.proposed && !(row.foreignCode in changed));
  const columns: readonly Column<CropCount>[] = [
    { key: 'foreign', head: 'In the file', rowHead: true, cell: (row) => row.foreignCode },
    { key: 'count', head: 'Rows', numeric: true, cell: (row) => row.count },
    {
      key: 'crop',
      head: 'Crop of the library',
      cell: (row) =>
        mayChange ? (
          <select
            aria-label={`Crop for ${row.foreignCode}`}
            value={chosenFor(row)}
            onChange={(event) => choose(row.foreignCode, event.target.value)}
          >
            <option value="">not decided</option>
            <option value={NO_CROP}>no irrigated crop</option>
            {crops.map((crop) => (
              <option key={crop.code} value={crop.code}>
                {crop.name}
              </option>
            ))}
          </select>
        ) : (
          (nameOf(row.cropCode) ?? 'none')
        ),
    },
    {
      key: 'by',
      head: 'Found by',
      cell: (row) => (row.by === 'similar' ? `${nameOf(row.proposed)}? ${BY.similar}` : row.by ? BY[row.by] : 'not found'),
    },
  ];
  const stored = (now.options.cropMappings ?? {}) as object;
  return (
    <Section title="Crops" note="Rows whose crop is not decided are left out. The choice is remembered when the import is applied.">
      <DataTable caption="Crop codes of the file" columns={columns} rows={understood.crops} rowKey={(row) => row.foreignCode} />
      {mayChange ? (
        <div className="row">
          {similar.length > 0 ? (
            <button
              type="button"
              className="button"
              onClick={() =>
                setChanged((before) => ({ ...before, ...Object.fromEntries(similar.map((row) => [row.foreignCode, row.proposed])) }))
              }
            >
              Take all {similar.length} proposals
            </button>
          ) : null}
          <button
            type="button"
            className="button"
            disabled={busy || Object.keys(changed).length === 0}
            onClick={() => patch({ cropMappings: { ...stored, ...changed } })}
          >
            Read again with these crops
          </button>
        </div>
      ) : null}
    </Section>
  );
}
