/**
 * Roles of the properties of a vector file, and typed access to them feature by feature.
 */
import { FindingList, shown } from './finding-list.ts';
import { propertyNames, propertyText, type RawFeature } from './raw-feature.ts';
import type { ImportOptions, UnderstoodColumn } from './reading.ts';
import { type BindRequest, type BoundTable, bindColumns, type TableRole } from './table-columns.ts';

const PROPERTY_LIMIT = 500;
const SAMPLE_FEATURES = 200;

export interface BoundProperties {
  readonly columns: UnderstoodColumn[];
  readonly bound: BoundTable['bound'];
  readonly names: readonly string[];
}

interface PropertyRequest {
  readonly roles: readonly TableRole[];
  readonly options: ImportOptions;
  /** role → property named in the options */
  readonly chosen: Readonly<Record<string, string | undefined>>;
  readonly assumed?: BindRequest['assumed'];
}

/** Words for the findings about codes: what the features are, and how they are numbered without a code. */
interface CodeWords {
  readonly thing: string;
  readonly numbered: string;
}

/**
 * Binds the properties and makes sure of a code: the one named; else the likeliest property whose values are all different; else none, and
 * the features are numbered. A property called just "id" counts only when its values are all different.
 */
export function bindWithCode(
  features: readonly RawFeature[],
  request: PropertyRequest,
  words: CodeWords,
  findings: FindingList,
): BoundProperties {
  const first = bindProperties(features, request, findings);
  if (features.length === 0) return first;
  const code = first.bound.get('code');
  const loose = code && request.chosen.code === undefined && /^_?(id|fid|objectid)$/i.test(code.header) && !isUnique(features, code.header);
  if (code && !loose) return first;
  const plan = {
    ...request.options.plan,
    columns: { ...request.options.plan?.columns, ...(loose ? { [code.header]: { role: null } } : {}) },
  };
  const again = { ...request, options: { ...request.options, plan } };
  const without = loose ? bindProperties(features, again, new FindingList()) : first;
  const unique = uniqueProperty(features, without);
  const { file } = features[0];
  if (unique === null) {
    findings.warn({
      code: 'codes-made',
      message: `No property holds a ${words.thing} code; the features are numbered ${words.numbered} … in the order of the file.`,
      file,
      advice: 'Name the code property in the options, so that a later file meets the same codes.',
    });
    return without;
  }
  findings.warn({
    code: 'code-column-proposed',
    message: `No property is named as a ${words.thing} code; "${shown(unique)}" is used, whose values are all different.`,
    file,
    column: unique,
    advice: 'Name another property in the options if that is not the code.',
  });
  return bindProperties(features, { ...again, chosen: { ...request.chosen, code: unique } }, new FindingList());
}

function isUnique(features: readonly RawFeature[], name: string): boolean {
  const texts = features.map(({ properties }) => propertyText(properties[name]));
  return texts.every((text) => text !== null) && new Set(texts).size === features.length;
}

/** Options such as `codeColumn` become part of the plan. */
function bindProperties(features: readonly RawFeature[], request: PropertyRequest, findings: FindingList): BoundProperties {
  const file = features[0]?.file ?? '';
  const names = propertyNames(features, PROPERTY_LIMIT);
  const columns: Record<string, { role: string | null; unit?: string | null }> = { ...request.options.plan?.columns };
  for (const [role, name] of Object.entries(request.chosen)) {
    if (name === undefined) continue;
    if (names.includes(name)) columns[name] = { ...columns[name], role };
    else
      findings.warn({
        code: 'unknown-column',
        message: `The options choose "${shown(name)}" for ${role}, but no feature has this property.`,
        file,
        column: name,
        limit: names.slice(0, 20).join(', '),
      });
  }
  const sample = (index: number) => sampleOf(features, names[index]);
  const { columns: understood, bound } = bindColumns(
    {
      headers: names,
      roles: request.roles,
      plan: { ...request.options.plan, columns },
      units: null,
      sample,
      assumed: request.assumed,
      file,
    },
    findings,
  );
  return { columns: understood, bound, names };
}

function sampleOf(features: readonly RawFeature[], name: string): string[] {
  const seen = new Set<string>();
  for (const { properties } of features.slice(0, SAMPLE_FEATURES)) {
    const text = propertyText(properties[name]);
    if (text !== null) seen.add(shown(text));
    if (seen.size >= 5) break;
  }
  return [...seen];
}

/** Text of a role, or null when the property or its value is missing. */
export function textOf(feature: RawFeature, bound: BoundTable['bound'], role: string): string | null {
  const column = bound.get(role);
  return column ? propertyText(feature.properties[column.header]) : null;
}

/** Number of a role in the inside unit; a bad one is a warning and null, since the shape is still of use. */
export function numberOf(
  feature: RawFeature,
  bound: BoundTable['bound'],
  request: { role: string; low: number; high: number; unit: string },
  findings: FindingList,
): number | null {
  const { role, low, high, unit } = request;
  const column = bound.get(role);
  const text = textOf(feature, bound, role);
  if (!column || text === null) return null;
  const value = column.convert(Number(text));
  if (value >= low && value <= high) return value;
  const limit = `${low} to ${high} ${unit}`.trim();
  findings.warn({
    code: 'value-out-of-range',
    message: `${role} "${shown(text)}" is not a number within ${limit}; it is left empty.`,
    file: feature.file,
    row: feature.row,
    column: column.header,
    value: shown(text),
    limit,
    advice: 'Correct the value or its unit.',
  });
  return null;
}

/** Properties without a role, kept as plain values. */
export function attributesOf(feature: RawFeature, { bound }: BoundProperties): Record<string, string | number | boolean | null> {
  const used = new Set([...bound.values()].map((column) => column.header));
  const attributes: Record<string, string | number | boolean | null> = {};
  let kept = 0;
  for (const [name, value] of Object.entries(feature.properties)) {
    if (used.has(name) || kept++ >= PROPERTY_LIMIT) continue;
    attributes[name.slice(0, 200)] = plainValue(value);
  }
  return attributes;
}

function plainValue(value: unknown): string | number | boolean | null {
  if (typeof value === 'number' || typeof value === 'boolean') return value;
  if (typeof value === 'string') return value.slice(0, 1000);
  return value === null || value === undefined ? null : JSON.stringify(value).slice(0, 1000);
}

/** Property whose values are all there, short, and all different: the likeliest code. Null when there is none. */
function uniqueProperty(features: readonly RawFeature[], { columns }: BoundProperties): string | null {
  if (features.length < 2) return null;
  const free = columns.filter((column) => column.role === null).map((column) => column.header);
  const unique = free.filter((name) => {
    const texts = features.map(({ properties }) => propertyText(properties[name]));
    return texts.every((text) => text !== null && text.length <= 64 && !/^-?\d*\.\d{3,}/.test(text)) && isUnique(features, name);
  });
  return unique.sort((a, b) => codeLikeness(b) - codeLikeness(a))[0] ?? null;
}

function codeLikeness(name: string): number {
  if (/(unique|parcel|field).*(id|code|no)/i.test(name)) return 3;
  if (/(^|_|[a-z])(id|code|key|num|nr|no)$/i.test(name)) return 2;
  return /id|code/i.test(name) ? 1 : 0;
}
