'use client';

import type { Understood } from '../../lib/files/reading.ts';
import type { ImportAnswer } from '../../lib/http/contract/rest.ts';
import { JoinChoice, TurnoutJoinChoice } from './import-join.tsx';
import { Section } from './page-head.tsx';
import type { Patch } from './use-import.ts';

interface ReadingChoicesProps {
  readonly now: ImportAnswer;
  readonly patch: Patch;
  readonly busy: boolean;
}

const SHAPES = ['parcels', 'canals', 'areas', 'soil-areas', 'turnouts'];
const GRIDS = ['netcdf-3', 'netcdf-4', 'zarr', 'geotiff'];

/** What can be chosen about how this kind of file is read; changing any has it read again. */
export function ReadingChoices({ now, patch, busy }: ReadingChoicesProps) {
  const understood = now.understood as unknown as Understood;
  const fields = fieldsOf(now, understood);
  if (fields.length === 0) return null;
  const send = (form: FormData) => patch(optionsOf(form));
  return (
    <Section title="How it is read" note="Change what was taken wrongly; the files are then read again.">
      <form
        className="toolbar"
        onSubmit={(event) => {
          event.preventDefault();
          send(new FormData(event.currentTarget));
        }}
      >
        {fields}
        <button type="submit" className="button" disabled={busy}>
          Read again
        </button>
      </form>
    </Section>
  );
}

const NUMBERS = ['joinDistance', 'minimumHours', 'margin'];

/** Left empty, a choice is taken back. */
function optionsOf(form: FormData): Record<string, unknown> {
  const options: Record<string, unknown> = {};
  for (const [name, value] of form.entries()) {
    const text = String(value).trim();
    options[name] = text === '' ? null : NUMBERS.includes(name) ? Number(text) : text;
  }
  return options;
}

function fieldsOf(now: ImportAnswer, understood: Understood): React.ReactNode[] {
  const { options } = now;
  const said = (name: string) => (options[name] === undefined ? '' : String(options[name]));
  const fields: React.ReactNode[] = [];
  if (understood.layers && understood.layers.length > 1) fields.push(<LayerField key="layer" understood={understood} />);
  if (SHAPES.includes(now.kind) || understood.format === 'geotiff') {
    fields.push(
      <TextField key="crs" name="crs" label="Coordinate system, if the file’s is wrong" value={said('crs')} example="EPSG:28992" />,
    );
  }
  if (now.kind === 'parcels' || now.kind === 'turnouts') {
    const Join = now.kind === 'parcels' ? JoinChoice : TurnoutJoinChoice;
    fields.push(
      <Join key="join" value={said('joinByPlace')} />,
      <NumberField key="distance" name="joinDistance" label="Furthest (m)" value={said('joinDistance')} most={50000} assumed={500} />,
    );
  }
  const short = understood.stepMinutes ?? understood.grid?.stepMinutes;
  if (now.kind === 'weather' && short && short < 1440) {
    fields.push(
      <StampField key="stamp" value={said('stamp')} />,
      <TextField key="zone" name="stampZone" label="Zone of the stamps" value={said('stampZone')} example="UTC or Europe/Madrid" />,
      <NumberField key="hours" name="minimumHours" label="Fewest hours of a day" value={said('minimumHours')} most={24} assumed={22} />,
    );
  }
  if (now.kind === 'weather' || now.kind === 'stations') fields.push(<RoleField key="role" value={said('role')} />);
  if (now.kind === 'images') fields.push(<QuantityField key="quantity" value={said('quantity')} />);
  if (now.kind === 'weather' && GRIDS.includes(understood.format)) {
    fields.push(<NumberField key="margin" name="margin" label="Cells around the district (degrees)" value={said('margin')} most={10} />);
  }
  return fields;
}

function LayerField({ understood }: { understood: Understood }) {
  return (
    <div className="field">
      <label htmlFor="import-layer">Layer</label>
      <select id="import-layer" name="layer" defaultValue={understood.layer ?? ''}>
        {understood.layers?.map((layer) => (
          <option key={layer.name} value={layer.name}>
            {layer.name}
            {layer.featureCount === null ? '' : ` (${layer.featureCount})`}
          </option>
        ))}
      </select>
    </div>
  );
}

function RoleField({ value }: { value: string }) {
  return (
    <div className="field">
      <label htmlFor="import-role">The values are</label>
      <select id="import-role" name="role" defaultValue={value}>
        <option value="">as the source’s</option>
        <option value="observed">observed</option>
        <option value="forecast">a forecast</option>
      </select>
    </div>
  );
}

function QuantityField({ value }: { value: string }) {
  return (
    <div className="field">
      <label htmlFor="import-quantity">The images show</label>
      <select id="import-quantity" name="quantity" defaultValue={value}>
        <option value="">a vegetation index</option>
        <option value="fraction_covered">the fraction of ground covered</option>
      </select>
    </div>
  );
}

function StampField({ value }: { value: string }) {
  return (
    <div className="field">
      <label htmlFor="import-stamp">A time stamp names</label>
      <select id="import-stamp" name="stamp" defaultValue={value}>
        <option value="">as found</option>
        <option value="start">the start of its interval</option>
        <option value="centre">its middle</option>
        <option value="end">its end</option>
      </select>
    </div>
  );
}

function TextField({ name, label, value, example }: { name: string; label: string; value: string; example: string }) {
  return (
    <label className="field">
      <span className="label">{label}</span>
      <input name={name} defaultValue={value} placeholder={example} maxLength={200} />
    </label>
  );
}

interface NumberFieldProps {
  readonly name: string;
  readonly label: string;
  readonly value: string;
  readonly most: number;
  /** taken where nothing is said */
  readonly assumed?: number;
}

function NumberField({ name, label, value, most, assumed }: NumberFieldProps) {
  return (
    <label className="field">
      <span className="label">{label}</span>
      <input
        name={name}
        type="number"
        min={0}
        max={most}
        step="any"
        defaultValue={value}
        placeholder={assumed === undefined ? '' : String(assumed)}
      />
    </label>
  );
}
