/**
 * The exponential function for inner loops: a table and a short polynomial in place of the library's.
 */

const STEPS = 64;
const LOWEST = -16;
const HIGHEST = 8;
const table = Float64Array.from({ length: (HIGHEST - LOWEST) * STEPS + 2 }, (_, k) => Math.exp(LOWEST + k / STEPS));

/**
 * e to a power.
 *
 *   eˣ = e^(k/64) · (1 + r + r²/2 + … + r⁶/720), r = x − k/64, |r| ≤ 1/128
 *
 * Relative error below 5e-16 for x in −16 … 8; outside, the library's function.
 * Missing: NaN gives NaN.
 *
 * @param x exponent [1]
 * @returns [1]
 * @example exponential(1) // 2.718281828459045
 * Source: Taylor series of eʳ about the points of a table.
 */
export function exponential(x: number): number {
  if (!(x > LOWEST && x < HIGHEST)) return Math.exp(x);
  const k = (x * STEPS + (0.5 - LOWEST * STEPS)) | 0;
  const r = x - (k + LOWEST * STEPS) * (1 / STEPS);
  const r2 = r * r;
  const tail = r2 * (0.5 + r * (1 / 6) + r2 * (1 / 24 + r * (1 / 120) + r2 * (1 / 720)));
  return table[k] + table[k] * (r + tail);
}
