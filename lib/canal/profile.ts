/**
 * Flow along one way through the tree, from the headworks to the tail of a reach.
 */
import { type ConveyanceTree, pathFromHead } from './tree.ts';

export interface ProfilePoint {
  readonly reach: number;
  /** along the canal from the headworks to the head and to the tail of the reach [m] */
  readonly fromDistance: number;
  readonly toDistance: number;
  /** entering the reach, and passed on to the next reach of the way (0 at the end of it) [same unit as the flows given] */
  readonly flowIn: number;
  readonly flowOn: number;
  /** of the reach, NaN when not known */
  readonly capacity: number;
}

/**
 * Longitudinal profile of flow from the headworks to the tail of `reach`.
 *
 * @param flow head inflow of each reach, any unit, NaN kept
 */
export function longitudinalProfile(input: {
  readonly tree: ConveyanceTree;
  readonly reach: number;
  readonly length: ArrayLike<number>;
  readonly flow: ArrayLike<number>;
  readonly capacity: ArrayLike<number>;
}): ProfilePoint[] {
  let distance = 0;
  return pathFromHead(input.tree, input.reach).map((reach, at, path) => {
    const fromDistance = distance;
    distance += input.length[reach];
    const flowOn = at + 1 < path.length ? input.flow[path[at + 1]] : 0;
    return { reach, fromDistance, toDistance: distance, flowIn: input.flow[reach], flowOn, capacity: input.capacity[reach] };
  });
}
