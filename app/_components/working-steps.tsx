import type { WorkingAnswer } from '../../lib/http/contract/run.ts';
import { DAILY_VARIABLES } from '../../lib/season/types.ts';
import { WEATHER_VARIABLES, type WeatherVariable } from '../../lib/weather/variable.ts';
import { DataTable } from './data-table.tsx';
import { FallbackWords } from './fallback-words.tsx';
import { MISSING_MARK, percent, significant } from './figures.ts';
import { Section } from './page-head.tsx';
import { substituted } from './substituted.ts';
import styles from './working-steps.module.css';

type Step = WorkingAnswer['steps'][number];

const PARTS: Readonly<Record<string, string>> = {
  weather: 'Weather at the parcel',
  radiation: 'Radiation',
  'reference-et': 'Reference ET',
  calendar: 'Crop calendar',
  coefficient: 'Crop coefficient',
  surface: 'Evaporation from the soil surface',
  'root-zone': 'Water in the root zone',
  irrigation: 'Irrigation requirement',
  balance: 'Water balance of the day',
  'energy-budget': 'Energy budget',
};

export interface StepGroup {
  readonly part: string;
  readonly strip: string | undefined;
  readonly steps: readonly Step[];
}

/** Steps in the order the code did them, cut where the part or the strip changes. */
export function groupSteps(steps: readonly Step[]): StepGroup[] {
  const groups: { part: string; strip: string | undefined; steps: Step[] }[] = [];
  for (const step of steps) {
    const last = groups[groups.length - 1];
    if (last && last.part === step.part && last.strip === step.strip) last.steps.push(step);
    else groups.push({ part: step.part, strip: step.strip, steps: [step] });
  }
  return groups;
}

/** A part in words; one this version does not know is shown as it came. */
export function partName(part: string): string {
  return PARTS[part] ?? part.charAt(0).toUpperCase() + part.slice(1).replaceAll('-', ' ');
}

/** The whole derivation: what went in, every equation with its numbers, and what came out. */
export function WorkingSteps({ working }: { working: WorkingAnswer }) {
  return (
    <>
      <WeatherIn working={working} />
      <StepGroups steps={working.steps} />
      <ResultTable working={working} />
    </>
  );
}

/** Steps under the name of their part, numbered. */
export function StepGroups({ steps }: { steps: readonly Step[] }) {
  const groups = groupSteps(steps);
  const seen = new Set<string>();
  return (
    <>
      {groups.map((group, at) => {
        const id = seen.has(group.part) ? `${group.part}-${at + 1}` : group.part;
        seen.add(group.part);
        return (
          <Section key={id} id={id} title={`${at + 1}. ${partName(group.part)}${group.strip ? `: ${group.strip}` : ''}`}>
            <ol className={styles.steps}>
              {group.steps.map((step, place) => (
                <StepItem key={`${step.symbol} ${step.name}`} step={step} number={`${at + 1}.${place + 1}`} />
              ))}
            </ol>
          </Section>
        );
      })}
    </>
  );
}

function StepItem({ step, number }: { step: Step; number: string }) {
  const numbers = step.inputs.length > 0 ? substituted(step.expression, step.inputs) : null;
  return (
    <li className={styles.step}>
      <h3 className={styles.name}>
        <span className={styles.number}>{number}</span> {step.name}, <var>{step.symbol}</var>
      </h3>
      <div className={`formula ${styles.equation}`}>
        <div>{step.expression}</div>
        {numbers ? <div>= {numbers}</div> : null}
        <div className={styles.result}>
          = <b>{significant(step.result)}</b> {unitText(step.unit)}
        </div>
      </div>
      {step.inputs.length ? (
        <dl className={styles.given} aria-label="Numbers put in">
          {step.inputs.map((input) => (
            <div key={input.symbol}>
              <dt>{input.symbol}</dt>
              <dd>
                {significant(input.value)} {unitText(input.unit)}
              </dd>
            </div>
          ))}
        </dl>
      ) : null}
      <p className="source">{step.source}</p>
    </li>
  );
}

function unitText(unit: string): string {
  return unit === '1' || unit === '' || unit === '–' ? '' : unit;
}

