/**
 * From sites to parcels: which sites speak for a parcel, and with what weight. Weights are made once per parcel and method and then
 * applied day by day.
 *
 * Distances are great circles on a sphere of radius 6 371 008.8 m, from the chord between unit vectors: d = 2 R arcsin(chord/2), which is the
 * haversine form of Sinnott (1984), Sky and Telescope 68, 159. Against the ellipsoid they are off by at most 0.6 %, which cancels nearly wholly
 * in a ratio of distances.
 */
import { EARTH_MEAN_RADIUS } from '../base/constants.ts';
import { RangeViolation } from '../base/errors.ts';
import { candidateFinder, INDEXED_SITES } from './interpolation-index.ts';
import type { Site, SiteWeight } from './variable.ts';

/** Most sites that one parcel listens to. */
export const MAXIMUM_SITES = 8;
/** A parcel this near to a site is on it [m]. */
export const ON_SITE = 1;

/** Longitude, latitude [degrees, WGS 84]; on a plane x, y in its unit. */
export type Place = readonly [longitude: number, latitude: number];

/**
 * Sites made ready for many parcels, [site × 3]: their places as unit vectors from the centre of the Earth, or as points of a plane (third
 * member 0). NaN where unknown.
 */
export interface PlacedSites {
  readonly sites: readonly { readonly code: string }[];
  readonly vectors: Float64Array;
  readonly on: 'sphere' | 'plane';
  /** sites that can be among the nearest of a place; null, or left out: any of them */
  readonly candidates?: (place: Place, count: number) => readonly number[] | null;
}

/** Makes the sites of a source ready once, so that a search over thousands of them costs microseconds per parcel. */
export function placeSites(sites: readonly Site[]): PlacedSites {
  const made = placed(sites, (site) => unitVector([site.longitude, site.latitude]), 'sphere');
  if (sites.length < INDEXED_SITES) return made;
  return { ...made, candidates: candidateFinder(sites, (site, place) => chordSquareTo(made.vectors, site, unitVector(place))) };
}

function chordSquareTo(vectors: Float64Array, site: number, [x, y, z]: readonly [number, number, number]): number {
  return (vectors[3 * site] - x) ** 2 + (vectors[3 * site + 1] - y) ** 2 + (vectors[3 * site + 2] - z) ** 2;
}

/** Points of a plane made ready likewise: distances are straight lines in the unit of the coordinates. */
export function placeOnPlane(points: readonly { readonly code: string; readonly x: number; readonly y: number }[]): PlacedSites {
  return placed(points, ({ x, y }) => [x, y, 0], 'plane');
}

function placed<S extends { readonly code: string }>(
  sites: readonly S[],
  vectorOf: (site: S) => [number, number, number],
  on: PlacedSites['on'],
): PlacedSites {
  const vectors = new Float64Array(3 * sites.length);
  sites.forEach((site, index) => {
    vectors.set(vectorOf(site), 3 * index);
  });
  return { sites, vectors, on };
}

function unitVector([longitude, latitude]: Place): [number, number, number] {
  const [lambda, phi] = [(longitude * Math.PI) / 180, (latitude * Math.PI) / 180];
  return [Math.cos(phi) * Math.cos(lambda), Math.cos(phi) * Math.sin(lambda), Math.sin(phi)];
}

interface SiteAtDistance {
  readonly site: number;
  /** square of the straight line, through the unit sphere or on the plane, which grows with the distance */
  readonly chordSquare: number;
}

/** A site and its distance [m, or the unit of the plane]. */
export interface NearSite {
  readonly site: number;
  readonly distance: number;
}

/**
 * The nearest sites of a place, nearest first; equal distances by code.
 *
 * @param count most sites wanted
 * @throws {RangeViolation} when no site has a known place
 */
export function nearSites(place: Place, sites: PlacedSites, count: number): NearSite[] {
  return nearestSites(place, sites, count).map((found) => ({ site: found.site, distance: distanceOf(found, sites.on) }));
}

/** Distance between two of the sites [m, or the unit of the plane]; NaN when a place is unknown. */
export function distanceBetween({ vectors, on }: PlacedSites, a: number, b: number): number {
  const chordSquare = chordSquareTo(vectors, a, [vectors[3 * b], vectors[3 * b + 1], vectors[3 * b + 2]]);
  return distanceOf({ site: b, chordSquare }, on);
}

