'use client';

import { useId, useMemo, useState } from 'react';
import styles from './demand-map.module.css';

const SUGGESTIONS = 12;

/** Finds a parcel by its code: type, choose, Enter. */
export function ParcelSearch({ codes, onChoose }: { codes: readonly string[]; onChoose: (position: number) => void }) {
  const id = useId();
  const [text, setText] = useState('');
  const [fault, setFault] = useState<string | null>(null);
  const suggestions = useMemo(() => suggest(codes, text), [codes, text]);
  const go = (asked: string) => {
    const position = findCode(codes, asked);
    setFault(position < 0 ? `No parcel “${asked}” in this run.` : null);
    if (position >= 0) onChoose(position);
  };
  return (
    <form
      className={`${styles.search} no-print`}
      onSubmit={(event) => {
        event.preventDefault();
        if (text.trim()) go(text);
      }}
    >
      <label className="visually-hidden" htmlFor={id}>
        Parcel code
      </label>
      <input
        id={id}
        type="search"
        list={`${id}-list`}
        placeholder="Parcel code"
        autoComplete="off"
        value={text}
        aria-invalid={fault !== null}
        aria-describedby={fault ? `${id}-fault` : undefined}
        onChange={(event) => {
          setText(event.target.value);
          setFault(null);
        }}
      />
      <datalist id={`${id}-list`}>
        {suggestions.map((code) => (
          <option key={code} value={code} />
        ))}
      </datalist>
      <button type="submit" className="button">
        Find
      </button>
      {fault ? (
        <p id={`${id}-fault`} className="fault" role="alert">
          {fault}
        </p>
      ) : null}
    </form>
  );
}

function suggest(codes: readonly string[], text: string): string[] {
  const asked = text.trim().toLowerCase();
  if (!asked) return [];
  const found: string[] = [];
  for (const code of codes) {
    if (code.toLowerCase().includes(asked)) found.push(code);
    if (found.length === SUGGESTIONS) break;
  }
  return found;
}

/** Position of the code, whatever its case; -1 when there is none. */
export function findCode(codes: readonly string[], asked: string): number {
  const wanted = asked.trim().toLowerCase();
  return codes.findIndex((code) => code.toLowerCase() === wanted);
}
