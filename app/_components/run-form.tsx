'use client';

import { useRouter } from 'next/navigation';
import { type ReactNode, useState } from 'react';
import { messageOf, sendJson } from './problem-text.ts';
import { SETTING_GROUPS, SETTINGS, type SettingWords } from './run-setting-words.ts';
import { settingText } from './run-value-words.ts';

export interface Named {
  readonly code: string;
  readonly name: string;
}

/** What the district has to choose from. */
interface RunChoices {
  readonly seasons: readonly Named[];
  readonly soils: readonly Named[];
  readonly methods: readonly Named[];
  readonly sources: readonly string[];
  readonly forecasts: readonly string[];
}

/** Season and settings of a new run, grouped, each explained. */
export function RunForm(props: RunChoices) {
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
        <Options name="season" usual="" options={props.seasons} />
      </Field>
      <details className="stack">
        <summary>Settings</summary>
        {SETTING_GROUPS.map((group) => (
          <fieldset key={group.id} className="stack">
            <legend className="legend">{group.name}</legend>
            {SETTINGS.filter((setting) => setting.group === group.id).map((setting) => (
              <Field key={setting.key} id={setting.key} name={setting.name} help={setting.help}>
                <Control setting={setting} choices={props} />
              </Field>
            ))}
          </fieldset>
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

function Control({ setting, choices }: { setting: SettingWords; choices: RunChoices }) {
  const { key: name, control } = setting;
  const common = { id: `run-${name}`, name, 'aria-describedby': `run-${name}-help` };
  if (control.kind === 'check') return <input type="checkbox" defaultChecked={control.usual} {...common} />;
  if (control.kind === 'number') {
    const { min, max, step, usual, optional } = control;
    return <input type="number" required={!optional} defaultValue={usual} min={min} max={max} step={step} {...common} />;
  }
  return <Options name={name} usual={control.usual} options={optionsOf(control, choices)} />;
}

function optionsOf(control: SettingWords['control'], choices: RunChoices): Named[] {
  if (control.kind === 'choice') return control.values.map((code) => ({ code, name: settingText(code) }));
  if (control.kind !== 'named') return [];
  const open = control.open ? [{ code: '', name: control.open }] : [];
  const named = choices[control.of].map((each) => (typeof each === 'string' ? { code: each, name: each } : each));
  return [...open, ...named];
}

function Options({ name, usual, options }: { name: string; usual: string; options: readonly Named[] }) {
  return (
    <select id={`run-${name}`} name={name} defaultValue={usual || undefined} aria-describedby={`run-${name}-help`}>
      {options.map((option) => (
        <option key={option.code} value={option.code}>
          {option.name}
        </option>
      ))}
    </select>
  );
}

/** What the API is asked for. An interpolation left open goes by the kind of the source, and is not sent. */
export function requestOf(form: FormData): { season: string; settings: Record<string, unknown> } {
  const settings: Record<string, unknown> = {};
  for (const { key, control } of SETTINGS) {
    const value = String(form.get(key) ?? '');
    if (control.kind === 'check') settings[key] = form.has(key);
    else if (control.kind === 'number') settings[key] = value === '' ? null : Number(value);
    else if (control.kind === 'named') settings[key] = value || null;
    else if (value !== '') settings[key] = value;
  }
  return { season: String(form.get('season')), settings };
}