/** The nearest sites with a known place, nearest first; equal distances by code, so that the order of the site table does not matter. */
function nearestSites(place: Place, given: readonly Site[] | PlacedSites, count: number): SiteAtDistance[] {
  const { sites, vectors, on, candidates } = 'vectors' in given ? given : placeSites(given);
  const point: [number, number, number] = on === 'sphere' ? unitVector(place) : [place[0], place[1], 0];
  const near: SiteAtDistance[] = [];
  let furthest = Number.POSITIVE_INFINITY;
  const among = candidates?.(place, count);
  const length = among ? among.length : sites.length;
  for (let i = 0; i < length; i++) {
    const site = among ? among[i] : i;
    const chordSquare = chordSquareTo(vectors, site, point);
    if (!(chordSquare <= furthest)) continue;
    insertByDistance(near, { site, chordSquare }, sites);
    if (near.length > count) near.pop();
    if (near.length === count) furthest = near[count - 1].chordSquare;
  }
  if (near.length > 0) return near;
  throw new RangeViolation(
    `no site with a known place for the point ${place[0]}, ${place[1]} (${sites.length} sites given): give the sites and the point longitude and latitude`,
  );
}

function insertByDistance(near: SiteAtDistance[], found: SiteAtDistance, sites: PlacedSites['sites']): void {
  let at = near.length;
  while (at > 0 && isNearer(found, near[at - 1], sites)) at--;
  near.splice(at, 0, found);
}

function isNearer(a: SiteAtDistance, b: SiteAtDistance, sites: PlacedSites['sites']): boolean {
  return a.chordSquare === b.chordSquare ? sites[a.site].code < sites[b.site].code : a.chordSquare < b.chordSquare;
}

function distanceOf({ chordSquare }: SiteAtDistance, on: PlacedSites['on']): number {
  if (on === 'plane') return Math.sqrt(chordSquare);
  return 2 * EARTH_MEAN_RADIUS * Math.asin(Math.min(1, Math.sqrt(chordSquare) / 2));
}

/**
 * Weights of the nearest site: it alone, with weight 1.
 *
 * @param place of the parcel
 * @param sites as they are, or made ready by `placeSites`
 * @returns one weight
 * @throws {RangeViolation} when no site has a known place
 * Source: Thiessen (1911), Monthly Weather Review 39, 1082–1084.
 */
export function nearestWeights(place: Place, sites: readonly Site[] | PlacedSites): SiteWeight[] {
  return [{ site: nearestSites(place, sites, 1)[0].site, weight: 1 }];
}

/** A parcel and the sites around it. */
interface InverseDistanceInput {
  readonly longitude: number;
  readonly latitude: number;
  /** as they are, or made ready by `placeSites` */
  readonly sites: readonly Site[] | PlacedSites;
  /** exponent of distance, above 0; 2 is usual */
  readonly power: number;
  /** 1–8; the nearest ones are taken */
  readonly maximumSites: number;
}

/**
 * Weights by inverse distance to the nearest sites.
 *   wi = di⁻ᵖ / Σ dj⁻ᵖ
 *
 * @returns weights ≥ 0 that sum to 1, nearest site first; a parcel within 1 m of a site has that site alone
 * @throws {RangeViolation} for a power not above 0, a number of sites outside 1–8, or when no site has a known place
 * Source: Shepard (1968), Proceedings of the 23rd ACM National Conference, 517–524.
 */
export function inverseDistanceWeights({ longitude, latitude, sites, power, maximumSites }: InverseDistanceInput): SiteWeight[] {
  if (!(power > 0)) throw new RangeViolation(`power ${power} of inverse distance not above limit 0: give a positive exponent, usually 2`);
  if (!(Number.isInteger(maximumSites) && maximumSites >= 1 && maximumSites <= MAXIMUM_SITES)) {
    throw new RangeViolation(`number of sites ${maximumSites} outside limits 1–${MAXIMUM_SITES}: give a whole number within them`);
  }
  const ready = 'vectors' in sites ? sites : placeSites(sites);
  return inverseDistanceOf(nearSites([longitude, latitude], ready, maximumSites), power);
}

/** Weights by inverse distance of sites that have been looked up already, nearest first; as `inverseDistanceWeights`. */
export function inverseDistanceOf(near: readonly NearSite[], power: number): SiteWeight[] {
  if (near[0].distance < ON_SITE) return [{ site: near[0].site, weight: 1 }];
  const pull = near.map(({ distance }) => (near[0].distance / distance) ** power);
  const total = pull.reduce((sum, value) => sum + value, 0);
  return near.map(({ site }, i) => ({ site, weight: pull[i] / total }));
}
