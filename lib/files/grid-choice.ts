/**
 * Which fields of an import give which quantity, where several could.
 */
import { type FindingList, shown } from './finding-list.ts';
import type { Field } from './grid-fields.ts';
import type { GridRole } from './grid-role-names.ts';

/** The fields that give one role: the same field in all its files. */
export interface RoleFields {
  readonly role: GridRole;
  readonly label: string;
  readonly fields: readonly Field[];
}

/**
 * One label for each role: the surest, then the one with most files. Roles that are only offered are left out, with a warning.
 */
export function chooseFields(fields: readonly Field[], findings: FindingList): RoleFields[] {
  const byRole = new Map<GridRole, Map<string, Field[]>>();
  const offered = new Map<string, Field>();
  for (const field of fields) {
    const { role, taken } = field.role;
    if (role === null) continue;
    if (!taken) {
      offered.set(field.label, field);
      continue;
    }
    const labels = byRole.get(role) ?? new Map<string, Field[]>();
    labels.set(field.label, [...(labels.get(field.label) ?? []), field]);
    byRole.set(role, labels);
  }
  for (const [label, field] of offered) warnOffered(label, field, findings);
  return [...byRole].map(([role, labels]) => {
    const [best, ...others] = [...labels].sort(([, a], [, b]) => b[0].role.confidence - a[0].role.confidence || b.length - a.length);
    for (const [label] of others) warnRival(label, best[0], role, findings);
    return { role, label: best[0], fields: best[1] };
  });
}

function warnOffered(label: string, field: Field, findings: FindingList): void {
  findings.warn({
    code: 'not-reference-et',
    message: `"${shown(label)}" is ${field.role.reason}; it is not taken as reference ET.`,
    file: field.file.name,
    column: label,
    advice:
      'If it is the reference ET of a short crop after all, give it the role reference_et_given_mm in the plan. Demand computed from another quantity is wrong.',
  });
}

function warnRival(label: string, chosen: string, role: GridRole, findings: FindingList): void {
  findings.warn({
    code: 'field-left-out',
    message: `"${shown(label)}" and "${shown(chosen)}" both give ${role}; "${shown(chosen)}" is taken.`,
    column: label,
    advice: 'Choose the other in the plan if it is the better one.',
  });
}

/** Roles that a combination of fields makes, and what it needs. */
export interface Combination {
  readonly makes: GridRole;
  readonly parts: readonly RoleFields[];
}

/**
 * Groups roles into what is read together: the two components of wind, a deficit with its temperature, every other role alone.
 */
export function combineRoles(chosen: readonly RoleFields[], findings: FindingList): Combination[] {
  const of = (role: GridRole) => chosen.find((candidate) => candidate.role === role);
  const combinations: Combination[] = chosen.filter(({ role }) => !PARTS.has(role)).map((part) => ({ makes: part.role, parts: [part] }));
  const [east, north] = [of('eastward_wind_m_s'), of('northward_wind_m_s')];
  if (of('wind_speed_m_s') === undefined && (east || north)) {
    if (east && north) combinations.push({ makes: 'wind_speed_m_s', parts: [east, north] });
    else
      findings.warn({
        code: 'wind-component-missing',
        message: `"${(east ?? north)?.label}" is one component of wind and the other is missing; no wind speed is made.`,
        advice: 'Bring both components, or the wind speed.',
      });
  }
  const deficit = of('vapour_pressure_deficit_kpa');
  if (deficit && !HUMIDITY.some(of)) addDeficit(deficit, of, combinations, findings);
  return combinations;
}

const PARTS = new Set<GridRole>(['eastward_wind_m_s', 'northward_wind_m_s', 'vapour_pressure_deficit_kpa', 'elevation_m']);
/** Roles that give vapour pressure better than a deficit does. */
const HUMIDITY: readonly GridRole[] = [
  'vapour_pressure_kpa',
  'dew_point_c',
  'specific_humidity_kg_kg',
  'relative_humidity_max_pct',
  'relative_humidity_mean_pct',
];

function addDeficit(
  deficit: RoleFields,
  of: (role: GridRole) => RoleFields | undefined,
  combinations: Combination[],
  findings: FindingList,
): void {
  const [max, min, mean] = [of('air_temperature_max_c'), of('air_temperature_min_c'), of('air_temperature_mean_c')];
  const temperatures = max && min ? [max, min] : mean ? [mean] : [];
  if (temperatures.length === 0) {
    findings.warn({
      code: 'deficit-without-temperature',
      message: `"${deficit.label}" is a vapour pressure deficit, and no temperature is there to take it from; it is left out.`,
      column: deficit.label,
      advice: 'Bring the temperature in the same import.',
    });
    return;
  }
  findings.note({
    code: 'vapour-pressure-from-deficit',
    message: `Vapour pressure is the saturation at the temperature (${temperatures.map(({ label }) => label).join(', ')}) less the deficit "${deficit.label}" (FAO-56 Eq. 11, 12).`,
    column: deficit.label,
  });
  combinations.push({ makes: 'vapour_pressure_kpa', parts: [deficit, ...temperatures] });
}
