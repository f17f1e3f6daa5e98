'use client';

import { useRouter } from 'next/navigation';
import { useId, useState } from 'react';

export interface Option {
  readonly value: string;
  readonly label: string;
}

/** One-of-few choice: native radios drawn as one strip. */
export function Choice(props: {
  legend: string;
  options: readonly Option[];
  value: string;
  onChange: (value: string) => void;
  showLegend?: boolean;
}) {
  const name = useId();
  return (
    <fieldset className="choice">
      <legend className={props.showLegend ? 'label' : 'visually-hidden'}>{props.legend}</legend>
      {props.options.map((option) => (
        <label key={option.value}>
          <input type="radio" name={name} checked={option.value === props.value} onChange={() => props.onChange(option.value)} />
          <span>{option.label}</span>
        </label>
      ))}
    </fieldset>
  );
}

const YEAR_SECONDS = 31_536_000;

/** Keeps a reader's preference for a year; an empty value forgets it. */
export function keepPreference(cookie: string, value: string): void {
  const secure = location.protocol === 'https:' ? '; Secure' : '';
  // biome-ignore lint/suspicious/noDocumentCookie: the Cookie Store API is not in every browser the districts use
  document.cookie = `${cookie}=${encodeURIComponent(value)}; Path=/; Max-Age=${value ? YEAR_SECONDS : 0}; SameSite=Lax${secure}`;
}

/** A preference kept in a cookie that the server reads: choosing it redraws the page from the server. */
export function PreferenceChoice(props: { cookie: string; legend: string; options: readonly Option[]; value: string }) {
  const router = useRouter();
  const [chosen, setChosen] = useState(props.value);
  const choose = (value: string) => {
    setChosen(value);
    keepPreference(props.cookie, value);
    if (props.cookie === 'tillwater_theme') showTheme(value);
    router.refresh();
  };
  return <Choice legend={props.legend} options={props.options} value={chosen} onChange={choose} showLegend />;
}

function showTheme(value: string): void {
  if (value === 'light' || value === 'dark') document.documentElement.dataset.theme = value;
  else delete document.documentElement.dataset.theme;
}

/** Season or district in view, as a native select. */
export function PreferenceSelect(props: { cookie: string; label: string; options: readonly Option[]; value: string }) {
  const router = useRouter();
  return (
    <select
      className="plain-select"
      aria-label={props.label}
      value={props.value}
      onChange={(event) => {
        keepPreference(props.cookie, event.target.value);
        router.refresh();
      }}
    >
      {props.options.map((option) => (
        <option key={option.value} value={option.value}>
          {option.label}
        </option>
      ))}
    </select>
  );
}
