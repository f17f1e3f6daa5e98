/** Canal figures of the map over a range of weeks. */
import { TIGHT_SHARE } from '../../../lib/canal/reach-period.ts';
import type { WeekRange } from './map-values.ts';

/** What `/runs/{id}/reach-values/weeks` answers: [week][reach]. */
export interface ReachWeeks {
  readonly reaches: readonly string[];
  readonly mean_inflow_m3_s: readonly (readonly (number | null)[])[];
  readonly capacity_share: readonly (readonly (number | null)[])[];
}

export interface ReachFlow {
  /** mean inflow at the reach's head over the range [m³ s⁻¹] */
  readonly flow: number;
  /** the greatest share of capacity that the mean of a week in the range asks for; NaN when no capacity is known */
  readonly share: number;
}

/** What the colours of the canals say. */
export const SHARE_WORDS = [
  { kind: 'within', words: `up to ${Math.round(TIGHT_SHARE * 100)} %` },
  { kind: 'tight', words: `${Math.round(TIGHT_SHARE * 100)} to 100 %` },
  { kind: 'over', words: 'over capacity' },
  { kind: 'unknown', words: 'capacity not known' },
] as const;

/** Flow and share of each reach, in the order of `reaches`. */
export function flowsOver(weeks: ReachWeeks, range: WeekRange, days: readonly number[]): ReachFlow[] {
  return weeks.reaches.map((_, reach) => {
    let [volume, total, share] = [0, 0, Number.NaN];
    for (let week = range.from; week <= range.to; week++) {
      volume += (weeks.mean_inflow_m3_s[week]?.[reach] ?? 0) * days[week];
      total += days[week];
      const weekShare = weeks.capacity_share[week]?.[reach] ?? Number.NaN;
      if (Number.isFinite(weekShare) && !(share >= weekShare)) share = weekShare;
    }
    return { flow: volume / total, share };
  });
}

/** The greatest weekly mean flow of any reach in the season: the widest line on the map in every week. */
export function greatestFlow(weeks: ReachWeeks): number {
  let most = 0;
  for (const week of weeks.mean_inflow_m3_s) for (const flow of week) if (flow !== null && flow > most) most = flow;
  return most;
}
