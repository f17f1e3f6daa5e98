/** Civil dates as a reader writes them. */
import { civilFromDayNumber, dayNumber, type IsoDate, isIsoDate, type Period, type PeriodKind } from '../../lib/base/civil-date.ts';

const MONTHS = ['January', 'February', 'March', 'April', 'May', 'June', 'July', 'August', 'September', 'October', 'November', 'December'];

/** @example monthName('2024-07-03') // 'July' */
export function monthName(date: IsoDate): string {
  return MONTHS[Number(date.slice(5, 7)) - 1];
}

/** @example dayMonth('2024-07-03') // '3 Jul' */
export function dayMonth(date: IsoDate): string {
  return `${Number(date.slice(8, 10))} ${monthName(date).slice(0, 3)}`;
}

/** @example longDate('2024-07-03') // '3 July 2024' */
export function longDate(date: IsoDate): string {
  return `${Number(date.slice(8, 10))} ${monthName(date)} ${date.slice(0, 4)}`;
}

/** @example dateRange('2024-06-28', '2024-07-04') // '28 Jun – 4 Jul 2024' */
export function dateRange(start: IsoDate, end: IsoDate): string {
  if (start === end) return `${dayMonth(end)} ${end.slice(0, 4)}`;
  const from = start.slice(0, 4) === end.slice(0, 4) ? dayMonth(start) : `${dayMonth(start)} ${start.slice(0, 4)}`;
  return `${from} – ${dayMonth(end)} ${end.slice(0, 4)}`;
}

/** @example periodName('month', { start: '2024-06-01', end: '2024-06-30' }) // 'June 2024' */
export function periodName(kind: PeriodKind, period: { readonly start: IsoDate; readonly end: IsoDate }): string {
  if (kind === 'month') return `${monthName(period.start)} ${period.start.slice(0, 4)}`;
  return dateRange(period.start, period.end);
}

/** Place in `periods` of the one that holds `date`, or -1. */
export function periodIndexOf(periods: readonly Period[], date: string | undefined): number {
  if (!date || !isIsoDate(date)) return -1;
  return periods.findIndex((period) => period.start <= date && date <= period.end);
}

/** First days of the months inside `start … end`, for an axis: day offset from `start`. */
export function monthTicks(start: IsoDate, end: IsoDate): { readonly offset: number; readonly name: string }[] {
  const first = dayNumber(start);
  const ticks: { offset: number; name: string }[] = [];
  for (let day = first; day <= dayNumber(end); day++) {
    const civil = civilFromDayNumber(day);
    if (civil.day === 1) ticks.push({ offset: day - first, name: MONTHS[civil.month - 1].slice(0, 3) });
  }
  return ticks;
}

/** A stored moment in the district's own zone. @example moment('2024-07-03T10:00:00Z', 'UTC') // '3 Jul 2024, 10:00' */
export function moment(text: string | null | undefined, timeZone: string): string {
  if (!text) return '–';
  const parts = new Intl.DateTimeFormat('en-GB', {
    timeZone,
    day: 'numeric',
    month: 'short',
    year: 'numeric',
    hour: '2-digit',
    minute: '2-digit',
  });
  return parts.format(new Date(text));
}
