/**
 * Stratified chance for ensembles: Latin hypercube samples, the normal quantile, and quantiles of what comes out.
 */
import { mulberry32, type Random } from './random.ts';

/** Coefficients of the rational approximation AS 241 PPND16, lowest power first: central region, then tails up to r = 5, then beyond. */
const CENTRAL = [
  [
    3.3871328727963665, 133.14166789178438, 1971.5909503065513, 13731.69376550946, 45921.95393154987, 67265.7709270087, 33430.57558358813,
    2509.0809287301227,
  ],
  [
    1, 42.31333070160091, 687.1870074920579, 5394.196021424751, 21213.794301586597, 39307.89580009271, 28729.085735721943,
    5226.495278852854,
  ],
] as const;
const TAIL = [
  [
    1.4234371107496835, 4.630337846156546, 5.769497221460691, 3.6478483247632045, 1.2704582524523684, 0.2417807251774506,
    0.022723844989269184, 0.0007745450142783414,
  ],
  [
    1, 2.053191626637759, 1.6763848301838038, 0.6897673349851, 0.14810397642748008, 0.015198666563616457, 0.0005475938084995345,
    1.0507500716444169e-9,
  ],
] as const;
const FAR_TAIL = [
  [
    6.657904643501103, 5.463784911164114, 1.7848265399172913, 0.29656057182850487, 0.026532189526576124, 0.0012426609473880784,
    2.7115555687434876e-5, 2.0103343992922881e-7,
  ],
  [
    1, 0.599832206555888, 0.1369298809227358, 0.014875361290850615, 0.0007868691311456133, 1.8463183175100548e-5, 1.421511758316446e-7,
    2.0442631033899397e-15,
  ],
] as const;

/**
 * Quantile of the standard normal distribution, z with Φ(z) = p.
 *
 * Valid: 0 < p < 1; outside, and for NaN, NaN. Accuracy: about one part in 10¹⁶ as printed; the tests hold it to 1e-14 relative.
 *
 * @param p probability, 0–1
 * @example normalQuantile(0.5) // 0
 * Source: Wichura (1988), Algorithm AS 241: The percentage points of the normal distribution, Applied Statistics 37, 477–484, PPND16 (recalled;
 * checked against values of an independent program).
 */
export function normalQuantile(p: number): number {
  if (!(p > 0 && p < 1)) return Number.NaN;
  const q = p - 0.5;
  if (Math.abs(q) <= 0.425) return q * ratio(CENTRAL, 0.180625 - q * q);
  const r = Math.sqrt(-Math.log(q < 0 ? p : 1 - p));
  const z = r <= 5 ? ratio(TAIL, r - 1.6) : ratio(FAR_TAIL, r - 5);
  return q < 0 ? -z : z;
}

function ratio([above, below]: readonly [readonly number[], readonly number[]], r: number): number {
  let [numerator, denominator] = [0, 0];
  for (let k = above.length - 1; k >= 0; k--) {
    numerator = numerator * r + above[k];
    denominator = denominator * r + below[k];
  }
  return numerator / denominator;
}

/**
 * One margin of a Latin hypercube as standard normal deviates: each of `count` strata of equal probability is drawn from once, in random order.
 *
 *   z(i) = Φ⁻¹((π(i) + u(i)) / count), π a random permutation of 0 … count − 1, u uniform on (0, 1)
 *
 * Margins drawn one after another, or from generators of their own, are independent: together they are the hypercube.
 *
 * @param into takes the deviates; its length is the number of members
 * Source: McKay, Beckman & Conover (1979), A comparison of three methods for selecting values of input variables in the analysis of output from a
 * computer code, Technometrics 21, 239–245.
 */
export function stratifiedNormal(random: Random, into: Float64Array): void {
  const count = into.length;
  for (let i = 0; i < count; i++) into[i] = i;
  for (let i = count - 1; i > 0; i--) {
    const other = Math.floor(random() * (i + 1));
    const held = into[i];
    into[i] = into[other];
    into[other] = held;
  }
  for (let i = 0; i < count; i++) into[i] = normalQuantile((into[i] + HALF_STEP + random()) / count);
}

/** Half a step of the generator: keeps u above 0, where the quantile of the lowest stratum has no value. */
const HALF_STEP = 2 ** -33;

/**
 * A generator for one name under one seed: streams of different names do not depend on one another, or on the order in which they are asked for.
 *
 * @example seededStream(1, 'coefficient maize')() === seededStream(1, 'coefficient maize')() // true
 * Source: FNV-1a over the UTF-16 code units (Fowler, Noll & Vo, public domain), mixed with the seed.
 */
export function seededStream(seed: number, name: string): Random {
  let hash = 0x811c9dc5 ^ seed;
  for (let i = 0; i < name.length; i++) hash = Math.imul(hash ^ name.charCodeAt(i), 0x01000193);
  const mixed = mulberry32(hash);
  return mulberry32(Math.floor(mixed() * 4294967296) ^ Math.imul(seed, 0x9e3779b1));
}

/**
 * Quantile of ascending values by linear interpolation between order statistics, at place (n − 1) p.
 *
 * Missing: NaN for no values.
 *
 * @param sorted ascending
 * @param p 0–1
 * @example quantileOf([1, 2, 3, 4], 0.5) // 2.5
 * Source: Hyndman & Fan (1996), Sample quantiles in statistical packages, The American Statistician 50, 361–365, definition 7.
 */
export function quantileOf(sorted: ArrayLike<number>, p: number): number {
  if (sorted.length === 0) return Number.NaN;
  const place = (sorted.length - 1) * p;
  const below = Math.floor(place);
  const above = Math.min(below + 1, sorted.length - 1);
  return sorted[below] + (place - below) * (sorted[above] - sorted[below]);
}
