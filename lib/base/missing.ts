/**
 * Missing values: NaN inside the pure rooms, null in the database and in JSON. The two conversions live here and run only at the border.
 */

/** NaN (and ±Infinity, which no stored quantity can be) become null. */
export function nullFromNaN(value: number): number | null {
  return Number.isFinite(value) ? value : null;
}

/** null and undefined become NaN. */
export function nanFromNull(value: number | null | undefined): number {
  return value === null || value === undefined ? Number.NaN : value;
}

/** Rounds for output; NaN becomes null. @example roundOrNull(1.23456, 2) // 1.23 */
export function roundOrNull(value: number, decimals: number): number | null {
  if (!Number.isFinite(value)) return null;
  const scale = 10 ** decimals;
  const rounded = Math.round(value * scale) / scale;
  return rounded === 0 ? 0 : rounded;
}
