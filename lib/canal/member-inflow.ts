/**
 * The roll-up of an ensemble: every member's demand carried up the conveyance tree day by day, losses and all, and summed to periods.
 */
import type { Period } from '../base/civil-date.ts';
import { ShapeError } from '../base/errors.ts';
import type { LossRule } from './loss-rule.ts';
import { rollUp } from './roll-up.ts';
import type { ConveyanceTree } from './tree.ts';

interface MemberInflowInput {
  readonly tree: ConveyanceTree;
  /** in the order of the tree's codes; length [m] */
  readonly reaches: readonly { readonly length: number; readonly lossRule: LossRule }[];
  /** turnout demand of the plain run [reach × day], m³ d⁻¹ */
  readonly plain: Float64Array;
  /** what the members' demand differs by [member × reach × day], m³ d⁻¹ */
  readonly difference: Float64Array;
  readonly periods: readonly Period[];
}

/**
 * Head inflow of every reach, period and member [m³], [reach × period × member].
 *
 * A member's demand is the plain demand and its difference, held at 0 or above; where the difference is 0 on every day the result is the plain run's to
 * the last bit. Losses are each member's own: they are affine in the flow, and a reach that runs dry seeps nothing.
 *
 * Missing: as `rollUp`.
 *
 * @throws {ShapeError} when arrays do not agree
 * Source: continuity; `rollUp`.
 */
export function memberInflows({ tree, reaches, plain, difference, periods }: MemberInflowInput): Float64Array {
  if (plain.length === 0 || difference.length % plain.length !== 0)
    throw new ShapeError(`differences have ${difference.length} values, not a multiple of the ${plain.length} of the plain demand`);
  const members = difference.length / plain.length;
  const inflows = new Float64Array(tree.codes.length * periods.length * members);
  const turnoutDemand = new Float64Array(plain.length);
  for (let member = 0; member < members; member++) {
    const from = member * plain.length;
    for (let i = 0; i < plain.length; i++) turnoutDemand[i] = Math.max(0, plain[i] + difference[from + i]);
    const { headInflow, dayCount } = rollUp({ tree, reaches, turnoutDemand });
    for (let reach = 0; reach < tree.codes.length; reach++) {
      periods.forEach((period, index) => {
        inflows[(reach * periods.length + index) * members + member] = sumOf(headInflow, reach * dayCount, period);
      });
    }
  }
  return inflows;
}

function sumOf(days: Float64Array, from: number, period: Period): number {
  let sum = 0;
  for (let day = period.from; day <= period.to; day++) sum += days[from + day];
  return sum;
}
