'use client';

import { useEffect, useState } from 'react';
import { DistrictFields, settingsIn } from './district-fields.tsx';
import type { DistrictSettings } from './district-words.ts';
import { Field } from './field.tsx';
import { faultsOf, formMessageOf, Refusal, sendJson } from './problem-text.ts';

type Faults = Readonly<Record<string, string>>;

const START: DistrictSettings = {
  name: '',
  time_zone: 'UTC',
  units: 'metric',
  week_start: 1,
  water_year_start_month: 10,
  default_elevation_m: 0,
  radiation_coefficient: 0.16,
};

/** What the form asks for, as the API names it. */
function requestOf(form: FormData): object {
  const text = (name: string) => String(form.get(name) ?? '').trim();
  return {
    ...settingsIn(form),
    ...(text('code') ? { code: text('code') } : {}),
    manager: { name: text('manager_name'), email: text('email'), password: String(form.get('password')) },
  };
}

/** The reader's own time zone once the page runs in the browser, when the service knows it. */
function useOwnTimeZone(timeZones: readonly string[]): string {
  const [zone, setZone] = useState(START.time_zone);
  useEffect(() => {
    const own = Intl.DateTimeFormat().resolvedOptions().timeZone;
    if (timeZones.includes(own)) setZone(own);
  }, [timeZones]);
  return zone;
}

/** Makes the first district and its manager, signs the manager in, and goes on to what to bring. */
export function SetUpForm({ timeZones }: { timeZones: readonly string[] }) {
  const zone = useOwnTimeZone(timeZones);
  const [busy, setBusy] = useState(false);
  const [fault, setFault] = useState<string | null>(null);
  const [faults, setFaults] = useState<Faults>({});
  async function setUp(form: FormData) {
    setFault(null);
    setFaults({});
    if (form.get('password') !== form.get('again')) return setFaults({ again: 'The two passwords differ.' });
    setBusy(true);
    try {
      const token = String(form.get('token')).trim();
      await sendJson('POST', '/api/v1/districts', requestOf(form), { authorization: `Bearer ${token}` });
    } catch (error) {
      const unknown = error instanceof Refusal && error.status === 401;
      if (unknown) setFaults({ token: 'This token is not known. Take the newest one that was printed when the service started.' });
      else setFaults(faultsOf(error));
      setFault(unknown ? 'Nothing was made: see what is marked above.' : formMessageOf(error));
      return setBusy(false);
    }
    location.assign((await signsIn(form)) ? '/' : '/sign-in');
  }
  return (
    <form
      className="form"
      method="post"
      onSubmit={(event) => {
        event.preventDefault();
        setUp(new FormData(event.currentTarget));
      }}
    >
      <Field name="Set-up token" help="Printed where the service was started; it begins with tw_." fault={faults.token}>
        {(control) => <input {...control} name="token" required minLength={20} autoComplete="off" spellCheck={false} />}
      </Field>
      <fieldset className="form">
        <legend className="legend">The district</legend>
        <NameFields faults={faults} />
        <DistrictFields start={{ ...START, time_zone: zone }} timeZones={timeZones} faults={faults} />
      </fieldset>
      <fieldset className="form">
        <legend className="legend">Its manager</legend>
        <ManagerFields faults={faults} />
      </fieldset>
      {fault ? (
        <p className="notice bad" role="alert">
          {fault}
        </p>
      ) : null}
      <button type="submit" className="button primary" disabled={busy}>
        {busy ? 'Setting up …' : 'Make the district'}
      </button>
    </form>
  );
}

async function signsIn(form: FormData): Promise<boolean> {
  try {
    await sendJson('POST', '/api/v1/sign-in', { email: String(form.get('email')).trim(), password: String(form.get('password')) });
    return true;
  } catch {
    return false;
  }
}

function NameFields({ faults }: { faults: Faults }) {
  return (
    <>
      <Field name="Name" fault={faults.name}>
        {(control) => <input {...control} name="name" required minLength={2} maxLength={120} />}
      </Field>
      <Field
        name="Code (may stay empty)"
        help="Small letters, digits and hyphens, 2 to 40; made from the name when left empty."
        fault={faults.code}
      >
        {(control) => <input {...control} name="code" pattern="[a-z0-9\-]{2,40}" autoCapitalize="none" spellCheck={false} />}
      </Field>
    </>
  );
}

function ManagerFields({ faults }: { faults: Faults }) {
  return (
    <>
      <Field name="Name" fault={faults['manager.name']}>
        {(control) => <input {...control} name="manager_name" required maxLength={120} autoComplete="name" />}
      </Field>
      <Field name="E-mail address" fault={faults['manager.email']}>
        {(control) => <input {...control} name="email" type="email" required maxLength={254} autoComplete="username" />}
      </Field>
      <Field name="Password" help="At least 10 characters." fault={faults['manager.password']}>
        {(control) => (
          <input {...control} name="password" type="password" required minLength={10} maxLength={200} autoComplete="new-password" />
        )}
      </Field>
      <Field name="Password again" fault={faults.again}>
        {(control) => <input {...control} name="again" type="password" required autoComplete="new-password" />}
      </Field>
    </>
  );
}
