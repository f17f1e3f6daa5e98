/** Names and values in United States units, for callers that ask for them. Names carry the unit, so both change together. */
import { BORDER_UNITS, fahrenheitFromCelsius, type UnitSystem } from '../base/units.ts';

interface Change {
  readonly suffix: string;
  readonly value: (metric: number) => number;
}

/** Without the noise that a conversion leaves in the last binary places: twelve significant digits. */
function tidy(value: number): number {
  return Number.isFinite(value) ? Number(value.toPrecision(12)) : value;
}

/** Suffix of a metric name → what becomes of it. Longest first, so that `_m3_s` is not taken for `_s` of something. */
const CHANGES: readonly (readonly [string, Change])[] = [
  ...Object.values(BORDER_UNITS).map(
    ({ metric, us }) =>
      [`_${metric.suffix}`, { suffix: `_${us.suffix}`, value: (v: number) => tidy((v / metric.fromMetric) * us.fromMetric) }] as const,
  ),
  ['_c', { suffix: '_f', value: (v: number) => tidy(fahrenheitFromCelsius(v)) }] as const,
].sort((a, b) => b[0].length - a[0].length);

/** Compound units whose tail looks like one of ours. */
const LEFT_ALONE = /_(m3_m3|c_per_m|per_km|mj_m2_d|kg_kg|m3_ha|l_s_ha|ds_m)$/;
/** Members that are settings or definitions, to be sent back as they came. */
const DEFINITIONS = ['settings', 'manifest', 'definition', 'options', 'boundary', 'geometry', 'loss_rule'];
/** Members whose own members are named after quantities, while the values are counts, shares or words. */
const NAMED_AFTER_QUANTITIES = ['coverage_days', 'fallback_shares', 'sources'];
const AS_THEY_CAME = new Set([...DEFINITIONS, ...NAMED_AFTER_QUANTITIES]);

function changeOf(name: string): { name: string; value: (metric: number) => number } | null {
  if (LEFT_ALONE.test(name)) return null;
  const found = CHANGES.find(([suffix]) => name.endsWith(suffix));
  return found ? { name: name.slice(0, -found[0].length) + found[1].suffix, value: found[1].value } : null;
}

/** @example nameIn('us', 'crop_et_mm') // 'crop_et_in' */
export function nameIn(units: UnitSystem, name: string): string {
  return units === 'metric' ? name : (changeOf(name)?.name ?? name);
}

/** A value under its metric name, in the asked units. @example valueIn('us', 'crop_et_mm', 25.4) // 1 */
export function valueIn<T>(units: UnitSystem, name: string, value: T): T | number {
  return units === 'us' && typeof value === 'number' ? (changeOf(name)?.value(value) ?? value) : value;
}

/** A whole answer in the asked units: names and numbers of every member, at every depth. */
export function answerIn(units: UnitSystem, answer: unknown): unknown {
  if (units === 'metric' || typeof answer !== 'object' || answer === null) return answer;
  if (Array.isArray(answer)) return answer.map((item) => answerIn(units, item));
  return Object.fromEntries(Object.entries(answer).map(([name, value]) => memberIn(name, value)));
}

function memberIn(name: string, value: unknown): [string, unknown] {
  if (AS_THEY_CAME.has(name)) return [name, value];
  const change = changeOf(name);
  return change ? [change.name, numbersIn(value, change.value)] : [name, answerIn('us', value)];
}

function numbersIn(value: unknown, convert: (metric: number) => number): unknown {
  if (typeof value === 'number') return convert(value);
  return Array.isArray(value) ? value.map((item) => numbersIn(item, convert)) : value;
}
