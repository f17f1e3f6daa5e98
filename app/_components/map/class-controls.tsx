'use client';

import { useState } from 'react';
import type { UnitSystem } from '../../../lib/base/units.ts';
import { CLASS_METHODS, type ClassMethod } from '../../../lib/report/classes.ts';
import styles from './demand-map.module.css';
import type { ClassChoice } from './map-classes.ts';
import { type MapVariable, shownValue, storedValue, unitOfVariable } from './map-variables.ts';

const METHODS = Object.entries(CLASS_METHODS) as [ClassMethod, string][];
/** Most limits that part classes. */
const MOST_LIMITS = 8;

/** How values become classes: the method, how many, and over which weeks the limits hold. */
export function ClassControls(props: {
  choice: ClassChoice;
  breaks: readonly number[];
  variable: MapVariable;
  units: UnitSystem;
  onChoice: (choice: ClassChoice) => void;
}) {
  const { choice, onChoice } = props;
  return (
    <details className={styles.block}>
      <summary className={styles.blockName}>Classes: {CLASS_METHODS[choice.method].toLowerCase()}</summary>
      <div className="stack">
        <div className={styles.pair}>
          <label className="field">
            <span className="label">Method</span>
            <select
              value={choice.method}
              onChange={(event) => {
                const method = event.target.value as ClassMethod;
                onChoice({ ...choice, method, own: method === 'own' ? props.breaks.slice(1, -1) : choice.own });
              }}
            >
              {METHODS.map(([method, name]) => (
                <option key={method} value={method}>
                  {name}
                </option>
              ))}
            </select>
          </label>
          <label className="field">
            <span className="label">How many</span>
            <select
              disabled={choice.method === 'own'}
              value={choice.count}
              onChange={(event) => onChoice({ ...choice, count: Number(event.target.value) })}
            >
              {[3, 4, 5, 6, 7, 8, 9].map((count) => (
                <option key={count}>{count}</option>
              ))}
            </select>
          </label>
        </div>
        {choice.method === 'own' ? (
          <OwnLimits key={`${props.variable.id} ${props.units}`} {...props} />
        ) : (
          <label className="check small">
            <input type="checkbox" checked={choice.hold} onChange={(event) => onChoice({ ...choice, hold: event.target.checked })} />
            Same limits in every week
          </label>
        )}
      </div>
    </details>
  );
}

/** Reads limits typed by a person. Numbers part at spaces, commas with a space, or semicolons. */
export function parseLimits(text: string): { limits: number[] } | { fault: string } {
  const words = text.split(/[\s;]+|,\s+/).filter(Boolean);
  const limits = words.map((word) => Number(word.replace(',', '.')));
  const wrong = words.find((_, index) => !Number.isFinite(limits[index]));
  if (wrong !== undefined) return { fault: `“${wrong}” is not a number.` };
  if (limits.length < 1 || limits.length > MOST_LIMITS) return { fault: `Give 1 to ${MOST_LIMITS} limits; ${limits.length} found.` };
  const back = limits.findIndex((limit, index) => index > 0 && limit <= limits[index - 1]);
  return back > 0 ? { fault: `Limits must rise: ${limits[back]} comes after ${limits[back - 1]}.` } : { limits };
}

function OwnLimits(props: {
  choice: ClassChoice;
  breaks: readonly number[];
  variable: MapVariable;
  units: UnitSystem;
  onChoice: (choice: ClassChoice) => void;
}) {
  const { variable, units } = props;
  const [text, setText] = useState(() =>
    props.choice.own.map((limit) => String(Number(shownValue(limit, variable, units).toPrecision(4)))).join(' '),
  );
  const read = parseLimits(text);
  const fault = 'fault' in read ? read.fault : null;
  const unit = unitOfVariable(variable, units);
  return (
    <form
      className="field"
      onSubmit={(event) => {
        event.preventDefault();
        if ('limits' in read) props.onChoice({ ...props.choice, own: read.limits.map((limit) => storedValue(limit, variable, units)) });
      }}
    >
      <label htmlFor="own-limits">Limits between classes{unit ? `, ${unit}` : ''}</label>
      <div className={styles.pair}>
        <input
          id="own-limits"
          inputMode="decimal"
          value={text}
          aria-invalid={fault !== null}
          aria-describedby="own-limits-note"
          onChange={(event) => setText(event.target.value)}
        />
        <button type="submit" className="button" disabled={fault !== null}>
          Apply
        </button>
      </div>
      <p id="own-limits-note" className={fault ? 'fault' : 'hint'}>
        {fault ?? 'Low to high, parted by spaces. The lowest and highest class take what lies outside.'}
      </p>
    </form>
  );
}
