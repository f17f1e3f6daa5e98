'use client';

import { useRouter } from 'next/navigation';
import { type ReactNode, useId, useState } from 'react';
import { MONTH_NAMES, WEEKDAYS } from './district-words.ts';
import { messageOf, sendJson } from './problem-text.ts';

/** The settings of a district that its manager may change, as the API names them. */
export interface DistrictSettings {
  readonly name: string;
  readonly time_zone: string;
  readonly units: 'metric' | 'us';
  readonly week_start: number;
  readonly water_year_start_month: number;
  readonly default_elevation_m: number;
  readonly radiation_coefficient: number;
}

const NUMBERS: ReadonlySet<string> = new Set(['week_start', 'water_year_start_month', 'default_elevation_m', 'radiation_coefficient']);

/** Changes the district; what is computed follows at the next run. */
export function DistrictForm({ district }: { district: DistrictSettings }) {
  const router = useRouter();
  const [said, setSaid] = useState<{ good: boolean; text: string } | null>(null);
  async function save(form: FormData) {
    const patch = Object.fromEntries([...form].map(([key, value]) => [key, NUMBERS.has(key) ? Number(value) : String(value)]));
    try {
      await sendJson('PATCH', '/api/v1/district', patch);
      setSaid({ good: true, text: 'Saved. Figures follow when the season is run again.' });
      router.refresh();
    } catch (error) {
      setSaid({ good: false, text: messageOf(error) });
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
      <Field name="Name">{(id) => <input id={id} name="name" required minLength={2} maxLength={120} defaultValue={district.name} />}</Field>
      <Field name="Time zone" help="An IANA name, for instance America/Denver.">
        {(id) => <input id={id} name="time_zone" required defaultValue={district.time_zone} />}
      </Field>
      <Field name="Units">{(id) => <Options id={id} name="units" value={district.units} options={UNITS} />}</Field>
      <Field name="Delivery week begins on">
        {(id) => <Options id={id} name="week_start" value={district.week_start} options={WEEKDAYS.map((name, at) => [at + 1, name])} />}
      </Field>
      <Field name="Water year begins in">
        {(id) => (
          <Options
            id={id}
            name="water_year_start_month"
            value={district.water_year_start_month}
            options={MONTH_NAMES.map((name, at) => [at + 1, name])}
          />
        )}
      </Field>
      <Field name="Elevation where none is known, m" help="Taken for sites and parcels without one.">
        {(id) => (
          <input
            id={id}
            type="number"
            name="default_elevation_m"
            required
            min={-430}
            max={6000}
            step="any"
            defaultValue={district.default_elevation_m}
          />
        )}
      </Field>
      <Field
        name="Radiation coefficient kRs"
        help="FAO-56 Eq. 50: 0.16 inland, 0.19 at a coast. Used where radiation is estimated from temperature."
      >
        {(id) => (
          <input
            id={id}
            type="number"
            name="radiation_coefficient"
            required
            min={0.1}
            max={0.25}
            step="any"
            defaultValue={district.radiation_coefficient}
          />
        )}
      </Field>
      {said ? (
        <p className={said.good ? 'notice good' : 'fault'} role={said.good ? 'status' : 'alert'}>
          {said.text}
        </p>
      ) : null}
      <div>
        <button type="submit" className="button primary">
          Save
        </button>
      </div>
    </form>
  );
}

const UNITS: readonly (readonly [string, string])[] = [
  ['metric', 'mm, ha, m³, m³/s'],
  ['us', 'in, ac, ac-ft, cfs'],
];

function Field({ name, help, children }: { name: string; help?: string; children: (id: string) => ReactNode }) {
  const id = useId();
  return (
    <div className="field">
      <label htmlFor={id}>{name}</label>
      {children(id)}
      {help ? <span className="hint">{help}</span> : null}
    </div>
  );
}

function Options({
  id,
  name,
  value,
  options,
}: {
  id: string;
  name: string;
  value: string | number;
  options: readonly (readonly [string | number, string])[];
}) {
  return (
    <select id={id} name={name} defaultValue={value}>
      {options.map(([code, label]) => (
        <option key={code} value={code}>
          {label}
        </option>
      ))}
    </select>
  );
}
