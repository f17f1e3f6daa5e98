/** Which period of a run a page shows. */
import { type IsoDate, type Period, type PeriodKind, periodsOf } from '../../lib/base/civil-date.ts';
import { periodIndexOf } from './date-words.ts';
import { one, oneOf, type Query } from './query.ts';

export const PERIOD_KINDS = ['week', 'month', 'season'] as const;
export type ShownKind = (typeof PERIOD_KINDS)[number];

export interface PeriodChoice {
  readonly kind: ShownKind;
  readonly periods: readonly Period[];
  readonly index: number;
  readonly period: Period;
}

/** The span a choice is made in. */
export interface Span {
  readonly start_date: IsoDate;
  readonly end_date: IsoDate;
}

/**
 * The period that the address asks for (`period`, `date`); without a date inside the span, the one that holds `preferred`, else the first.
 *
 * @param weekStart ISO weekday on which the district's delivery week begins
 */
export function choosePeriod(
  query: Query,
  span: Span,
  weekStart: number,
  options: { kind?: ShownKind; preferred?: IsoDate } = {},
): PeriodChoice {
  const kind = oneOf(query, 'period', PERIOD_KINDS, options.kind ?? 'season');
  const periods = periodsOf(kind satisfies PeriodKind, span.start_date, span.end_date, weekStart);
  const asked = periodIndexOf(periods, one(query, 'date'));
  const index = asked >= 0 ? asked : Math.max(0, periodIndexOf(periods, options.preferred));
  return { kind, periods, index, period: periods[index] };
}

/** ISO weekday on which weeks of a run begin: as frozen with the run, else the district's. */
export function weekStartOf(
  run: { readonly manifest: Readonly<Record<string, unknown>> },
  district: { readonly weekStart: number },
): number {
  return typeof run.manifest.week_start === 'number' ? run.manifest.week_start : district.weekStart;
}

/** First day of the week that takes most, by a weekly figure; undefined when all are missing. */
export function busiestWeek<Week extends { readonly start: IsoDate }>(
  weeks: readonly Week[],
  pick: (week: Week) => number | null,
): IsoDate | undefined {
  let best: Week | undefined;
  for (const week of weeks) if ((pick(week) ?? -1) > (best ? (pick(best) ?? -1) : -1)) best = week;
  return best?.start;
}
