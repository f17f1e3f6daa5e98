/** Which sites lie nearest to a site, for filling its gaps. */
import { EARTH_MEAN_RADIUS } from '../base/constants.ts';
import { placeSites } from './interpolation.ts';
import type { Site } from './variable.ts';

/** Sites kept in order of distance around each site. */
const KEPT = 40;

export interface SiteAround {
  readonly site: number;
  /** great circle on the sphere [m] */
  readonly distance: number;
}

/**
 * Makes a finder of the nearest others of a set of sites, nearest first; the order is worked out once for each site asked for.
 *
 * @param sites the set that is searched
 * @returns for a place and the index to leave out (−1 for none): at most 40 sites with a known place; none when the place is unknown
 */
export function nearestFinder(sites: readonly Site[]): (place: Site, leftOut: number) => readonly SiteAround[] {
  const { vectors } = placeSites(sites);
  const known = new Map<Site, readonly SiteAround[]>();
  return (place, leftOut) => {
    const found = known.get(place) ?? nearestTo(vectors, placeSites([place]).vectors, leftOut);
    known.set(place, found);
    return found;
  };
}

function nearestTo(vectors: Float64Array, [x, y, z]: Float64Array, leftOut: number): SiteAround[] {
  const near: { site: number; square: number }[] = [];
  for (let site = 0; site < vectors.length / 3; site++) {
    const square = (vectors[3 * site] - x) ** 2 + (vectors[3 * site + 1] - y) ** 2 + (vectors[3 * site + 2] - z) ** 2;
    const full = near.length === KEPT;
    if (site === leftOut || Number.isNaN(square) || (full && square >= near[KEPT - 1].square)) continue;
    let at = near.length;
    while (at > 0 && near[at - 1].square > square) at--;
    near.splice(at, 0, { site, square });
    if (near.length > KEPT) near.pop();
  }
  return near.map(({ site, square }) => ({ site, distance: 2 * EARTH_MEAN_RADIUS * Math.asin(Math.min(1, Math.sqrt(square) / 2)) }));
}
