import { addDays, isIsoDate } from '../../../../lib/base/civil-date.ts';
import { BUDGET_METHODS, type BudgetMethod } from '../../../../lib/http/answers/weather-hours.ts';
import type { SiteAnswer, SiteDay } from '../../../../lib/http/contract/rest.ts';
import type { RunAnswer } from '../../../../lib/http/contract/run.ts';
import { one, type Query } from '../../../_components/query.ts';
import { type DayRange, usualRange } from '../load-site-series.ts';

/** Longest range of one answer [d]. */
export const LONGEST_RANGE = 400;

/** The range of days that the address asks for, kept in order and within `LONGEST_RANGE`; without one the usual range of the site. */
export function rangeAsked(query: Query, site: SiteAnswer, run: RunAnswer | null): DayRange | null {
  const usual = usualRange(site, run);
  if (!usual) return null;
  const [from, to] = [one(query, 'from'), one(query, 'to')];
  const first = from && isIsoDate(from) ? from : usual.from;
  const last = to && isIsoDate(to) ? to : usual.to;
  if (first > last) return usual;
  const limit = addDays(first, LONGEST_RANGE - 1);
  return { from: first, to: earlier(last, limit) };
}

function earlier(a: string, b: string): string {
  return [a, b].sort()[0];
}

/** The day whose budget the address asks for, when it is among the days shown; else one with much to show: the greatest net radiation. */
export function dayAsked(query: Query, days: readonly SiteDay[]): string | null {
  const asked = one(query, 'day');
  if (days.some((day) => day.date === asked)) return asked ?? null;
  const radiation = (day: SiteDay) => day.net_radiation_mj_m2_d ?? Number.NEGATIVE_INFINITY;
  const [first, ...others] = days;
  return first ? others.reduce((best, day) => (radiation(day) > radiation(best) ? day : best), first).date : null;
}

/** The equation whose budget the address asks for; FAO-56 unless it names another. */
export function methodAsked(query: Query): BudgetMethod {
  return BUDGET_METHODS.find(({ id }) => id === one(query, 'method'))?.id ?? BUDGET_METHODS[0].id;
}
