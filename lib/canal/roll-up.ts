/**
 * Demand rolled up the conveyance tree: what each reach must carry so that every turnout gets its demand and every loss is fed.
 */
import { ShapeError } from '../base/errors.ts';
import { type LossRule, lossCoefficients } from './loss-rule.ts';
import type { ConveyanceTree } from './tree.ts';

interface RollUpInput {
  readonly tree: ConveyanceTree;
  /** in the order of the tree's codes; length [m] */
  readonly reaches: readonly { readonly length: number; readonly lossRule: LossRule }[];
  /** drawn by the turnouts of the reach itself [reach × day], m³ d⁻¹ */
  readonly turnoutDemand: Float64Array;
}

export interface RollUp {
  /** [reach × day], m³ d⁻¹ */
  readonly reachLoss: Float64Array;
  /** [reach × day], m³ d⁻¹ */
  readonly headInflow: Float64Array;
  readonly dayCount: number;
}

/**
 * Head inflow and loss of every reach and day, losses compounding up to the headworks.
 *
 *   I = a O + b T + c·[O + T > 0],  O = Σ I of the reaches fed,  loss = I − O − T
 *
 * Shape: [reach × day] in and out. Missing: NaN demand makes its own reach and those above it NaN on that day, never a sibling.
 * Water is conserved: inflow at the headworks = Σ turnout demand + Σ losses.
 *
 * @throws {ShapeError} when the reaches or the demand do not fit the tree.
 * Source: continuity; loss rules in `loss-rule.ts`.
 */
export function rollUp({ tree, reaches, turnoutDemand }: RollUpInput): RollUp {
  const dayCount = checkShape(tree, reaches.length, turnoutDemand.length);
  const reachLoss = new Float64Array(turnoutDemand.length);
  const headInflow = new Float64Array(turnoutDemand.length);
  const outflow = new Float64Array(turnoutDemand.length);
  for (let at = tree.order.length - 1; at >= 0; at--) {
    const reach = tree.order[at];
    const { perOutflow, perTurnout, whenRunning } = lossCoefficients(reaches[reach].lossRule, reaches[reach].length);
    const from = reach * dayCount;
    const parentFrom = tree.parent[reach] * dayCount;
    for (let day = 0; day < dayCount; day++) {
      const o = outflow[from + day];
      const t = turnoutDemand[from + day];
      const loss = (perOutflow - 1) * o + (perTurnout - 1) * t + (o + t > 0 ? whenRunning : 0);
      reachLoss[from + day] = loss;
      headInflow[from + day] = o + t + loss;
      if (parentFrom >= 0) outflow[parentFrom + day] += o + t + loss;
    }
  }
  return { reachLoss, headInflow, dayCount };
}

function checkShape(tree: ConveyanceTree, reachCount: number, valueCount: number): number {
  const expected = tree.codes.length;
  if (reachCount !== expected)
    throw new ShapeError(`${reachCount} reaches for a tree of ${expected}: give one per code, in the order of the tree`);
  if (valueCount % expected !== 0) throw new ShapeError(`turnout demand has ${valueCount} values, not a multiple of ${expected} reaches`);
  return valueCount / expected;
}

/**
 * Largest departure from conservation over the days, relative to the inflow at the headworks (absolute on days without flow).
 *
 * Missing: days with NaN are left out.
 * @returns fraction, 0 for a perfect balance
 */
export function rollUpImbalance(tree: ConveyanceTree, turnoutDemand: Float64Array, result: RollUp): number {
  const { dayCount, reachLoss, headInflow } = result;
  let worst = 0;
  for (let day = 0; day < dayCount; day++) {
    let drawn = 0;
    for (let reach = 0; reach < tree.codes.length; reach++)
      drawn += turnoutDemand[reach * dayCount + day] + reachLoss[reach * dayCount + day];
    const inflow = headInflow[tree.head * dayCount + day];
    const gap = Math.abs(inflow - drawn) / (inflow > 0 ? inflow : 1);
    if (gap > worst) worst = gap;
  }
  return worst;
}
