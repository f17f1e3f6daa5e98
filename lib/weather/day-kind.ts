/** What a day of a season rests on: measured weather, filled weather, or a day to come. */
import { ESTIMATED_BITS, FALLBACK } from './variable.ts';

/** From the surest to the least sure. */
export const DAY_KINDS = ['observed', 'filled', 'forecast', 'analogue', 'normal'] as const;
export type DayKind = (typeof DAY_KINDS)[number];

/** In a reader's words. */
export const DAY_KIND_TEXT: Readonly<Record<DayKind, string>> = {
  observed: 'observed',
  filled: 'observed, with values filled or estimated',
  forecast: 'forecast',
  analogue: 'analogue year',
  normal: 'normal of the day',
};

/** Bits that say a day lies past the last observation. */
export const AHEAD_BITS = FALLBACK.aheadFromForecast | FALLBACK.aheadFromNormal | FALLBACK.aheadFromAnalogue;

/**
 * What a day rests on, from the bits of its weather. A day whose sites differ is what its least sure site is: normal before analogue year, forecast,
 * filled.
 *
 * @param flags bits of FALLBACK
 * @example dayKind(0) // 'observed'
 * @example dayKind(1 << 26) // 'forecast'
 */
export function dayKind(flags: number): DayKind {
  if ((flags & FALLBACK.aheadFromNormal) !== 0) return 'normal';
  if ((flags & FALLBACK.aheadFromAnalogue) !== 0) return 'analogue';
  if ((flags & FALLBACK.aheadFromForecast) !== 0) return 'forecast';
  return (flags & ESTIMATED_BITS) !== 0 ? 'filled' : 'observed';
}

/** Whether a day of this kind lies past the last observation. @example isAhead('filled') // false */
export function isAhead(kind: DayKind): boolean {
  return kind === 'forecast' || kind === 'analogue' || kind === 'normal';
}

/**
 * Days of each kind in a span.
 *
 * @param flags bits of FALLBACK [day]
 * @param span first and last day, both included
 */
export function countDayKinds(
  flags: ArrayLike<number>,
  { from, to }: { readonly from: number; readonly to: number },
): Record<DayKind, number> {
  const counts: Record<DayKind, number> = { observed: 0, filled: 0, forecast: 0, analogue: 0, normal: 0 };
  for (let day = from; day <= to; day++) counts[dayKind(flags[day])]++;
  return counts;
}
