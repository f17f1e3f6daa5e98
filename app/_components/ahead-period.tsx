import type { DaysAhead } from '../../lib/http/contract/run.ts';
import { longDate } from './date-words.ts';
import { aheadInRange } from './map/ahead-weeks.ts';

interface AheadPeriodProps {
  readonly ahead: DaysAhead | null;
  readonly period: { readonly start: string; readonly end: string };
}

/** Above figures of a period that has not been wholly observed: what they rest on, and from when. */
export function AheadPeriod({ ahead, period }: AheadPeriodProps) {
  if (!ahead?.first_ahead) return null;
  const told = {
    from: ahead.first_ahead,
    forecast_to: ahead.forecast?.last_day ?? null,
    beyond: ahead.analogue_days > 0 ? ('analogue' as const) : ('normal' as const),
  };
  const words = aheadInRange([period], { from: 0, to: 0 }, told);
  if (words === '') return null;
  return (
    <p className="notice caution small">
      Not wholly observed: {words}. The last observation is of {ahead.last_observed ? longDate(ahead.last_observed) : 'no day'}; these
      figures will change.
    </p>
  );
}
