'use client';

import { useRouter } from 'next/navigation';
import { type ReactNode, useState } from 'react';
import { messageOf, sendJson } from './problem-text.ts';
import { SETTINGS, settingText } from './run-words.ts';

export interface Named {
  readonly code: string;
  readonly name: string;
}

interface RunFormProps {
  readonly seasons: readonly Named[];
  readonly soils: readonly Named[];
  readonly methods: readonly Named[];
  readonly sources: readonly string[];
}

/** The usual values, as the API documents them. */
const USUAL: Readonly<Record<string, string>> = {
  method: 'fao56',
  interpolation: '',
  elevation_trend: 'lapse-rate',
  reference_et: 'automatic',
  power: '2',
  maximum_sites: '6',
  lapse_rate_c_per_m: '0.0065',
  initial_depletion: '0.3',
  default_soil: 'loam',
  default_method: 'furrow',
};

/** Settings that are on or off; on unless said. */
const CHECKS: ReadonlySet<string> = new Set(['irrigate', 'runoff', 'fill_gaps']);

/** Bounds and step of the number settings. */
const NUMBERS: Readonly<Record<string, { min: number; max: number; step: number | 'any' }>> = {
  power: { min: 0.5, max: 6, step: 0.5 },
  maximum_sites: { min: 1, max: 8, step: 1 },
  lapse_rate_c_per_m: { min: 0, max: 0.012, step: 'any' },
  initial_depletion: { min: 0, max: 1, step: 0.05 },
};

/** Season and settings of a new run, each explained. */
export function RunForm(props: RunFormProps) {
  const router = useRouter();
  const [sending, setSending] = useState(false);
  const [fault, setFault] = useState<string | null>(null);
  async function start(form: FormData) {
    setSending(true);
    setFault(null);
    try {
      await sendJson('POST', '/api/v1/runs', requestOf(form));
      router.refresh();
    } catch (error) {
      setFault(messageOf(error));
    }
    setSending(false);
  }
  return (
    <form
      className="form"
      onSubmit={(event) => {
        event.preventDefault();
        start(new FormData(event.currentTarget));
      }}
    >
      <Field id="season" name="Season" help="The days to compute.">
        <Options name="season" options={props.seasons} />
      </Field>
      <details className="stack">
        <summary>Settings</summary>
        {SETTINGS.map((setting) => (
          <Field key={setting.key} id={setting.key} name={setting.name} help={setting.help}>
            <Control name={setting.key} {...props} />
          </Field>
        ))}
      </details>
      {fault ? (
        <p className="fault" role="alert">
          {fault}
        </p>
      ) : null}
      <div>
        <button type="submit" className="button primary" disabled={sending}>
          {sending ? 'Starting…' : 'Start the run'}
        </button>
      </div>
    </form>
  );
}

function Field({ id, name, help, children }: { id: string; name: string; help: string; children: ReactNode }) {
  return (
    <div className="field">
      <label htmlFor={`run-${id}`}>{name}</label>
      {children}
      <span className="hint" id={`run-${id}-help`}>
        {help}
      </span>
    </div>
  );
}

function Control(props: RunFormProps & { name: string }) {
  const { name } = props;
  if (CHECKS.has(name))
    return <input id={`run-${name}`} type="checkbox" name={name} defaultChecked aria-describedby={`run-${name}-help`} />;
  if (NUMBERS[name])
    return (
      <input
        id={`run-${name}`}
        type="number"
        name={name}
        required
        defaultValue={USUAL[name]}
        {...NUMBERS[name]}
        aria-describedby={`run-${name}-help`}
      />
    );
  return <Options name={name} options={optionsOf(props)} />;
}

/** Left out of the request: the service takes what suits the kind of the source. */
const USUAL_WAY: Named = { code: '', name: 'the usual: inverse distance between stations, bilinear on a grid' };

function optionsOf(props: RunFormProps & { name: string }): Named[] {
  const said = (codes: readonly string[]) => codes.map((code) => ({ code, name: settingText(code) }));
  if (props.name === 'method') return said(['fao56', 'asce2005']);
  if (props.name === 'interpolation') return [USUAL_WAY, ...said(['automatic', 'inverse-distance', 'nearest', 'kriging', 'bilinear'])];
  if (props.name === 'reference_et') return said(['automatic', 'at-parcels', 'at-sites', 'given', 'hourly-sum']);
  if (props.name === 'elevation_trend') return said(['lapse-rate', 'fitted', 'none']);
  if (props.name === 'source') return [{ code: '', name: 'every source' }, ...said(props.sources)];
  return [...(props.name === 'default_soil' ? props.soils : props.methods)];
}

function Options({ name, options }: { name: string; options: readonly Named[] }) {
  return (
    <select id={`run-${name}`} name={name} defaultValue={USUAL[name]} aria-describedby={`run-${name}-help`}>
      {options.map((option) => (
        <option key={option.code} value={option.code}>
          {option.name}
        </option>
      ))}
    </select>
  );
}

/** What the API is asked for. */
export function requestOf(form: FormData): { season: string; settings: Record<string, unknown> } {
  const settings: Record<string, unknown> = Object.fromEntries([...CHECKS].map((name) => [name, form.has(name)]));
  for (const { key } of SETTINGS) {
    if (key in settings) continue;
    const value = String(form.get(key) ?? '');
    if (key === 'interpolation' && value === '') continue;
    settings[key] = key === 'source' ? value || null : key in NUMBERS ? Number(value) : value;
  }
  return { season: String(form.get('season')), settings };
}
