'use client';

import { useRouter } from 'next/navigation';
import { useState } from 'react';
import { Field, type Said, SaidLine } from './field.tsx';
import type { SeasonSuggestion } from './next-season.ts';
import { faultsOf, formMessageOf, sendJson } from './problem-text.ts';

/** Adds a season; offers the next water year. */
export function SeasonForm({ suggestion }: { suggestion: SeasonSuggestion }) {
  const router = useRouter();
  const [said, setSaid] = useState<Said | null>(null);
  const [faults, setFaults] = useState<Readonly<Record<string, string>>>({});
  async function add(form: FormData) {
    const season = Object.fromEntries([...form].map(([key, value]) => [key, String(value).trim()]));
    setFaults({});
    if (season.end_date < season.start_date) return setFaults({ end_date: 'The last day lies before the first.' });
    try {
      await sendJson('POST', '/api/v1/seasons', season);
      setSaid({ good: true, text: `Season ${season.code} is there. Bring its plantings, then start its run.` });
      router.refresh();
    } catch (error) {
      setFaults(faultsOf(error));
      setSaid({ good: false, text: formMessageOf(error) });
    }
  }
  return (
    <>
      <form
        key={suggestion.code}
        className="toolbar no-print"
        aria-label="Add a season"
        onSubmit={(event) => {
          event.preventDefault();
          add(new FormData(event.currentTarget));
        }}
      >
        <Field name="Code" fault={faults.code}>
          {(control) => <input {...control} name="code" required maxLength={40} size={8} defaultValue={suggestion.code} />}
        </Field>
        <Field name="Name" fault={faults.name}>
          {(control) => <input {...control} name="name" required maxLength={120} defaultValue={suggestion.name} />}
        </Field>
        <Field name="First day" fault={faults.start_date}>
          {(control) => <input {...control} type="date" name="start_date" required defaultValue={suggestion.start_date} />}
        </Field>
        <Field name="Last day" fault={faults.end_date}>
          {(control) => <input {...control} type="date" name="end_date" required defaultValue={suggestion.end_date} />}
        </Field>
        <button type="submit" className="button">
          Add the season
        </button>
      </form>
      <p className="hint">The next water year is filled in. A season may cross New Year and lasts at most 400 days.</p>
      <SaidLine said={said} />
    </>
  );
}
