import type { ReachPeriod } from '../canal/reach-period.ts';

/** One reach over one period under its own name: volumes [m³], flows and capacity [m³ s⁻¹], NaN where not known. */
export interface ReachPeriodRow extends Omit<ReachPeriod, 'reach' | 'period'> {
  readonly reach: string;
  readonly name: string;
  readonly parent: string | null;
  readonly kind: string;
  readonly start: string;
  readonly end: string;
}
