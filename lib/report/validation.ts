/** What the tests hold against the world outside: printed tables and worked examples, measured fluxes, agencies' own values. Written by the tests. */

/** One check. `expected` is the value outside, or the bar in words where it is a figure of merit. */
export interface ValidationRow {
  readonly what: string;
  readonly expected: number | string;
  readonly computed: number;
  /** in the unit of the row; null for a figure of merit */
  readonly tolerance: number | null;
  readonly unit: string;
  /**
   * printed: read in the publication. recomputed: the printed formula, worked out independently, because the print rounds or errs. recalled: from
   * memory, not re-read. measured: instruments. outside: another program of general purpose, or an agency.
   */
  readonly provenance: 'printed' | 'recomputed' | 'recalled' | 'measured' | 'outside';
}

export interface ValidationFile {
  readonly title: string;
  readonly source: string;
  readonly rows: readonly ValidationRow[];
}

export const PROVENANCE_TEXT: Readonly<Record<ValidationRow['provenance'], string>> = {
  printed: 'printed in the source',
  recomputed: 'recomputed independently from the printed formula',
  recalled: 'recalled, not re-read',
  measured: 'measured',
  outside: 'computed by others',
};

/**
 * Distance of a check from the value outside, as a share of what is allowed: 0 exact, 1 at the limit.
 *
 * @returns NaN for a figure of merit
 * @example shareOfTolerance({ what: '', expected: 10, computed: 10.5, tolerance: 1, unit: '', provenance: 'printed' }) // 0.5
 */
export function shareOfTolerance(row: ValidationRow): number {
  if (row.tolerance === null || typeof row.expected !== 'number') return Number.NaN;
  if (row.tolerance === 0) return row.computed === row.expected ? 0 : Number.POSITIVE_INFINITY;
  return Math.abs(row.computed - row.expected) / row.tolerance;
}
