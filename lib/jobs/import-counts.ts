/** What an import changed, in numbers: `parcels_added`, `sites_changed`, `weather_blocks_changed` … */
export type ApplyCounts = Record<string, number>;

/** Which seasons an import may bear on. */
export interface Touched {
  /** true: land, stations or soils changed, which every season rests on */
  readonly everything: boolean;
  /** months of changed weather, YYYY-MM-01 */
  readonly months: readonly string[];
  readonly seasons: readonly string[];
}

export function countsChanged(counts: ApplyCounts): boolean {
  return Object.values(counts).some((count) => count > 0);
}
