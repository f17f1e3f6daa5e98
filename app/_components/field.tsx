'use client';

import { type ReactNode, useId } from 'react';

/** What a control needs to be tied to its label, its hint and its fault. */
export interface ControlProps {
  readonly id: string;
  readonly 'aria-invalid'?: true;
  readonly 'aria-describedby'?: string;
}

interface FieldProps {
  readonly name: string;
  readonly help?: string;
  /** what is wrong with the value; shown under the control */
  readonly fault?: string;
  readonly children: (control: ControlProps) => ReactNode;
}

/** A control with its label, what it means, and what is wrong with it. */
export function Field({ name, help, fault, children }: FieldProps) {
  const id = useId();
  const described = [help ? `${id}-help` : null, fault ? `${id}-fault` : null].filter(Boolean).join(' ');
  return (
    <div className="field">
      <label htmlFor={id}>{name}</label>
      {children({ id, ...(fault ? { 'aria-invalid': true } : {}), ...(described ? { 'aria-describedby': described } : {}) })}
      {help ? (
        <span className="hint" id={`${id}-help`}>
          {help}
        </span>
      ) : null}
      {fault ? (
        <span className="fault" id={`${id}-fault`} role="alert">
          {fault}
        </span>
      ) : null}
    </div>
  );
}

interface OptionsProps {
  readonly control: ControlProps;
  readonly name: string;
  readonly value: string | number;
  readonly options: readonly (readonly [string | number, string])[];
}

/** A native select that keeps its own choice. */
export function Options({ control, name, value, options }: OptionsProps) {
  return (
    <select {...control} name={name} defaultValue={value}>
      {options.map(([code, label]) => (
        <option key={code} value={code}>
          {label}
        </option>
      ))}
    </select>
  );
}

/** What came of the last attempt to save. */
export interface Said {
  readonly good: boolean;
  readonly text: string;
}

export function SaidLine({ said }: { said: Said | null }) {
  if (!said) return null;
  return (
    <p className={said.good ? 'notice good' : 'fault'} role={said.good ? 'status' : 'alert'}>
      {said.text}
    </p>
  );
}
