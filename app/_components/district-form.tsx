'use client';

import { useRouter } from 'next/navigation';
import { useState } from 'react';
import { DistrictFields, settingsIn } from './district-fields.tsx';
import type { DistrictSettings } from './district-words.ts';
import { Field, type Said, SaidLine } from './field.tsx';
import { faultsOf, formMessageOf, sendJson } from './problem-text.ts';

/** Changes the district; what is computed follows at the next run. */
export function DistrictForm({ district, timeZones }: { district: DistrictSettings; timeZones: readonly string[] }) {
  const router = useRouter();
  const [said, setSaid] = useState<Said | null>(null);
  const [faults, setFaults] = useState<Readonly<Record<string, string>>>({});
  async function save(form: FormData) {
    setFaults({});
    try {
      await sendJson('PATCH', '/api/v1/district', settingsIn(form));
      setSaid({ good: true, text: 'Saved. Figures follow when the season is run again.' });
      router.refresh();
    } catch (error) {
      setFaults(faultsOf(error));
      setSaid({ good: false, text: formMessageOf(error) });
    }
  }
  return (
    <form
      className="form"
      onSubmit={(event) => {
        event.preventDefault();
        save(new FormData(event.currentTarget));
      }}
    >
      <Field name="Name" fault={faults.name}>
        {(control) => <input {...control} name="name" required minLength={2} maxLength={120} defaultValue={district.name} />}
      </Field>
      <DistrictFields start={district} timeZones={timeZones} faults={faults} />
      <SaidLine said={said} />
      <div>
        <button type="submit" className="button primary">
          Save
        </button>
      </div>
    </form>
  );
}
