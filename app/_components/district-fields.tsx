'use client';

import { type DistrictSettings, MONTH_NAMES, UNIT_NAMES, WEEKDAYS } from './district-words.ts';
import { Field, Options } from './field.tsx';

const NUMBERS: ReadonlySet<string> = new Set(['week_start', 'water_year_start_month', 'default_elevation_m', 'radiation_coefficient']);

/** The settings in a form, as the API names them. */
export function settingsIn(form: FormData): Record<string, string | number> {
  const settings: Record<string, string | number> = {};
  for (const name of SETTING_NAMES) if (form.has(name)) settings[name] = settingOf(name, String(form.get(name)).trim());
  return settings;
}

function settingOf(name: string, text: string): string | number {
  return NUMBERS.has(name) ? Number(text) : text;
}

const SETTING_NAMES = [
  'name',
  'time_zone',
  'units',
  'week_start',
  'water_year_start_month',
  'default_elevation_m',
  'radiation_coefficient',
] as const;

interface DistrictFieldsProps {
  readonly start: DistrictSettings;
  readonly timeZones: readonly string[];
  readonly faults: Readonly<Record<string, string>>;
}

/** Everything about a district but its name. */
export function DistrictFields({ start, timeZones, faults }: DistrictFieldsProps) {
  return (
    <>
      <TimeZoneField value={start.time_zone} timeZones={timeZones} fault={faults.time_zone} />
      <Field name="Units" fault={faults.units}>
        {(control) => <Options control={control} name="units" value={start.units} options={UNIT_NAMES} />}
      </Field>
      <Field name="Delivery week begins on" fault={faults.week_start}>
        {(control) => <Options control={control} name="week_start" value={start.week_start} options={numbered(WEEKDAYS)} />}
      </Field>
      <Field name="Water year begins in" fault={faults.water_year_start_month}>
        {(control) => (
          <Options control={control} name="water_year_start_month" value={start.water_year_start_month} options={numbered(MONTH_NAMES)} />
        )}
      </Field>
      <Field
        name="Elevation where none is known, m"
        help="Taken for stations and parcels that come without one."
        fault={faults.default_elevation_m}
      >
        {(control) => (
          <input
            {...control}
            type="number"
            name="default_elevation_m"
            required
            min={-430}
            max={6000}
            step="any"
            defaultValue={start.default_elevation_m}
          />
        )}
      </Field>
      <CoefficientField value={start.radiation_coefficient} fault={faults.radiation_coefficient} />
    </>
  );
}

function numbered(names: readonly string[]): [number, string][] {
  return names.map((name, at) => [at + 1, name]);
}

function TimeZoneField({ value, timeZones, fault }: { value: string; timeZones: readonly string[]; fault?: string }) {
  const offered = timeZones.includes(value) ? timeZones : [value, ...timeZones];
  return (
    <Field name="Time zone" help="Days and weeks begin by the clock of this place." fault={fault}>
      {(control) => (
        <select {...control} key={value} name="time_zone" required defaultValue={value}>
          {offered.map((zone) => (
            <option key={zone} value={zone}>
              {zone.replaceAll('_', ' ')}
            </option>
          ))}
        </select>
      )}
    </Field>
  );
}

const INLAND = 0.16;
const COAST = 0.19;

/** FAO-56 Eq. 50 gives two coefficients; a district that has fitted its own keeps it. */
function CoefficientField({ value, fault }: { value: number; fault?: string }) {
  const options: [number, string][] = [
    [INLAND, 'inland: 0.16'],
    [COAST, 'at a coast: 0.19'],
  ];
  if (value !== INLAND && value !== COAST) options.push([value, `own: ${value}`]);
  return (
    <Field
      name="Where the land lies (radiation coefficient kRs)"
      help="Used where sunshine must be estimated from temperature (FAO-56 Eq. 50)."
      fault={fault}
    >
      {(control) => <Options control={control} name="radiation_coefficient" value={value} options={options} />}
    </Field>
  );
}
