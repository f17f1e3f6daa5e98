/**
 * Capacities of the invented canals: sized as a designer would for the parcels below, some too small.
 */

import type { Random } from '../../base/random.ts';
import { SECONDS_PER_DAY } from '../../base/units.ts';
import type { LossRule } from '../../canal/loss-rule.ts';
import { rollUp } from '../../canal/roll-up.ts';
import { buildTree, reachesBelow } from '../../canal/tree.ts';

interface SizedReach {
  readonly code: string;
  readonly parentCode: string | null;
  readonly kind: string;
  readonly length: number;
  readonly lossRule: LossRule;
}

/** Gross need in the peak week over all crops [m³ s⁻¹ per m²]: 1.65 L/s per hectare. Invented district, invented value. */
const PEAK_DUTY = 1.65e-7;
/** Share of the weeks in which a parcel takes water at the peak, as one in so many. */
const TURN_WEEKS = 2;
/** Standard normal deviate of the design quality, 95 %. */
const QUALITY = 1.645;

/**
 * Design flow of each reach: the mean need of the parcels below plus a margin for those that draw in the same week, losses rolled up.
 *   Q = Σ pq + U √(Σ p (1 − p) q²),  p = 1/TURN_WEEKS
 *
 * @param areas of the parcels of each reach [m²], by reach
 * Source: Clément (1966), La Houille Blanche 5, first demand formula (recalled, not re-read).
 */
export function demoCapacities(reaches: readonly SizedReach[], areas: readonly (readonly number[])[], random: Random): number[] {
  const tree = buildTree(reaches);
  const mean = areas.map((list) => list.reduce((sum, area) => sum + area * PEAK_DUTY * SECONDS_PER_DAY, 0));
  const { headInflow } = rollUp({ tree, reaches, turnoutDemand: Float64Array.from(mean) });
  return reaches.map((_, reach) => {
    const served = reachesBelow(tree, reach).flatMap((each) => areas[each]);
    const squares = served.reduce((sum, area) => sum + (area * PEAK_DUTY) ** 2, 0);
    const flow = headInflow[reach] / SECONDS_PER_DAY + QUALITY * Math.sqrt((TURN_WEEKS - 1) * squares);
    return standardSize(flow * allowance(reaches[reach].kind, random));
  });
}

/** The main canal was built with a little in hand; one smaller canal in five has been outgrown. */
function allowance(kind: string, random: Random): number {
  const [first, second] = [random(), random()];
  if (kind === 'main') return 1.02 + 0.08 * second;
  return first < 0.2 ? 0.72 + 0.12 * second : 1.02 + 0.3 * second;
}

/** Rounded up to two figures, at least 0.1 m³ s⁻¹. */
function standardSize(flow: number): number {
  if (!(flow > 0.1)) return 0.1;
  const step = 10 ** (Math.floor(Math.log10(flow)) - 1);
  return Math.round(Math.ceil(flow / step) * step * 1000) / 1000;
}
