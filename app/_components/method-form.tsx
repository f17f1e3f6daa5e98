'use client';

import { useRouter } from 'next/navigation';
import { useState } from 'react';
import type { MethodAnswer } from '../../lib/http/contract/rest.ts';
import { Field, type Said, SaidLine } from './field.tsx';
import { faultsOf, formMessageOf, sendJson } from './problem-text.ts';

/** Efficiencies by depth as they are typed. @example pointsText([{ depth_mm: 10, efficiency: 0.7 }]) // '10: 0.7' */
export function pointsText(points: MethodAnswer['efficiency_by_depth']): string {
  return points.map(({ depth_mm, efficiency }) => `${depth_mm}: ${efficiency}`).join('; ');
}

/** What was typed as efficiencies by depth; null where it cannot be read. @example readPoints('10: 0.7; 40: 0.85')?.length // 2 */
export function readPoints(text: string): MethodAnswer['efficiency_by_depth'] | null {
  const parts = text
    .split(/[;\n]/)
    .map((part) => part.trim())
    .filter((part) => part !== '');
  const points = parts.map((part) => /^([\d.]+)\s*[:=]\s*([\d.]+)$/.exec(part));
  if (points.some((point) => point === null)) return null;
  return points.map((point) => ({ depth_mm: Number(point?.[1]), efficiency: Number(point?.[2]) }));
}

/** Changes efficiency and limits of one application method. Depths in mm. */
export function MethodForm({ method }: { method: MethodAnswer }) {
  const router = useRouter();
  const [said, setSaid] = useState<Said | null>(null);
  const [faults, setFaults] = useState<Readonly<Record<string, string>>>({});
  async function change(form: FormData) {
    setFaults({});
    const number = (name: string) => {
      const text = String(form.get(name) ?? '').trim();
      return text === '' ? null : Number(text);
    };
    const points = readPoints(String(form.get('efficiency_by_depth') ?? ''));
    if (points === null) return setFaults({ efficiency_by_depth: 'Write pairs such as 10: 0.7; 40: 0.85.' });
    const patch = {
      efficiency: number('efficiency'),
      maximum_daily_depth_mm: number('maximum_daily_depth_mm'),
      trigger_fraction: number('trigger_fraction'),
      minimum_depth_mm: number('minimum_depth_mm'),
      flow_l_s_ha: number('flow_l_s_ha'),
      efficiency_by_depth: points,
      source: String(form.get('source')).trim(),
    };
    try {
      await sendJson('PATCH', `/api/v1/methods/${encodeURIComponent(method.code)}`, patch);
      setSaid({ good: true, text: `${method.name} is changed. Runs made before keep it as it was; start a run to bring it in.` });
      router.refresh();
    } catch (error) {
      setFaults(faultsOf(error));
      setSaid({ good: false, text: formMessageOf(error) });
    }
  }
  const amount = (name: keyof MethodAnswer, label: string, help: string, bounds: { min: number; max: number; required: boolean }) => (
    <Field name={label} help={help} fault={faults[name]}>
      {(control) => (
        <input {...control} type="number" name={name} step="any" {...bounds} defaultValue={(method[name] as number | null) ?? ''} />
      )}
    </Field>
  );
  return (
    <form
      className="form"
      aria-label={`Change ${method.name}`}
      onSubmit={(event) => {
        event.preventDefault();
        change(new FormData(event.currentTarget));
      }}
    >
      {amount('efficiency', 'Efficiency (fraction)', 'Share of the water put on the field that stays in the root zone.', {
        ...{ min: 0.05, max: 1, required: true },
      })}
      <Field
        name="Efficiency by depth"
        help="Net depth of an application in mm, and efficiency: 10: 0.7; 40: 0.85. Straight lines between. Empty: one efficiency at every depth."
        fault={faults.efficiency_by_depth}
      >
        {(control) => (
          <input {...control} name="efficiency_by_depth" defaultValue={pointsText(method.efficiency_by_depth)} maxLength={300} />
        )}
      </Field>
      {amount(
        'minimum_depth_mm',
        'Least depth of an application (mm)',
        'The system waits until so much is wanted. Empty: no least depth.',
        {
          ...{ min: 0, max: 300, required: false },
        },
      )}
      {amount('maximum_daily_depth_mm', 'Most in a day (mm)', 'Net depth that the system can put on in a day.', {
        ...{ min: 1, max: 500, required: true },
      })}
      {amount('flow_l_s_ha', 'Flow (L/s per ha)', 'Bounds the gross depth of a day: 1 L/s per ha is 8.64 mm a day. Empty: no bound.', {
        ...{ min: 0.05, max: 200, required: false },
      })}
      {amount('trigger_fraction', 'Starts at', 'Share of the readily available water that is gone when an irrigation starts, 0 to 1.', {
        ...{ min: 0.05, max: 1, required: true },
      })}
      <Field name="Where the values come from" fault={faults.source}>
        {(control) => <textarea {...control} name="source" required minLength={3} maxLength={400} rows={2} defaultValue={method.source} />}
      </Field>
      <div>
        <button type="submit" className="button">
          Save
        </button>
      </div>
      <SaidLine said={said} />
    </form>
  );
}
