/**
 * The old survey of the invented valley: a net of quarter sections whose corners were never quite where they should be. Field edges, lanes and
 * laterals follow it.
 */
import { mulberry32 } from '../../base/random.ts';
import type { PlanePoint } from './terrain.ts';

/** Side of a quarter section [m]: half a mile. */
export const QUARTER_SIDE = 804.672;
const CORNER_ERROR = 46;

/** A corner of the survey; the same pair always gives the same point. */
export function corner(column: number, row: number, seed: number): PlanePoint {
  const random = mulberry32(Math.imul(column + 4096, 73856093) ^ Math.imul(row + 4096, 19349663) ^ seed);
  const error = () => (random() * 2 - 1) * CORNER_ERROR;
  return [column * QUARTER_SIDE + error(), row * QUARTER_SIDE + error()];
}

/** The four corners of a quarter section, counter-clockwise from the south-west. */
export function quarterCorners(column: number, row: number, seed: number): readonly [PlanePoint, PlanePoint, PlanePoint, PlanePoint] {
  return [corner(column, row, seed), corner(column + 1, row, seed), corner(column + 1, row + 1, seed), corner(column, row + 1, seed)];
}

/** Point of a quarter section at shares u (west to east) and v (south to north). */
export function withinQuarter(corners: readonly PlanePoint[], u: number, v: number): PlanePoint {
  const [a, b, c, d] = corners;
  const mix = (axis: 0 | 1) => (1 - v) * ((1 - u) * a[axis] + u * b[axis]) + v * ((1 - u) * d[axis] + u * c[axis]);
  return [mix(0), mix(1)];
}
