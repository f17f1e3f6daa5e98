/** Quantiles of members: P10, P50 and P90 of every period. */
import { quantileOf } from '../base/stratified.ts';

/** The quantiles a band is told by. */
export const BAND_QUANTILES = [0.1, 0.5, 0.9] as const;

/**
 * Quantiles of rows of members.
 *
 * @param values [row × member]; put in order by this call
 * @param write takes quantile index, row and value
 * Source: `quantileOf`, definition 7 of Hyndman & Fan (1996).
 */
export function eachQuantile(
  values: Float64Array | Int32Array,
  members: number,
  write: (quantile: number, row: number, value: number) => void,
): void {
  for (let row = 0; row * members < values.length; row++) {
    const own = values.subarray(row * members, (row + 1) * members).sort();
    for (let q = 0; q < BAND_QUANTILES.length; q++) write(q, row, quantileOf(own, BAND_QUANTILES[q]));
  }
}
