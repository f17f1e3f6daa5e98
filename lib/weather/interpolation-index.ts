/** A spatial index over many sites, so that the nearest of ten thousand cells cost microseconds. Exact: it only says which sites are worth a look. */
import Flatbush from 'flatbush';

/** Fewer sites than this are looked through one by one. */
export const INDEXED_SITES = 256;
const DEGREES = 180 / Math.PI;

interface Located {
  readonly longitude: number;
  readonly latitude: number;
}

/**
 * Makes a finder of the sites that can be among the nearest `count` of a place.
 *
 * @returns indexes of candidates, a superset of the nearest; null where the index cannot tell (near a pole, across the 180th meridian, or fewer sites than asked
 * for), and every site must be looked at
 */
export function candidateFinder(
  sites: readonly Located[],
  chordSquare: (site: number, place: readonly [number, number]) => number,
): (place: readonly [number, number], count: number) => readonly number[] | null {
  const known = sites.flatMap(({ longitude, latitude }, site) => (Number.isFinite(longitude) && Number.isFinite(latitude) ? [site] : []));
  if (known.length === 0) return () => null;
  const squeeze = Math.cos(sites[known[0]].latitude / DEGREES);
  const index = new Flatbush(known.length);
  for (const site of known) index.add(sites[site].longitude * squeeze, sites[site].latitude);
  index.finish();
  return (place, count) => {
    const [longitude, latitude] = place;
    if (known.length < count || !Number.isFinite(longitude + latitude)) return null;
    const first = index.neighbors(longitude * squeeze, latitude, count).map((at) => chordSquare(known[at], place));
    // the furthest of any `count` sites bounds the nearest `count`; a hair more, for rounding
    const reach = 2 * Math.asin(Math.min(1, Math.sqrt(first.reduce((a, b) => Math.max(a, b))) / 2)) * DEGREES * (1 + 1e-9) + 1e-9;
    const [south, north] = [latitude - reach, latitude + reach];
    const across = reach / Math.cos(Math.max(Math.abs(south), Math.abs(north)) / DEGREES);
    if (Math.max(Math.abs(south), Math.abs(north)) > 85 || longitude - across < -180 || longitude + across > 180) return null;
    return index.search((longitude - across) * squeeze, south, (longitude + across) * squeeze, north).map((at) => known[at]);
  };
}
