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
  const { days, present } = mix;
  into.fill(0);
  for (let k = 0; k < mix.count; k++) {
    for (let d = 0, i = mix.start[k]; d < days; d++, i++) into[d] |= from[i] & -present[i];
  }
}

/** Σ w (x + shift) of one variable over the sites of a parcel, day by day; four sites at a time where none has gaps. */
export function mixRows(mix: Mix, from: Float64Array, shift: Float64Array, into: Float64Array): void {
  into.fill(0);
  let k = 0;
  if (mix.complete) for (; k + 3 < mix.count; k += 4) addFour(mix, k, from, into);
  for (; k < mix.count; k++) addOne(mix, k, from, into);
  let constant = 0;
  for (k = 0; k < mix.count; k++) constant += mix.weight[k] * shift[k];
  if (shift !== mix.none) shiftRow(mix, shift, constant, into);
}

function addFour(mix: Mix, k: number, from: Float64Array, into: Float64Array): void {
  const { days, weight, start } = mix;
  const [a, b, c, d] = [weight[k], weight[k + 1], weight[k + 2], weight[k + 3]];
  const [rowB, rowC, rowD] = [start[k + 1] - start[k], start[k + 2] - start[k], start[k + 3] - start[k]];
  for (let day = 0, i = start[k]; day < days; day++, i++) {
    into[day] += a * from[i] + b * from[i + rowB] + (c * from[i + rowC] + d * from[i + rowD]);
  }
}

function addOne(mix: Mix, k: number, from: Float64Array, into: Float64Array): void {
  const { days, present } = mix;
  const weight = mix.weight[k];
  for (let d = 0, i = mix.start[k]; d < days; d++, i++) if (present[i] === 1) into[d] += weight * from[i];
}

/** Adds Σ w shift: the same every day where no site has gaps, else over the sites present. */
function shiftRow(mix: Mix, shift: Float64Array, constant: number, into: Float64Array): void {
  const { days, present } = mix;
  if (mix.complete) {
    for (let d = 0; d < days; d++) into[d] += constant;
    return;
  }
  for (let k = 0; k < mix.count; k++) {
    const part = mix.weight[k] * shift[k];
    for (let d = 0, i = mix.start[k]; d < days; d++, i++) if (present[i] === 1) into[d] += part;
  }
}
