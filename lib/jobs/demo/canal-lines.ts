/**
 * The lines of the larger canals, as distance from the river along the valley: contour canals on both benches, a lower branch on the north bench,
 * and a ditch at the edge of the bottom land.
 */
import { contourDistance, type PlanePoint, planeFromValley, riverAcross, type Side, smooth, VALLEY_LENGTH } from './terrain.ts';

export interface CanalLine {
  readonly side: Side;
  readonly from: number;
  readonly to: number;
  /** distance from the river at a place along the valley [m] */
  readonly distance: (along: number) => number;
}

/** Outer edge of the bottom land, where the river ditch runs [m from the river]. */
export const BOTTOM_EDGE = 955;
const LOWER_BRANCH_START = 16000;
const RIVER_DITCH_START = 4200;

/** Spacing of the surveyed points of a contour [m]. */
const SURVEY_STEP = 40;

export const NORTH_CANAL: CanalLine = { side: 1, from: 0, to: VALLEY_LENGTH, distance: surveyed(1) };
export const SOUTH_CANAL: CanalLine = { side: -1, from: 2600, to: 30000, distance: surveyed(-1) };
export const LOWER_BRANCH: CanalLine = {
  side: 1,
  from: LOWER_BRANCH_START,
  to: 29800,
  distance: (along) => NORTH_CANAL.distance(along) * (1 - 0.47 * smooth((along - LOWER_BRANCH_START) / 3200)),
};
export const RIVER_DITCH: CanalLine = {
  side: 1,
  from: RIVER_DITCH_START,
  to: 15600,
  distance: (along) => {
    const share = smooth((along - RIVER_DITCH_START) / 2200);
    return NORTH_CANAL.distance(along) * (1 - share) + BOTTOM_EDGE * share;
  },
};

/** A contour surveyed once at even spacing, straight between the points. */
function surveyed(side: Side): (along: number) => number {
  const last = Math.ceil((VALLEY_LENGTH + 3000) / SURVEY_STEP);
  const heights = Float64Array.from({ length: last + 1 }, (_, i) => contourDistance((i - 20) * SURVEY_STEP, side));
  return (along) => {
    const at = Math.min(last - 1, Math.max(0, along / SURVEY_STEP + 20));
    const below = Math.floor(at);
    return heights[below] + (heights[below + 1] - heights[below]) * (at - below);
  };
}

/** The plane point of a line at a place along the valley, moved outward by `shift` metres. */
export function linePoint(line: CanalLine, along: number, shift = 0): PlanePoint {
  return planeFromValley(along, riverAcross(along) + line.side * (line.distance(along) + shift));
}

/** A stretch of a line, drawn head to tail. */
export function lineStretch(line: CanalLine, from: number, to: number, step = 150): PlanePoint[] {
  const count = Math.max(1, Math.round((to - from) / step));
  return Array.from({ length: count + 1 }, (_, i) => linePoint(line, from + ((to - from) * i) / count));
}
