/**
 * What a reader of grids tells about a quantity once it is read: missing codes, impossible values, short days, calendars.
 */
import { isoDate } from '../base/civil-date.ts';
import { counted } from '../base/counted.ts';
import { SECONDS_PER_DAY } from '../base/units.ts';
import { HOUR_VARIABLES, isHourVariable, WEATHER_VARIABLES } from '../weather/variable.ts';
import { type FindingList, shown } from './finding-list.ts';
import type { BinCounts } from './grid-bins.ts';
import type { FoundFields } from './grid-fields.ts';
import type { PlannedSeries } from './grid-plan.ts';
import { textAttribute } from './grid-roles.ts';
import type { SeriesInput } from './grid-series.ts';
import type { Steps } from './grid-steps.ts';
import type { StoreCounts, ValueStore } from './grid-store.ts';
import { isAmount, splitOutside, storedText } from './grid-unpack.ts';
import type { UnderstoodColumn } from './reading.ts';

function short(value: number): string {
  return String(Number(value.toPrecision(6)));
}

/** Findings of the fields of a series: missing codes, impossible values, values set to zero. */
export function reportInputs({ parts, series, units }: PlannedSeries, codes: readonly string[], findings: FindingList): void {
  for (const [i, input] of series.inputs.entries()) {
    const { label, role } = parts[i];
    const { tally } = input;
    const place = { file: input.fields[0].file.name, column: label };
    reportCodes(input, place, findings);
    const others = splitOutside(tally, input.unpackings[0].packing).others;
    if (others > 0) {
      const { low, high } = input.unpackings[Math.max(0, tally.firstPiece)];
      const per = isAmount(role) ? ' per hour' : '';
      findings.warn({
        ...{ code: 'value-out-of-range', ...place, value: storedText(tally.firstRaw, input.fields[0].variable.type) },
        message: `"${shown(label)}": ${counted(others, 'value is', 'values are')} outside what is possible and read as missing; the first is ${short(tally.firstValue)}${per} in ${codes[tally.firstCell] ?? 'a cell'} on ${dayOfStep(series.steps, tally.firstPiece, tally.firstStep)} (unit ${units[i].unit.name}).`,
        limit: `${short(low)} to ${short(high)}${per}`,
        advice: 'Check the unit and the missing code of the field.',
      });
    }
    if (tally.zeroed > 0)
      findings.note({
        code: 'set-to-zero',
        message: `"${shown(label)}": ${counted(tally.zeroed, 'value is', 'values are')} a little below zero, as rounding and dark sensors leave them, and read as 0.`,
        ...place,
      });
    if (tally.values === 0)
      findings.warn({ code: 'no-values', message: `"${shown(label)}" has no value in the cells and days read.`, ...place });
  }
}

function reportCodes({ tally, unpackings, fields }: SeriesInput, place: { file: string; column: string }, findings: FindingList): void {
  for (const { code, count } of splitOutside(tally, unpackings[0].packing).codes) {
    const text = storedText(code, fields[0].variable.type);
    findings.warn({
      code: 'undeclared-missing-code',
      message: `"${shown(place.column)}": ${counted(count, 'value is', 'values are')} ${text}, which the file does not declare as missing and no place can have; read as missing.`,
      ...place,
      value: text,
      advice: 'Nothing to do when this is the missing code of the file.',
    });
  }
  if (tally.declared > 0) {
    const share = (100 * tally.declared) / (tally.declared + tally.values + tally.outside);
    findings.note({
      code: 'missing-value',
      message: `"${shown(place.column)}": ${counted(tally.declared, 'value is', 'values are')} missing (${short(Number(share.toPrecision(3)))} %).`,
      ...place,
    });
  }
}

function dayOfStep(steps: Steps, piece: number, step: number): string {
  const day = steps.daily ? steps.days[piece]?.[step] : Math.floor((steps.from[piece]?.[step] ?? Number.NaN) / SECONDS_PER_DAY);
  return day === undefined || Number.isNaN(day) ? 'an unknown day' : isoDate(day);
}

/** Findings of a store: values beyond the limits of the variable. */
export function reportStore({ variable, counts }: ValueStore, codes: readonly string[], findings: FindingList): void {
  if (counts.firstOutside === null) return;
  const { term, unit, low, high } = isHourVariable(variable) ? HOUR_VARIABLES[variable] : WEATHER_VARIABLES[variable];
  const { cell, day, value } = counts.firstOutside;
  findings.warn({
    code: 'value-out-of-range',
    message: `${term}: ${counted(counts.outside, 'value is', 'values are')} beyond the limits and left out; the first is ${short(value)} ${unit} in ${codes[cell]} on ${isoDate(day)}.`,
    value: short(value),
    limit: `${low} to ${high} ${unit}`,
    advice: 'Check the unit of the field.',
  });
}

/** Days without enough hours. */
export function reportShortDays(label: string, { short: days, firstShort }: BinCounts, minimumHours: number, findings: FindingList): void {
  if (days === 0 || firstShort === null) return;
  findings.note({
    code: 'short-day',
    message: `"${shown(label)}": ${counted(days, 'day of a place has', 'days of places have')} fewer than ${minimumHours} hours of values and ${days === 1 ? 'is' : 'are'} missing, the first on ${isoDate(firstShort)}. The ends of a file often cut a local day.`,
    column: label,
    limit: `${minimumHours} hours`,
  });
}

/** Calendars other than the civil one, once each. */
export function reportCalendars(fields: FoundFields['fields'], findings: FindingList): void {
  const calendars = new Set(fields.flatMap(({ time }) => (time ? [time.calendar] : [])));
  if (calendars.has('365_day'))
    findings.note({ code: 'calendar-365', message: 'The calendar of the file has no 29 February: that day is missing in leap years.' });
  if (calendars.has('366_day'))
    findings.note({
      code: 'calendar-366',
      message: 'The calendar of the file has a 29 February in every year: it is left out where the civil year has none.',
    });
  if (calendars.has('360_day')) {
    findings.warn({
      code: 'calendar-360',
      message:
        'The calendar of the file has 12 months of 30 days: each day is placed at the same share of the civil year, and five days a year (six in leap years) stay missing.',
      advice: 'The gaps are filled as gaps of any record are.',
    });
  }
}

/** One row of the plan table for each field, by the name shown. */
export function fieldColumns({ notes }: FoundFields, planned: readonly PlannedSeries[]): UnderstoodColumn[] {
  const columns = new Map<string, UnderstoodColumn>();
  for (const { label, role, variable } of notes) {
    if (columns.has(label)) continue;
    const use = planned
      .flatMap(({ parts, units, samples }) => parts.map((part, i) => ({ part, unit: units[i], sample: samples[i] })))
      .find(({ part }) => part.label === label);
    columns.set(label, {
      index: columns.size,
      header: label,
      unitText: textAttribute(variable.attributes, 'units') || null,
      role: role.role,
      unit: use?.unit.unit.name ?? null,
      confidence: use ? Math.min(role.confidence, use.unit.confidence) : role.confidence,
      sample: use?.sample ?? [],
      reason: use?.unit.assumed ? `${role.reason}; ${use.unit.assumed}` : role.reason,
    });
  }
  return [...columns.values()];
}

/** First and last day of several stores. */
export function daysOfStores(counts: readonly StoreCounts[]): { readonly start: string; readonly end: string } | null {
  const first = Math.min(...counts.map((count) => count.first));
  const last = Math.max(...counts.map((count) => count.last));
  return Number.isFinite(first) && Number.isFinite(last) ? { start: isoDate(first), end: isoDate(last) } : null;
}
