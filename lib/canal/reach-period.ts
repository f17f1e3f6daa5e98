/**
 * Flows of each reach over periods, beside what the reach can carry.
 */
import type { Period } from '../base/civil-date.ts';
import { ShapeError } from '../base/errors.ts';
import { SECONDS_PER_DAY, volumeToFlow } from '../base/units.ts';
import type { RollUp } from './roll-up.ts';
import type { ConveyanceTree } from './tree.ts';

/** Days over which turns level out demand. Common practice, no source: the delivery week. */
export const BUSIEST_DAYS = 7;

type CapacityStatus = 'within' | 'tight' | 'over';

/** Share of capacity from which a reach counts as tight; above 1 it is over. Common practice, no source. */
export const TIGHT_SHARE = 0.9;

export interface ReachPeriod {
  /** index of the reach in the tree, and of the period in the list */
  readonly reach: number;
  readonly period: number;
  /** drawn by the turnouts of the reach itself [m³] */
  readonly turnoutDemand: number;
  /** drawn by the turnouts of this reach and of every reach it feeds [m³] */
  readonly demandBelow: number;
  /** of this reach alone [m³] */
  readonly loss: number;
  /** m³ */
  readonly headInflow: number;
  /** m³ s⁻¹ */
  readonly meanFlow: number;
  /** of the day that asks most [m³ s⁻¹] */
  readonly peakFlow: number;
  /** m³ s⁻¹, NaN when not known */
  readonly capacity: number;
  /** mean flow of the busiest seven days in a row, or of the whole period when it is shorter [m³ s⁻¹] */
  readonly busiestFlow: number;
  /** busiest and mean flow over capacity, NaN when the capacity is not known */
  readonly capacityShare: number;
  readonly meanShare: number;
  /** by the capacity share; null when the capacity is not known */
  readonly status: CapacityStatus | null;
}

interface ReachPeriodInput {
  readonly tree: ConveyanceTree;
  /** [reach × day], m³ d⁻¹ */
  readonly turnoutDemand: Float64Array;
  readonly flows: RollUp;
  /** [reach], m³ s⁻¹, NaN when not known */
  readonly capacity: ArrayLike<number>;
  readonly periods: readonly Period[];
}

/**
 * Status of a reach by its share of capacity: within below 0.9, tight from 0.9 to 1, over above 1; null for NaN.
 *
 * @example capacityStatus(0.95) // 'tight'
 */
export function capacityStatus(share: number): CapacityStatus | null {
  if (Number.isNaN(share)) return null;
  if (share > 1) return 'over';
  return share >= TIGHT_SHARE ? 'tight' : 'within';
}

/**
 * One row per reach and period, reaches outer, in the order of the tree's codes.
 *
 * Volumes are sums of daily volumes [m³]; mean flow = volume/(86 400 · days); peak flow = largest daily volume/86 400.
 * A reach is held against its capacity by the busiest seven days, because turns within a week level out single days; the peak day stands beside it.
 * Missing: a day of NaN makes the sums and the peak of its period NaN. A capacity of zero or less counts as not known.
 *
 * @throws {ShapeError} when arrays do not fit the tree and the days.
 */
export function reachPeriods(input: ReachPeriodInput): ReachPeriod[] {
  const { tree, turnoutDemand, flows, capacity, periods } = input;
  const count = tree.codes.length;
  if (capacity.length !== count) throw new ShapeError(`${capacity.length} capacities for ${count} reaches`);
  if (turnoutDemand.length !== count * flows.dayCount) {
    throw new ShapeError(`turnout demand has ${turnoutDemand.length} values for ${count} reaches × ${flows.dayCount} days`);
  }
  const last = periods.at(-1)?.to ?? -1;
  if (last >= flows.dayCount) throw new ShapeError(`a period ends on day ${last}, but the flows have ${flows.dayCount} days`);
  const below = demandBelow(tree, turnoutDemand, flows.dayCount);
  const rows: ReachPeriod[] = [];
  for (let reach = 0; reach < count; reach++) {
    for (let period = 0; period < periods.length; period++) rows.push(reachPeriod(input, below, reach, period));
  }
  return rows;
}

function reachPeriod(input: ReachPeriodInput, below: Float64Array, reach: number, period: number): ReachPeriod {
  const { dayCount, reachLoss, headInflow } = input.flows;
  const { from, to } = input.periods[period];
  const [a, b] = [reach * dayCount + from, reach * dayCount + to];
  const inflow = sum(headInflow, a, b);
  const meanFlow = volumeToFlow(inflow, to - from + 1);
  const peakFlow = largest(headInflow, a, b) / SECONDS_PER_DAY;
  const capacity = input.capacity[reach] > 0 ? input.capacity[reach] : Number.NaN;
  const busiestFlow = volumeToFlow(busiest(headInflow, a, b), Math.min(BUSIEST_DAYS, to - from + 1));
  const capacityShare = busiestFlow / capacity;
  return {
    reach,
    period,
    turnoutDemand: sum(input.turnoutDemand, a, b),
    demandBelow: sum(below, a, b),
    loss: sum(reachLoss, a, b),
    headInflow: inflow,
    meanFlow,
    peakFlow,
    capacity,
    busiestFlow,
    capacityShare,
    meanShare: meanFlow / capacity,
    status: capacityStatus(capacityShare),
  };
}

/** Turnout demand of each reach and all below it, [reach × day]. */
function demandBelow(tree: ConveyanceTree, turnoutDemand: Float64Array, dayCount: number): Float64Array {
  const below = Float64Array.from(turnoutDemand);
  for (let at = tree.order.length - 1; at > 0; at--) {
    const reach = tree.order[at];
    const parent = tree.parent[reach];
    for (let day = 0; day < dayCount; day++) below[parent * dayCount + day] += below[reach * dayCount + day];
  }
  return below;
}

function sum(values: Float64Array, from: number, to: number): number {
  let total = 0;
  for (let i = from; i <= to; i++) total += values[i];
  return total;
}

/** Largest sum of seven values in a row, or of all when there are fewer. */
function busiest(values: Float64Array, from: number, to: number): number {
  const length = Math.min(BUSIEST_DAYS, to - from + 1);
  let most = Number.NEGATIVE_INFINITY;
  for (let i = from; i + length - 1 <= to; i++) {
    const window = sum(values, i, i + length - 1);
    if (Number.isNaN(window)) return Number.NaN;
    most = Math.max(most, window);
  }
  return most;
}

function largest(values: Float64Array, from: number, to: number): number {
  let most = Number.NEGATIVE_INFINITY;
  for (let i = from; i <= to; i++) most = Math.max(most, values[i]);
  return most;
}
