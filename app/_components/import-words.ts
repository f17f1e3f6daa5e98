/** Words for the states and figures of an import. */
import type { ImportAnswer } from '../../lib/http/contract/rest.ts';

export type ImportStateName = ImportAnswer['state'];

export const IMPORT_STATES: Readonly<Record<ImportStateName, { readonly name: string; readonly tone: '' | 'good' | 'caution' | 'bad' }>> = {
  reading: { name: 'being read', tone: '' },
  ready: { name: 'ready to apply', tone: 'caution' },
  applying: { name: 'being applied', tone: '' },
  applied: { name: 'applied', tone: 'good' },
  undoing: { name: 'being undone', tone: '' },
  undone: { name: 'undone', tone: '' },
  cancelled: { name: 'cancelled', tone: '' },
  failed: { name: 'failed', tone: 'bad' },
};

export function isWorking(state: ImportStateName): boolean {
  return state === 'reading' || state === 'applying' || state === 'undoing';
}

/** True while there is something to wait for: also the runs that follow an import, which are asked for just after it. */
export function isGoingOn({ state, understood }: Pick<ImportAnswer, 'state' | 'understood'>): boolean {
  if (isWorking(state)) return true;
  const outcome = state === 'applied' || state === 'undone' ? (understood?.[state] as { runs?: unknown } | undefined) : undefined;
  return outcome !== undefined && outcome.runs === null;
}

/** @example countWords({ error: 2, warning: 0, note: 1 }) // '2 errors, 1 note' */
export function countWords(counts: ImportAnswer['finding_counts']): string {
  const parts = (['error', 'warning', 'note'] as const)
    .filter((one) => counts[one] > 0)
    .map((one) => `${counts[one]} ${one}${counts[one] === 1 ? '' : 's'}`);
  return parts.join(', ') || 'nothing found at fault';
}

const THINGS: Readonly<Record<string, string>> = {
  sites: 'Stations',
  cells: 'Grid cells',
  weather_blocks: 'Months of weather, by variable',
  reaches: 'Reaches',
  turnouts: 'Turnouts',
  areas: 'Service areas',
  soil_areas: 'Soil polygons',
  parcels: 'Parcels',
  parcel_history: 'Earlier shapes kept',
  soils: 'Soils',
  plantings: 'Parcels with plantings',
  crop_mappings: 'Crop codes remembered',
  images: 'Parcels and days seen by images',
  deliveries: 'Parcels and days of deliveries',
  measurements: 'Days of measurements',
};

/** What an applied import changed, one row per thing, without what did not change. */
export function changesOf(
  applied: Readonly<Record<string, unknown>>,
): { thing: string; added: number; changed: number; removed: number }[] {
  return Object.entries(THINGS)
    .map(([key, thing]) => ({
      thing,
      added: Number(applied[`${key}_added`] ?? 0),
      changed: Number(applied[`${key}_changed`] ?? 0),
      removed: Number(applied[`${key}_removed`] ?? 0),
    }))
    .filter((row) => row.added + row.changed + row.removed > 0);
}

/** @example sizeWords(2500000) // '2.5 MB' */
export function sizeWords(bytes: number): string {
  if (bytes < 1000) return `${bytes} bytes`;
  return bytes < 1e6 ? `${Math.round(bytes / 1000)} kB` : `${(bytes / 1e6).toFixed(1)} MB`;
}
