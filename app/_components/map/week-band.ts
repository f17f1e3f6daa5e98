/** How sure the weeks of the season strip are. */
import type { UnitSystem } from '../../../lib/base/units.ts';
import type { BandAnswer } from '../../../lib/http/contract/band.ts';
import { formatVolume } from '../../../lib/report/quantity-text.ts';
import { inUnits } from '../figures.ts';
import type { WeekRange, WeekSpan } from './map-values.ts';

/** Ends of a week's volume [m³]. */
export interface WeekEnds {
  readonly low: number;
  readonly high: number;
}

/** By week; null while it is on its way, where the run has no band, and for growers. */
export function weekEnds(answer: BandAnswer | null, weeks: readonly WeekSpan[]): readonly WeekEnds[] | null {
  if (!answer || answer.items.length !== weeks.length) return null;
  return answer.items.map(({ p10_m3, p90_m3 }) => ({ low: p10_m3 ?? Number.NaN, high: p90_m3 ?? Number.NaN }));
}

/** Greatest of the weeks in the reader's unit, 0 for none. */
export function mostOf(ends: readonly WeekEnds[] | null, units: UnitSystem): number {
  return (ends ?? []).reduce((most, { high }) => Math.max(most, inUnits(high, 'volume', units) || 0), 0);
}

/** What the band says of a single week; blank for several: their band is not the sum of theirs. */
export function endsText(ends: readonly WeekEnds[] | null, { from, to }: WeekRange, units: UnitSystem): string {
  if (!ends || from !== to || !(ends[from].high > 0)) return '';
  return `; in 8 of 10 cases between ${formatVolume(ends[from].low, units)} and ${formatVolume(ends[from].high, units)}`;
}
