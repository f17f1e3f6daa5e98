/** Weeks that are not wholly observed, for the strip and what is said of the weeks shown. */
import { addDays } from '../../../lib/base/civil-date.ts';
import type { MapDescription } from '../../../lib/http/contract/run.ts';
import { dayMonth } from '../date-words.ts';
import type { WeekRange, WeekSpan } from './map-values.ts';

export type AheadWeeks = MapDescription['ahead'];
export type WeekKind = 'observed' | 'forecast' | 'beyond';

/** What the least sure day of a week rests on. */
export function weekKind(week: WeekSpan, ahead: AheadWeeks): WeekKind {
  if (!ahead || week.end < ahead.from) return 'observed';
  return ahead.forecast_to !== null && week.end <= ahead.forecast_to ? 'forecast' : 'beyond';
}

const BEYOND = { normal: 'normal of the day', analogue: 'days of the analogue year' } as const;

/** What the weeks shown rest on past the last observation; empty where they are wholly observed. */
export function aheadInRange(weeks: readonly WeekSpan[], range: WeekRange, ahead: AheadWeeks): string {
  const { start, end } = { start: weeks[range.from].start, end: weeks[range.to].end };
  if (!ahead || end < ahead.from) return '';
  const [, from] = [start, ahead.from].sort();
  const parts: string[] = [];
  if (ahead.forecast_to !== null && from <= ahead.forecast_to) parts.push(`forecast from ${dayMonth(from)}`);
  const beyond = ahead.forecast_to !== null && ahead.forecast_to >= from ? addDays(ahead.forecast_to, 1) : from;
  if (beyond <= end) parts.push(`${BEYOND[ahead.beyond]} from ${dayMonth(beyond)}`);
  return parts.join(', ');
}
