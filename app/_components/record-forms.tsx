'use client';

import { useRouter } from 'next/navigation';
import { useState } from 'react';
import { CUBIC_METRES_PER_ACRE_FOOT, MILLIMETRES_PER_INCH, type UnitSystem } from '../../lib/base/units.ts';
import { ConfirmButton } from './dialog.tsx';
import { Field, Options, type Said, SaidLine } from './field.tsx';
import { faultsOf, formMessageOf, sendJson } from './problem-text.ts';
import { QUANTITIES } from './record-words.ts';

interface RecordFormProps {
  readonly parcel: string;
  /** offered to begin with */
  readonly date: string;
  readonly units: UnitSystem;
}

/** Units a delivery can be given in: member of the request, and factor to its unit. */
const AMOUNTS: Readonly<Record<UnitSystem, readonly (readonly [string, 'volume_m3' | 'gross_depth_mm', number])[]>> = {
  metric: [
    ['m³', 'volume_m3', 1],
    ['mm over the parcel', 'gross_depth_mm', 1],
  ],
  us: [
    ['ac-ft', 'volume_m3', CUBIC_METRES_PER_ACRE_FOOT],
    ['in over the parcel', 'gross_depth_mm', MILLIMETRES_PER_INCH],
  ],
};

/** Sends a form's record and says what became of it. */
function useRecord(path: string, done: string) {
  const router = useRouter();
  const [said, setSaid] = useState<Said | null>(null);
  const [faults, setFaults] = useState<Readonly<Record<string, string>>>({});
  async function send(body: object) {
    setFaults({});
    try {
      await sendJson('POST', path, body);
      setSaid({ good: true, text: done });
      router.refresh();
    } catch (error) {
      setFaults(faultsOf(error));
      setSaid({ good: false, text: formMessageOf(error) });
    }
  }
  return { said, faults, send };
}

/** Records a delivery of one day. */
export function DeliveryForm({ parcel, date, units }: RecordFormProps) {
  const { said, faults, send } = useRecord('/api/v1/deliveries', 'Recorded. A run that takes deliveries now says that it is out of date.');
  const amounts = AMOUNTS[units];
  async function add(form: FormData) {
    const [, member, factor] = amounts[Number(form.get('unit'))];
    await send({ parcel, date: String(form.get('date')), [member]: Number(form.get('amount')) * factor });
  }
  return (
    <>
      <form
        className="toolbar no-print"
        aria-label="Record a delivery"
        onSubmit={(event) => {
          event.preventDefault();
          add(new FormData(event.currentTarget));
        }}
      >
        <Field name="Day" fault={faults.date}>
          {(control) => <input {...control} type="date" name="date" required defaultValue={date} />}
        </Field>
        <Field name="Delivered" fault={faults.volume_m3 ?? faults.gross_depth_mm}>
          {(control) => <input {...control} type="number" name="amount" required min={0} step="any" size={8} />}
        </Field>
        <Field name="Unit">
          {(control) => <Options control={control} name="unit" value={0} options={amounts.map(([label], at) => [at, label] as const)} />}
        </Field>
        <button type="submit" className="button">
          Record the delivery
        </button>
      </form>
      <p className="hint no-print">What was recorded for the day before is replaced. 0 says that nothing was delivered.</p>
      <SaidLine said={said} />
    </>
  );
}

/** Records a measurement of one day. */
export function MeasurementForm({ parcel, date }: Omit<RecordFormProps, 'units'>) {
  const { said, faults, send } = useRecord('/api/v1/measurements', 'Recorded.');
  const [quantity, setQuantity] = useState<keyof typeof QUANTITIES>('water_content_m3_m3');
  const { depth, unit } = QUANTITIES[quantity];
  async function add(form: FormData) {
    const given = String(form.get('soil_depth_m') ?? '');
    const body = { parcel, date: String(form.get('date')), quantity, value: Number(form.get('value')) };
    await send(given === '' ? body : { ...body, soil_depth_m: Number(given) });
  }
  return (
    <>
      <form
        className="toolbar no-print"
        aria-label="Record a measurement"
        onSubmit={(event) => {
          event.preventDefault();
          add(new FormData(event.currentTarget));
        }}
      >
        <Field name="Day" fault={faults.date}>
          {(control) => <input {...control} type="date" name="date" required defaultValue={date} />}
        </Field>
        <Field name="What was measured" fault={faults.quantity}>
          {(control) => (
            <select {...control} value={quantity} onChange={(event) => setQuantity(event.target.value as keyof typeof QUANTITIES)}>
              {Object.entries(QUANTITIES).map(([code, { name }]) => (
                <option key={code} value={code}>
                  {name}
                </option>
              ))}
            </select>
          )}
        </Field>
        {depth === 'none' ? null : (
          <Field name="Down to (m)" fault={faults.soil_depth_m}>
            {(control) => (
              <input {...control} type="number" name="soil_depth_m" required={depth === 'needed'} min={0.01} max={10} step="any" size={6} />
            )}
          </Field>
        )}
        <Field name={`Value (${unit})`} fault={faults.value}>
          {(control) => <input {...control} type="number" name="value" required step="any" size={8} />}
        </Field>
        <button type="submit" className="button">
          Record the measurement
        </button>
      </form>
      <SaidLine said={said} />
    </>
  );
}

/** Takes one record out again, asked for twice. */
export function RemoveRecord({ path, what }: { path: string; what: string }) {
  const router = useRouter();
  const remove = async () => {
    await sendJson('DELETE', path);
    router.refresh();
  };
  return (
    <ConfirmButton
      label="Remove"
      title={`Remove ${what}?`}
      says="A run that takes it will say that it is out of date. It can be recorded again."
      act="Remove"
      onAct={remove}
    />
  );
}
