/** How much of a result rests on weather that was filled or estimated. */
import { ESTIMATED_BITS } from './variable.ts';

/**
 * Share of days on which a value of the weather was filled or estimated (`ESTIMATED_BITS`), whichever it was.
 *
 * @param flags bits of FALLBACK [day]
 * @param span first and last day, both included
 * @returns 0–1; NaN for a span without days
 */
export function estimatedShare(flags: ArrayLike<number>, { from, to }: { readonly from: number; readonly to: number }): number {
  let count = 0;
  for (let day = from; day <= to; day++) if ((flags[day] & ESTIMATED_BITS) !== 0) count++;
  return count / (to - from + 1);
}
