'use client';

import { useState } from 'react';
import type { SoilClassCount } from '../../lib/files/reading.ts';
import type { ImportAnswer } from '../../lib/http/contract/rest.ts';
import { type Column, DataTable } from './data-table.tsx';
import { Section } from './page-head.tsx';
import type { Patch } from './use-import.ts';

interface SoilTableProps {
  readonly now: ImportAnswer;
  readonly classes: readonly SoilClassCount[];
  readonly mayChange: boolean;
  readonly patch: Patch;
  readonly busy: boolean;
}

const NO_SOIL = '-';
const BY: Readonly<Record<string, string>> = { option: 'chosen here', code: 'same code', name: 'same name' };

/** Soil classes of a soil map and the soil of the district that each stands for, by its code. */
export function SoilTable({ now, classes, mayChange, patch, busy }: SoilTableProps) {
  const [changed, setChanged] = useState<Readonly<Record<string, string | null>>>({});
  const valueFor = ({ foreignCode, soilCode, by }: SoilClassCount): string => {
    if (foreignCode in changed) return changed[foreignCode] ?? NO_SOIL;
    return soilCode ?? (by === 'option' ? NO_SOIL : '');
  };
  const choose = (foreign: string, value: string) =>
    setChanged(({ [foreign]: _dropped, ...rest }) =>
      value.trim() === '' ? rest : { ...rest, [foreign]: value === NO_SOIL ? null : value.trim() },
    );
  const columns: readonly Column<SoilClassCount>[] = [
    { key: 'foreign', head: 'Class in the map', rowHead: true, cell: (row) => row.foreignCode },
    { key: 'count', head: 'Polygons', numeric: true, cell: (row) => row.count },
    {
      key: 'soil',
      head: 'Soil of the district',
      cell: (row) =>
        mayChange ? (
          <input
            type="text"
            aria-label={`Code of the soil for ${row.foreignCode}`}
            defaultValue={valueFor(row)}
            onChange={(event) => choose(row.foreignCode, event.target.value)}
          />
        ) : (
          (row.soilCode ?? 'left out')
        ),
    },
    { key: 'by', head: 'Found by', cell: (row) => (row.by ? BY[row.by] : 'not found: left out') },
  ];
  const stored = (now.options.soilMappings ?? {}) as object;
  return (
    <Section
      title="Soil classes"
      note="Write the code of a soil of the district beside each class, or “-” to leave its polygons out. Soils are listed under Methods; a table of soils can be imported first."
    >
      <DataTable caption="Soil classes of the map" columns={columns} rows={classes} rowKey={(row) => row.foreignCode} />
      {mayChange ? (
        <button
          type="button"
          className="button"
          disabled={busy || Object.keys(changed).length === 0}
          onClick={() => patch({ soilMappings: { ...stored, ...changed } })}
        >
          Read again with these soils
        </button>
      ) : null}
    </Section>
  );
}
