/**
 * Bilinear weights on a lattice: the four cells whose centres surround a place, by how near it lies to each along both axes.
 *
 * Cells are registered by their centres. Beyond the outermost centres the nearest row or column is taken, up to half a cell out; further out there is no weight.
 */
import type { GridShape } from './variable.ts';

/** One corner: indices of the cell in the whole grid and its weight. */
export interface CellWeight {
  readonly row: number;
  readonly column: number;
  readonly weight: number;
}

/**
 * The cells around a point of the grid's own system, with weights that sum to 1; cells of no weight are left out.
 *   w = (1 − fx or fx) (1 − fy or fy), f the share of the way from one centre to the next
 *
 * @param x along the columns, in the unit of the grid's axes; longitudes may be given −180–180 where the axis runs 0–360, and the other way round
 * @param y along the rows
 * @returns null where the grid has no axes (curvilinear), or the point lies more than half a cell outside it
 * Source: textbook algebra; exact for a field that is linear along both axes.
 */
export function bilinearCells(grid: GridShape, x: number, y: number): CellWeight[] | null {
  if (!grid.x || !grid.y) return null;
  const column = grid.kind === 'rectilinear' ? longitudePosition(grid.x, x) : positionOn(grid.x, x);
  const row = positionOn(grid.y, y);
  if (!column || !row) return null;
  const cells = [
    { row: row.at, column: column.at, weight: (1 - row.share) * (1 - column.share) },
    { row: row.at, column: column.next, weight: (1 - row.share) * column.share },
    { row: row.next, column: column.at, weight: row.share * (1 - column.share) },
    { row: row.next, column: column.next, weight: row.share * column.share },
  ];
  return cells.filter(({ weight }) => weight > 0);
}

/** Row and column of the cell whose centre is nearest to a point; null as in `bilinearCells`. */
export function nearestCell(grid: GridShape, x: number, y: number): { row: number; column: number } | null {
  const cells = bilinearCells(grid, x, y);
  return cells ? cells.reduce((a, b) => (b.weight > a.weight ? b : a)) : null;
}

/** Where a value lies on an axis: between two centres, and how much of the way. */
interface AxisPosition {
  readonly at: number;
  readonly next: number;
  readonly share: number;
}

/** A longitude on an axis of either habit, across the seam of an axis that goes once around. */
function longitudePosition(axis: readonly number[], longitude: number): AxisPosition | null {
  for (const turned of [longitude, longitude + 360, longitude - 360]) {
    const found = positionOn(axis, turned);
    if (found && isInside(axis, turned)) return found;
  }
  return (
    acrossSeam(axis, longitude) ??
    [longitude, longitude + 360, longitude - 360].map((turned) => positionOn(axis, turned)).find(Boolean) ??
    null
  );
}

function isInside(axis: readonly number[], value: number): boolean {
  const [a, b] = [axis[0], axis[axis.length - 1]];
  return value >= Math.min(a, b) && value <= Math.max(a, b);
}

/** Between the last and the first column of a grid that goes once around the Earth; null for any other. */
function acrossSeam(axis: readonly number[], longitude: number): AxisPosition | null {
  if (axis.length < 2) return null;
  const last = axis.length - 1;
  const step = (axis[last] - axis[0]) / last;
  if (Math.abs(Math.abs(step) * (last + 1) - 360) > 0.01 * Math.abs(step)) return null;
  const beyond = ((((longitude - axis[last]) * Math.sign(step)) % 360) + 360) % 360;
  return { at: last, next: 0, share: Math.min(1, beyond / Math.abs(step)) };
}

/** Position on an axis that rises or falls throughout; on the outermost centre up to half a step beyond it. */
function positionOn(axis: readonly number[], value: number): AxisPosition | null {
  const last = axis.length - 1;
  if (!Number.isFinite(value) || last < 0) return null;
  if (last === 0) return { at: 0, next: 0, share: 0 };
  const rising = axis[last] > axis[0];
  let [low, high] = [0, last];
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (axis[middle] <= value === rising) low = middle;
    else high = middle;
  }
  const share = (value - axis[low]) / (axis[high] - axis[low]);
  if (share < -0.5 || share > 1.5) return null;
  return { at: low, next: high, share: Math.min(1, Math.max(0, share)) };
}
