'use client';

import { useState } from 'react';
import type { Understood, UnderstoodColumn } from '../../lib/files/reading.ts';
import type { ImportAnswer } from '../../lib/http/contract/rest.ts';
import { type Column, DataTable } from './data-table.tsx';
import styles from './import.module.css';
import type { RoleChoice } from './import-roles.ts';
import { Section } from './page-head.tsx';
import type { Patch } from './use-import.ts';

interface Chosen {
  readonly role: string | null;
  readonly unit: string | null;
}

interface PlanProps {
  readonly now: ImportAnswer;
  readonly roles: readonly RoleChoice[];
  readonly mayChange: boolean;
  readonly patch: Patch;
  readonly busy: boolean;
}

/** The columns of the file and what each was taken for; changing any has the files read again. */
export function ColumnPlanTable({ now, roles, mayChange, patch, busy }: PlanProps) {
  const understood = now.understood as unknown as Understood;
  const [changed, setChanged] = useState<Readonly<Record<number, Chosen>>>({});
  const [dateOrder, setDateOrder] = useState('');
  const choose = (column: UnderstoodColumn, chosen: Chosen) => setChanged((before) => ({ ...before, [column.index]: chosen }));
  const chosenOf = (column: UnderstoodColumn): Chosen => changed[column.index] ?? { role: column.role, unit: column.unit };
  const dirty = Object.keys(changed).length > 0 || dateOrder !== '';
  const columns: readonly Column<UnderstoodColumn>[] = [
    { key: 'header', head: 'Column', rowHead: true, cell: (column) => column.header || `(${column.index + 1})` },
    { key: 'sample', head: 'Sample', cell: (column) => <div className={styles.sample}>{column.sample.slice(0, 3).join(' · ')}</div> },
    { key: 'role', head: 'Taken for', cell: (column) => <RoleCell {...{ column, roles, mayChange, choose }} chosen={chosenOf(column)} /> },
    { key: 'unit', head: 'Unit', cell: (column) => <UnitCell {...{ column, roles, mayChange, choose }} chosen={chosenOf(column)} /> },
    { key: 'sure', head: 'Sure', numeric: true, cell: (column) => (column.role ? `${Math.round(column.confidence * 100)} %` : '–') },
    { key: 'why', head: 'Why', cell: (column) => column.reason ?? '' },
  ];
  const plan = (now.options.plan ?? {}) as { columns?: object };
  const apply = () => patch({ plan: { ...plan, columns: { ...plan.columns, ...wishesOf(changed) }, ...(dateOrder ? { dateOrder } : {}) } });
  return (
    <Section title="Columns" note={mayChange ? 'Correct what was taken wrongly; the files are then read again.' : undefined}>
      <DataTable
        caption="Columns and what they were taken for"
        columns={columns}
        rows={understood.columns}
        rowKey={(column) => String(column.index)}
      />
      {mayChange ? (
        <div className="toolbar">
          {understood.dateOrder ? <DateOrder value={dateOrder} onChange={setDateOrder} /> : null}
          <button type="button" className="button" disabled={!dirty || busy} onClick={apply}>
            Read again with these columns
          </button>
        </div>
      ) : null}
    </Section>
  );
}

/** A unit that was not chosen is left unsaid, so that the header still speaks. */
function wishesOf(changed: Readonly<Record<number, Chosen>>): Record<string, Partial<Chosen>> {
  return Object.fromEntries(Object.entries(changed).map(([index, { role, unit }]) => [index, unit === null ? { role } : { role, unit }]));
}

interface CellProps {
  readonly column: UnderstoodColumn;
  readonly roles: readonly RoleChoice[];
  readonly chosen: Chosen;
  readonly mayChange: boolean;
  readonly choose: (column: UnderstoodColumn, chosen: Chosen) => void;
}

function RoleCell({ column, roles, chosen, mayChange, choose }: CellProps) {
  if (!mayChange) return roles.find((role) => role.role === chosen.role)?.name ?? chosen.role ?? 'not used';
  const known = chosen.role === null || roles.some((role) => role.role === chosen.role);
  return (
    <select
      aria-label={`${column.header}: taken for`}
      value={chosen.role ?? ''}
      onChange={(event) => choose(column, { role: event.target.value || null, unit: null })}
    >
      <option value="">not used</option>
      {known ? null : <option value={chosen.role ?? ''}>{chosen.role}</option>}
      {roles.map((role) => (
        <option key={role.role} value={role.role}>
          {role.name}
        </option>
      ))}
    </select>
  );
}

function UnitCell({ column, roles, chosen, mayChange, choose }: CellProps) {
  const units = roles.find((role) => role.role === chosen.role)?.units ?? [];
  if (!mayChange || units.length === 0) return chosen.unit ?? '–';
  return (
    <select
      aria-label={`${column.header}: unit`}
      value={chosen.unit ?? ''}
      onChange={(event) => choose(column, { ...chosen, unit: event.target.value || null })}
    >
      <option value="">as found</option>
      {units.map((unit) => (
        <option key={unit} value={unit}>
          {unit}
        </option>
      ))}
    </select>
  );
}

function DateOrder({ value, onChange }: { value: string; onChange: (value: string) => void }) {
  return (
    <div className="field">
      <label htmlFor="import-date-order">Dates are written</label>
      <select id="import-date-order" value={value} onChange={(event) => onChange(event.target.value)}>
        <option value="">as found</option>
        <option value="ymd">year, month, day</option>
        <option value="dmy">day, month, year</option>
        <option value="mdy">month, day, year</option>
      </select>
    </div>
  );
}
