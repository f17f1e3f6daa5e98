/** What a check finds in the record of a site: the rule that was broken, where, by how much, and what to do about it. */
import { civilFromDayNumber, dayNumber, isoDate } from '../../base/civil-date.ts';
import { type SiteObservations, WEATHER_VARIABLES, type WeatherVariable } from '../variable.ts';
import type { Rule } from './rules.ts';

/** `note`: worth knowing; `suspect`: likely wrong; `impossible`: cannot be. */
export type Severity = 'note' | 'suspect' | 'impossible';

export interface Flag {
  /** index into the sites of the observations */
  readonly site: number;
  readonly variable: WeatherVariable;
  readonly rule: Rule;
  /** offsets from the first day of the observations, both included */
  readonly firstDay: number;
  readonly lastDay: number;
  readonly severity: Severity;
  /** what broke the rule, in the unit of the variable or of the rule; NaN where the rule has no single value */
  readonly value: number;
  /** the limit it broke */
  readonly limit: number;
  /** sentence for the reader: value, limit and advice */
  readonly detail: string;
  readonly figures?: Readonly<Record<string, number | string | null>>;
}

/** Days in a row that break a rule, and the one that breaks it most. */
export interface BrokenRun {
  readonly first: number;
  readonly last: number;
  readonly worst: number;
}

/** Runs of days on which `excess` is above 0; NaN breaks no rule. */
export function brokenRuns(dayCount: number, excess: (day: number) => number): BrokenRun[] {
  const runs: BrokenRun[] = [];
  let open: { first: number; worst: number; most: number } | null = null;
  for (let day = 0; day <= dayCount; day++) {
    const over = day < dayCount ? excess(day) : Number.NaN;
    if (over > 0) {
      if (open === null) open = { first: day, worst: day, most: over };
      else if (over > open.most) Object.assign(open, { worst: day, most: over });
    } else if (open !== null) {
      runs.push({ first: open.first, last: day - 1, worst: open.worst });
      open = null;
    }
  }
  return runs;
}

/** The series of one variable at one site, as a view; null where the source has none. */
export function seriesOf(observations: SiteObservations, variable: WeatherVariable, site: number): Float64Array | null {
  const { dayCount } = observations;
  return observations.values[variable]?.subarray(site * dayCount, (site + 1) * dayCount) ?? null;
}

/** Four significant digits, for the sentence of a flag. @example figureText(12.3456) // '12.35' */
export function figureText(value: number): string {
  if (!Number.isFinite(value)) return 'none';
  const rounded = Number(value.toPrecision(4));
  return (rounded === 0 ? '0' : String(rounded)).replace('-', '−');
}

/** A figure with the unit of a variable. @example withUnit(21.5, 'air_temperature_max_c') // '21.5 °C' */
export function withUnit(value: number, variable: WeatherVariable): string {
  return `${figureText(value)} ${WEATHER_VARIABLES[variable].unit}`;
}

/** "on 2020-07-01" or "from 2020-07-01 to 2020-07-04", for the sentence of a flag. */
export function daysText(observations: Pick<SiteObservations, 'startDate'>, first: number, last: number): string {
  const start = dayNumber(observations.startDate);
  return first === last ? `on ${isoDate(start + first)}` : `from ${isoDate(start + first)} to ${isoDate(start + last)}`;
}

/** Calendar months of a record: offset of the first and last day, and the number of the month from year 0. */
export function monthsOf(startDate: string, dayCount: number): { first: number; last: number; month: number }[] {
  const start = dayNumber(startDate);
  const months: { first: number; last: number; month: number }[] = [];
  for (let day = 0; day < dayCount; day++) {
    const { year, month } = civilFromDayNumber(start + day);
    const number = year * 12 + month - 1;
    const last = months.at(-1);
    if (last?.month === number) last.last = day;
    else months.push({ first: day, last: day, month: number });
  }
  return months;
}

/** Middle value of a list, NaN when it is empty. The list is sorted in place. */
export function median(values: number[]): number {
  if (values.length === 0) return Number.NaN;
  values.sort((a, b) => a - b);
  const middle = values.length >> 1;
  return values.length % 2 === 1 ? values[middle] : (values[middle - 1] + values[middle]) / 2;
}
