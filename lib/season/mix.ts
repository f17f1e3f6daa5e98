/** Rows of site weather mixed into one row of a parcel by one set of weights. */
import type { Site } from '../weather/variable.ts';
import type { Mix, PackedSeason } from './pack.ts';
import type { ParcelInput } from './types.ts';

/**
 * Correction of a site's temperature to the parcel's elevation.
 *   ΔT = Γ (zsite − zparcel)
 *
 * @param lapseRate Γ [°C m⁻¹], positive when it gets colder upwards; 0.0065 in the standard atmosphere
 * @returns ΔT [°C]; 0 where the site's elevation is unknown
 * Source: ISO 2533:1975, Standard Atmosphere, for the value 0.0065.
 */
export function lapseCorrection(site: Site, parcel: ParcelInput, lapseRate: number): number {
  return Number.isNaN(site.elevation) ? 0 : lapseRate * (site.elevation - parcel.elevation);
}

/** Sets up the mix of a parcel: its sites with a weight. */
export function openMix(season: PackedSeason, parcel: ParcelInput): Mix {
  const { input, mix } = season;
  mix.count = 0;
  mix.complete = true;
  for (const { site, weight } of parcel.weights) {
    if (weight === 0) continue;
    mix.start[mix.count] = site * mix.days;
    mix.weight[mix.count] = weight;
    mix.lapse[mix.count] = lapseCorrection(input.sites[site], parcel, input.settings.lapseRate);
    mix.count++;
    mix.complete &&= season.complete[site];
  }
  return mix;
}

/** Sum of the weights of the sites present on each day. */
export function weighDays(mix: Mix, into: Float64Array): void {
  into.fill(0);
  if (mix.complete) {
    let sum = 0;
    for (let k = 0; k < mix.count; k++) sum += mix.weight[k];
    into.fill(sum);
    return;
  }
  for (let k = 0; k < mix.count; k++) {
    for (let d = 0, i = mix.start[k]; d < mix.days; d++, i++) if (mix.present[i] === 1) into[d] += mix.weight[k];
  }
}

/** OR of the flags of the sites present on each day. */
export function joinFlags(mix: Mix, from: Uint32Array, into: Uint32Array): void {
  const { days, present, start } = mix;
  if (!mix.complete) {
    into.fill(0);
    for (let k = 0; k < mix.count; k++) {
      for (let d = 0, i = start[k]; d < days; d++, i++) into[d] |= from[i] & -present[i];
    }
    return;
  }
  into.set(from.subarray(start[0], start[0] + days));
  for (let k = 1; k < mix.count; k++) for (let d = 0, i = start[k]; d < days; d++, i++) into[d] |= from[i];
}

/** Σ w (x + shift) of one variable over the sites of a parcel present on each day; see `weighDays` for Σ w. */
export function mixRows(mix: Mix, from: Float64Array, shift: Float64Array, into: Float64Array): void {
  into.fill(0);
  const { days, present, start } = mix;
  for (let k = 0; k < mix.count; k++) {
    const weight = mix.weight[k];
    const moved = weight * shift[k];
    for (let d = 0, i = start[k]; d < days; d++, i++) if (present[i] === 1) into[d] += weight * from[i] + moved;
  }
}

/** Most sites that `meanRow` takes together. */
export const MOST_TOGETHER = 8;

/**
 * Mean of one variable over sites without gaps, Σ w (x + shift) / Σ w, in one pass over the days.
 *
 * Places that no site fills read the first site with weight 0, so that there is one loop for four sites and one for eight.
 *
 * @param together weights over their sum and places of the first day, see `openTogether`
 * @param shift Σ w shift / Σ w, the same every day
 */
export function meanRow(together: Together, from: Float64Array, shift: number, into: Float64Array): void {
  if (together.count <= 4) meanOfFour(together, from, shift, into);
  else meanOfEight(together, from, shift, into);
}

/** The sites of a parcel for `meanRow`; overwritten by the next parcel. */
export interface Together {
  count: number;
  /** w / Σ w */
  readonly share: Float64Array;
  readonly start: Int32Array;
  /** Σ w lapse / Σ w [°C] */
  lapse: number;
}

const together: Together = { count: 0, share: new Float64Array(MOST_TOGETHER), start: new Int32Array(MOST_TOGETHER), lapse: 0 };

/** Takes the sites of an open mix together; at most `MOST_TOGETHER`, none with gaps. */
export function openTogether(mix: Mix): Together {
  const { share, start } = together;
  let sum = 0;
  for (let k = 0; k < mix.count; k++) sum += mix.weight[k];
  let lapse = 0;
  for (let k = 0; k < MOST_TOGETHER; k++) {
    const used = k < mix.count;
    share[k] = used ? mix.weight[k] / sum : 0;
    start[k] = mix.start[used ? k : 0];
    if (used) lapse += share[k] * mix.lapse[k];
  }
  together.count = mix.count;
  together.lapse = lapse;
  return together;
}

function meanOfFour({ share, start }: Together, from: Float64Array, shift: number, into: Float64Array): void {
  const [w0, w1, w2, w3] = [share[0], share[1], share[2], share[3]];
  const [i0, i1, i2, i3] = [start[0], start[1], start[2], start[3]];
  for (let d = 0; d < into.length; d++) {
    into[d] = w0 * from[i0 + d] + w1 * from[i1 + d] + (w2 * from[i2 + d] + w3 * from[i3 + d]) + shift;
  }
}

function meanOfEight({ share, start }: Together, from: Float64Array, shift: number, into: Float64Array): void {
  const [w0, w1, w2, w3, w4, w5, w6, w7] = [share[0], share[1], share[2], share[3], share[4], share[5], share[6], share[7]];
  const [i0, i1, i2, i3, i4, i5, i6, i7] = [start[0], start[1], start[2], start[3], start[4], start[5], start[6], start[7]];
  for (let d = 0; d < into.length; d++) {
    const upper = w0 * from[i0 + d] + w1 * from[i1 + d] + (w2 * from[i2 + d] + w3 * from[i3 + d]);
    const lower = w4 * from[i4 + d] + w5 * from[i5 + d] + (w6 * from[i6 + d] + w7 * from[i7 + d]);
    into[d] = upper + lower + shift;
  }
}
