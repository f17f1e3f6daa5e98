/** The cells of a grid around a place, as indexes into the sites of a run. */
import proj4 from 'proj4';
import { bilinearCells, type CellWeight, nearestCell } from '../weather/bilinear.ts';
import type { Place } from '../weather/interpolation.ts';
import type { GridShape, Site, SiteWeight } from '../weather/variable.ts';

export interface GridFinder {
  /** bilinear weights over the cells at hand; null where none of the four is, or the grid has no axes */
  readonly bilinear: (place: Place) => SiteWeight[] | null;
  readonly nearest: (place: Place) => SiteWeight[] | null;
}

/**
 * Finds cells by their place on the grid's axes. A cell that is not at hand is left out and the others share its weight.
 *
 * @param cells the sites of the run, each with the place of its centre, and which of them may be used
 * @param notes takes a sentence where the grid cannot be used as one
 */
export function gridFinder(
  grid: GridShape,
  cells: { readonly sites: readonly Site[]; readonly usable: readonly number[] },
  notes: string[],
): GridFinder {
  const { sites, usable } = cells;
  const toGrid = projectionTo(grid, notes);
  if (!toGrid) return { bilinear: () => null, nearest: () => null };
  const at = new Map<number, number>();
  for (const index of usable) {
    const found = nearestCell(grid, ...toGrid([sites[index].longitude, sites[index].latitude]));
    if (found) at.set(found.row * grid.columns + found.column, index);
  }
  const indexOf = ({ row, column }: { row: number; column: number }) => at.get(row * grid.columns + column);
  return {
    bilinear: (place) => weightsOf(bilinearCells(grid, ...toGrid(place)), indexOf),
    nearest: (place) => {
      const cell = nearestCell(grid, ...toGrid(place));
      const site = cell ? indexOf(cell) : undefined;
      return site === undefined ? null : [{ site, weight: 1 }];
    },
  };
}

function weightsOf(cells: readonly CellWeight[] | null, indexOf: (cell: CellWeight) => number | undefined): SiteWeight[] | null {
  const known = (cells ?? []).flatMap((cell) => {
    const site = indexOf(cell);
    return site === undefined ? [] : [{ site, weight: cell.weight }];
  });
  const total = known.reduce((sum, { weight }) => sum + weight, 0);
  return total > 0 ? known.map(({ site, weight }) => ({ site, weight: weight / total })) : null;
}

/** From longitude and latitude to the grid's own system; null, with a note, where there is none. */
function projectionTo(grid: GridShape, notes: string[]): ((place: Place) => [number, number]) | null {
  if (!grid.x || !grid.y) {
    notes.push(
      'The grid has no axes of its own (only the places of its cells): weights are by inverse distance over the four nearest cells.',
    );
    return null;
  }
  if (grid.kind === 'rectilinear') return ([longitude, latitude]) => [longitude, latitude];
  try {
    const { forward } = proj4('EPSG:4326', grid.crs);
    return ([longitude, latitude]) => forward([longitude, latitude]) as [number, number];
  } catch (cause) {
    const reason = cause instanceof Error ? cause.message : String(cause);
    notes.push(
      `The grid's system "${grid.crs}" is not understood (${reason}): weights are by inverse distance over the four nearest cells.`,
    );
    return null;
  }
}
