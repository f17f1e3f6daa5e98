'use client';

import { useRouter } from 'next/navigation';
import { useRef, useState } from 'react';
import type { PreviewAnswer } from '../../../../../lib/http/contract/quality.ts';
import { Field, type Said, SaidLine } from '../../../../_components/field.tsx';
import { faultsOf, formMessageOf, sendJson } from '../../../../_components/problem-text.ts';
import { Preview } from './preview-chart.tsx';
import { ACT_WORDS, PATH } from './quality-words.ts';

type Act = keyof typeof ACT_WORDS;

interface CorrectionFormProps {
  readonly source: string;
  readonly site: string;
  readonly variable: string;
  readonly unit: string;
  readonly from: string;
  readonly to: string;
  readonly rule?: string;
  readonly act: Act;
  readonly amount?: number;
}

const AMOUNT_LABEL = (act: Act, unit: string): string | null =>
  ({ accept: null, reject: null, factor: 'Factor', offset: `Offset, ${unit}`, replace: `Value of each day, ${unit}`, aridity: 'Ko, °C' })[
    act
  ];

const AMOUNT_HELP: Partial<Record<Act, string>> = {
  aridity:
    'Difference of minimum temperature and dew point that a reference surface has: 2 without a reference station nearby, 0 with one.',
};

/** Accept, correct or reject a value or a period: seen before it is saved, with a reason. */
export function CorrectionForm(props: CorrectionFormProps) {
  const router = useRouter();
  const form = useRef<HTMLFormElement>(null);
  const [act, setAct] = useState<Act>(props.act);
  const [preview, setPreview] = useState<PreviewAnswer | null>(null);
  const [said, setSaid] = useState<Said | null>(null);
  const [faults, setFaults] = useState<Readonly<Record<string, string>>>({});
  const [busy, setBusy] = useState(false);
  const label = AMOUNT_LABEL(act, props.unit);

  const wanted = () => {
    const data = new FormData(form.current ?? undefined);
    const amount = String(data.get('amount') ?? '').trim();
    return {
      ...{
        source: props.source,
        site: props.site,
        variable: props.variable,
        from: String(data.get('from')),
        to: String(data.get('to')),
        act,
      },
      ...(label === null || amount === '' ? {} : { amount: Number(amount) }),
      ...(props.rule && data.get('settle') ? { rule: props.rule } : {}),
    };
  };
  const attempt = async (work: () => Promise<void>) => {
    setBusy(true);
    setFaults({});
    setSaid(null);
    try {
      await work();
    } catch (error) {
      setFaults(faultsOf(error));
      setSaid({ good: false, text: formMessageOf(error) });
    }
    setBusy(false);
  };
  const see = () => attempt(async () => setPreview(await sendJson<PreviewAnswer>('POST', '/api/v1/weather/corrections/preview', wanted())));
  const save = () =>
    attempt(async () => {
      const reason = String(new FormData(form.current ?? undefined).get('reason') ?? '');
      await sendJson('POST', '/api/v1/weather/corrections', { ...wanted(), reason });
      router.push(`${PATH}#corrections`);
      router.refresh();
    });

  return (
    <form
      ref={form}
      className="form no-print"
      onChange={() => setPreview(null)}
      onSubmit={(event) => {
        event.preventDefault();
        if (preview) save();
        else see();
      }}
    >
      <Field name="Decision" fault={faults.act}>
        {(control) => (
          <select {...control} value={act} onChange={(event) => setAct(event.target.value as Act)}>
            {(Object.keys(ACT_WORDS) as Act[])
              .filter((each) => (props.act === 'aridity') === (each === 'aridity'))
              .map((each) => (
                <option key={each} value={each}>
                  {ACT_WORDS[each]}
                </option>
              ))}
          </select>
        )}
      </Field>
      {label === null ? null : (
        <Field name={label} help={AMOUNT_HELP[act]} fault={faults.amount}>
          {(control) => (
            <input
              {...control}
              key={act}
              name="amount"
              type="number"
              step="any"
              required
              defaultValue={act === props.act ? props.amount : undefined}
            />
          )}
        </Field>
      )}
      <div className="row">
        <Field name="First day" fault={faults.from}>
          {(control) => <input {...control} name="from" type="date" required defaultValue={props.from} />}
        </Field>
        <Field name="Last day" fault={faults.to}>
          {(control) => <input {...control} name="to" type="date" required defaultValue={props.to} />}
        </Field>
      </div>
      {props.rule ? (
        <label className="check">
          <input type="checkbox" name="settle" defaultChecked /> Settles this flag
        </label>
      ) : null}
      <Field name="Reason" help="Kept with your name and the time." fault={faults.reason}>
        {(control) => <textarea {...control} name="reason" required minLength={3} maxLength={1000} rows={2} />}
      </Field>
      {preview ? <Preview preview={preview} /> : null}
      <SaidLine said={said} />
      <div className="row">
        <button type="button" className="button" disabled={busy} onClick={see}>
          Preview
        </button>
        <button type="submit" className="button primary" disabled={busy || preview === null}>
          Save the decision
        </button>
        {preview === null ? <span className="hint">See the preview first.</span> : null}
      </div>
    </form>
  );
}