function WeatherIn({ working }: { working: WorkingAnswer }) {
  const names = [...new Set(working.inputs.flatMap((input) => Object.keys(input.values)))];
  const ownWeights = working.inputs.some((input) => Object.keys(input.series_weights ?? {}).length > 0);
  const fallbacks = [...new Set(working.inputs.flatMap((input) => input.fallbacks))];
  return (
    <Section
      id="sites"
      title="Weather of the day at its sites"
      note={`Completed values: where a source had none, what stands in its place is named below.${ownWeights ? ' A share beside a value is its weight in a series that has weights of its own; the column Weight holds for any other.' : ''}`}
    >
      <DataTable
        caption="Weather values by site with their weights"
        unitsBelow
        rows={working.inputs}
        rowKey={(input) => input.site}
        columns={[
          { key: 'site', head: 'Site', rowHead: true, cell: (input) => input.site_name },
          { key: 'weight', head: 'Weight', numeric: true, cell: (input) => percent(input.weight, 2) },
          { key: 'elevation', head: 'Elevation', unit: 'm', numeric: true, cell: (input) => significant(input.elevation_m, 4) },
          ...names.map((name) => ({
            key: name,
            head: variableTerm(name),
            unit: variableUnit(name),
            numeric: true,
            cell: (input: WorkingAnswer['inputs'][number]) => valueWithWeight(input, name),
          })),
        ]}
      />
      <FallbackWords names={fallbacks} />
    </Section>
  );
}

/** The value at the site, with its weight where the series has weights of its own. */
function valueWithWeight(input: WorkingAnswer['inputs'][number], name: string): string {
  const weight = input.series_weights?.[name];
  const value = significant(input.values[name]);
  return weight === undefined ? value : `${value} × ${percent(weight, 1)}`;
}

const COMPLETED: Readonly<Record<string, readonly [string, string]>> = {
  airTemperatureMax: ['Maximum air temperature', '°C'],
  airTemperatureMin: ['Minimum air temperature', '°C'],
  actualVapourPressure: ['Actual vapour pressure', 'kPa'],
  solarRadiation: ['Solar radiation', 'MJ m⁻² d⁻¹'],
  windSpeed2m: ['Wind speed at 2 m', 'm/s'],
  wind_speed_2m_m_s: ['Wind speed at 2 m', 'm/s'],
  precipitation: ['Rain', 'mm'],
  reference_et_mm: ['Reference ET at the site', 'mm'],
  temperature_correction_c: ['Correction to the parcel’s elevation', '°C'],
};

function variableTerm(name: string): string {
  return COMPLETED[name]?.[0] ?? WEATHER_VARIABLES[name as WeatherVariable]?.term ?? name;
}

function variableUnit(name: string): string | undefined {
  return COMPLETED[name]?.[1] ?? WEATHER_VARIABLES[name as WeatherVariable]?.unit;
}

interface Compared {
  readonly id: string;
  readonly term: string;
  readonly unit: string;
  readonly derived: number | null;
  readonly stored: number | null;
  readonly agrees: boolean;
}

/** The derivation's results beside the run's stored ones; they agree when they differ by no more than half a step of the store. */
export function compareStored(working: WorkingAnswer): Compared[] {
  return DAILY_VARIABLES.map((variable) => {
    const derived = resultOf(working.results, variable.id, variable.unit);
    const stored = resultOf(working.stored, variable.id, variable.unit);
    const near = derived !== null && stored !== null && Math.abs(derived - stored) <= 0.5 / variable.scale + 1e-9;
    return {
      id: variable.id,
      term: variable.term,
      unit: variable.unit,
      derived,
      stored,
      agrees: near || (derived === null && stored === null),
    };
  });
}

/** A result by its name, with or without the unit in it. */
function resultOf(values: Readonly<Record<string, number | null>>, id: string, unit: string): number | null {
  return values[id] ?? values[`${id}_${unit}`] ?? null;
}

function ResultTable({ working }: { working: WorkingAnswer }) {
  const rows = compareStored(working);
  const apart = rows.filter((row) => !row.agrees).length;
  return (
    <Section
      id="results"
      title="Results, beside what the run stored"
      note={
        apart === 0
          ? 'Every result agrees with the stored one to the last digit that is stored.'
          : `${apart} of ${rows.length} results differ from the stored ones.`
      }
    >
      <DataTable
        caption="Results of the derivation and stored values"
        rows={rows}
        rowKey={(row) => row.id}
        columns={[
          { key: 'term', head: 'Quantity', rowHead: true, cell: (row) => row.term },
          { key: 'derived', head: 'Derived here', numeric: true, cell: (row) => significant(row.derived) },
          {
            key: 'stored',
            head: 'Stored by the run',
            numeric: true,
            cell: (row) => (row.stored === null ? MISSING_MARK : significant(row.stored)),
          },
          { key: 'unit', head: 'Unit', cell: (row) => unitText(row.unit) },
          {
            key: 'agrees',
            head: 'Check',
            cell: (row) => (row.agrees ? <span className="tag good">✓ agrees</span> : <span className="tag bad">✗ differs</span>),
          },
        ]}
      />
    </Section>
  );
}
