/** Inflow at the head of one reach, asked of the roll-up itself: the reach feeds a lossless reach that takes its outflow. */
import type { LossRule } from '../../lib/canal/loss-rule.ts';
import { rollUp } from '../../lib/canal/roll-up.ts';
import { buildTree } from '../../lib/canal/tree.ts';

const TREE = buildTree([
  { code: 'reach', parentCode: null },
  { code: 'next', parentCode: 'reach' },
]);

/** @param length [m]; flows and result [m³ d⁻¹] */
export function headInflow(lossRule: LossRule, length: number, flow: { readonly outflow: number; readonly turnoutDemand: number }): number {
  const reaches = [
    { length, lossRule },
    { length: 0, lossRule: { kind: 'none' as const } },
  ];
  return rollUp({ tree: TREE, reaches, turnoutDemand: Float64Array.of(flow.turnoutDemand, flow.outflow) }).headInflow[0];
}
