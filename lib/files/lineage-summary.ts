/**
 * What an import of parcels does to the parcels that stand: told in what was understood of the file.
 */
import type { GroundChange } from '../geo/lineage.ts';

export interface LineageItem {
  readonly change: Exclude<GroundChange, 'unchanged'> | 'new' | 'overlaid';
  readonly code: string;
  readonly area_ha: number;
  readonly successors: readonly { readonly code: string; readonly share: number }[];
}

/** What an import of parcels does to the ground. `overlaid`: parcels that stay although parcels of the file lie on their ground. */
export interface LineageSummary {
  readonly counts: Readonly<Record<GroundChange | 'new' | 'overlaid', number>>;
  /** changed parcels, at most two thousand; `listed_all` says whether these are all */
  readonly items: readonly LineageItem[];
  readonly listed_all: boolean;
  /** last day on which the parcels as they stand are valid */
  readonly valid_to: string | null;
}
