/**
 * The options of an import as they came from outside → options that can be trusted. What is wrong becomes a finding and is left out.
 */
import { isIsoDate } from '../base/civil-date.ts';
import type { FindingList } from './finding-list.ts';
import { shown } from './finding-list.ts';
import type { ColumnPlan, ImportOptions } from './reading.ts';
import { isKnownEncoding } from './text-encoding.ts';

type Check = (value: unknown) => boolean;

const isText: Check = (value) => typeof value === 'string' && value.length > 0 && value.length <= 200;
const isFlag: Check = (value) => typeof value === 'boolean';
const isTexts: Check = (value) =>
  Array.isArray(value) && value.length <= 100 && value.every((item) => typeof item === 'string' && item.length <= 80);
const isRecord = (value: unknown): value is Record<string, unknown> => typeof value === 'object' && value !== null && !Array.isArray(value);
const oneOf =
  (...allowed: readonly unknown[]): Check =>
  (value) =>
    allowed.includes(value);
const within =
  (low: number, high: number): Check =>
  (value) =>
    typeof value === 'number' && value >= low && value <= high;

const OPTIONS: Record<keyof ImportOptions, { readonly check: Check; readonly limit: string }> = {
  plan: { check: isRecord, limit: 'an object' },
  season: { check: isText, limit: 'the code of a season' },
  source: { check: isText, limit: 'a name of at most 200 characters' },
  role: { check: oneOf('observed', 'forecast'), limit: 'observed or forecast' },
  site: { check: isText, limit: 'the code of a site' },
  replace: { check: isFlag, limit: 'true or false' },
  missingCodes: { check: isTexts, limit: 'a list of at most 100 texts' },
  dateOrder: { check: oneOf('ymd', 'dmy', 'mdy'), limit: 'ymd, dmy or mdy' },
  cropColumn: { check: isText, limit: 'the name of a property' },
  codeColumn: { check: isText, limit: 'the name of a property' },
  cropMappings: {
    check: (value) => isRecord(value) && Object.values(value).every((code) => code === null || typeof code === 'string'),
    limit: 'foreign code → crop code or null',
  },
  soilMappings: {
    check: (value) => isRecord(value) && Object.values(value).every((code) => code === null || typeof code === 'string'),
    limit: 'soil class of the file → soil of the district or null',
  },
  windHeight: { check: within(0.5, 200), limit: '0.5 to 200 m' },
  layer: { check: isText, limit: 'the name of a layer of the file' },
  crs: { check: isText, limit: 'a coordinate system such as EPSG:28992' },
  joinByPlace: {
    check: oneOf('none', 'nearest-turnout', 'nearest-reach', 'service-area'),
    limit: 'none, nearest-turnout, nearest-reach or service-area',
  },
  joinDistance: { check: within(0, 50_000), limit: '0 to 50,000 m' },
  validFrom: { check: (value) => typeof value === 'string' && isIsoDate(value), limit: 'a day as YYYY-MM-DD' },
  stamp: { check: oneOf('start', 'centre', 'end'), limit: 'start, centre or end' },
  stampZone: { check: (value) => isText(value) && isStampZone(value as string), limit: 'an IANA zone such as Europe/Madrid, or UTC+01:00' },
  minimumHours: { check: within(1, 24), limit: '1 to 24 h' },
  margin: { check: within(0, 10), limit: '0 to 10 degrees' },
  wholeGrid: { check: isFlag, limit: 'true or false' },
  quantity: { check: oneOf('vegetation_index', 'fraction_covered'), limit: 'vegetation_index or fraction_covered' },
};

/** A name of the time-zone database, or a fixed offset from UTC. */
function isStampZone(text: string): boolean {
  if (/^(UTC|GMT)([+-](0?\d|1[0-4])(:?[0-5]\d)?)?$/i.test(text)) return true;
  try {
    new Intl.DateTimeFormat('en', { timeZone: text });
    return true;
  } catch {
    return false;
  }
}

const PLAN: Record<keyof ColumnPlan, { readonly check: Check; readonly limit: string }> = {
  columns: { check: (value) => isRecord(value) && Object.values(value).every(isColumn), limit: 'column → { role, unit }' },
  dateOrder: OPTIONS.dateOrder,
  delimiter: { check: oneOf(',', ';', '\t', '|'), limit: 'comma, semicolon, tab or bar' },
  decimalComma: { check: isFlag, limit: 'true or false' },
  encoding: { check: (value) => typeof value === 'string' && isKnownEncoding(value), limit: 'a known encoding, e.g. windows-1252' },
  headerRow: { check: (value) => Number.isInteger(value) && within(1, 1000)(value), limit: '1 to 1000' },
};

function isColumn(value: unknown): boolean {
  if (!isRecord(value)) return false;
  const { role, unit, hour } = value;
  return (
    (role === null || typeof role === 'string') &&
    (unit === undefined || unit === null || typeof unit === 'string') &&
    (hour === undefined || within(0, 23)(hour))
  );
}

/** Keeps what is valid; every other member is a warning and left out. */
export function checkOptions(options: unknown, findings: FindingList): ImportOptions {
  if (options === undefined || options === null) return {};
  if (!isRecord(options)) {
    findings.warn({ code: 'bad-option', message: 'The options are not an object; all are left out.', limit: 'an object' });
    return {};
  }
  const kept = keep(options, OPTIONS, 'option', findings) as ImportOptions;
  return kept.plan ? { ...kept, plan: keep({ ...kept.plan }, PLAN, 'plan', findings) as ColumnPlan } : kept;
}

function keep(
  from: Record<string, unknown>,
  rules: Record<string, { check: Check; limit: string }>,
  what: string,
  findings: FindingList,
): Record<string, unknown> {
  const kept: Record<string, unknown> = {};
  for (const [name, value] of Object.entries(from)) {
    if (value === undefined || value === null) continue;
    const rule = Object.hasOwn(rules, name) ? rules[name] : undefined;
    if (rule?.check(value)) kept[name] = value;
    else {
      findings.warn({
        code: 'bad-option',
        message: rule
          ? `The ${what} "${shown(name)}" has a value that cannot be used; it is left out.`
          : `The ${what} "${shown(name)}" is not known; it is left out.`,
        column: shown(name),
        value: shown(JSON.stringify(value) ?? ''),
        limit: rule?.limit ?? Object.keys(rules).join(', '),
      });
    }
  }
  return kept;
}
