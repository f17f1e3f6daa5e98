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
import type { Site, SiteWeight } from './variable.ts';

/** Most sites that one parcel listens to. */
const MAXIMUM_SITES = 8;
/** A parcel this near to a site is on it [m]. */
const ON_SITE = 1;

/** Longitude, latitude [degrees, WGS 84]. */
type LonLat = readonly [longitude: number, latitude: number];

/** Sites made ready for many parcels: their places as unit vectors from the centre of the Earth, [site × 3], NaN where unknown. */
interface PlacedSites {
  readonly sites: readonly Site[];
  readonly vectors: Float64Array;
}

/** Makes the sites of a source ready once, so that a search over thousands of them costs microseconds per parcel. */
export function placeSites(sites: readonly Site[]): PlacedSites {
  const vectors = new Float64Array(3 * sites.length);
  sites.forEach(({ longitude, latitude }, site) => {
    vectors.set(unitVector([longitude, latitude]), 3 * site);
  });
  return { sites, vectors };
}

function unitVector([longitude, latitude]: LonLat): [number, number, number] {
  const [lambda, phi] = [(longitude * Math.PI) / 180, (latitude * Math.PI) / 180];
  return [Math.cos(phi) * Math.cos(lambda), Math.cos(phi) * Math.sin(lambda), Math.sin(phi)];
}

interface SiteAtDistance {
  readonly site: number;
  /** square of the straight line through the unit sphere, which grows with the great circle */
  readonly chordSquare: number;
}

/** The nearest sites with a known place, nearest first; equal distances by code, so that the order of the site table does not matter. */
function nearestSites(place: LonLat, given: readonly Site[] | PlacedSites, count: number): SiteAtDistance[] {
  const { sites, vectors } = 'vectors' in given ? given : placeSites(given);
  const [x, y, z] = unitVector(place);
  const near: SiteAtDistance[] = [];
  let furthest = Number.POSITIVE_INFINITY;
  for (let site = 0; site < sites.length; site++) {
    const dx = vectors[3 * site] - x;
    const dy = vectors[3 * site + 1] - y;
    const dz = vectors[3 * site + 2] - z;
    const chordSquare = dx * dx + dy * dy + dz * dz;
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

function insertByDistance(near: SiteAtDistance[], found: SiteAtDistance, sites: readonly Site[]): void {
  let at = near.length;
  while (at > 0 && isNearer(found, near[at - 1], sites)) at--;
  near.splice(at, 0, found);
}

function isNearer(a: SiteAtDistance, b: SiteAtDistance, sites: readonly Site[]): boolean {
  return a.chordSquare === b.chordSquare ? sites[a.site].code < sites[b.site].code : a.chordSquare < b.chordSquare;
}

function distanceOf({ chordSquare }: SiteAtDistance): number {
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
export function nearestWeights(place: LonLat, sites: readonly Site[] | PlacedSites): SiteWeight[] {
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
  const near = nearestSites([longitude, latitude], sites, maximumSites);
  const distances = near.map(distanceOf);
  if (distances[0] < ON_SITE) return [{ site: near[0].site, weight: 1 }];
  const pull = distances.map((distance) => (distances[0] / distance) ** power);
  const total = pull.reduce((sum, value) => sum + value, 0);
  return near.map(({ site }, i) => ({ site, weight: pull[i] / total }));
}
