/**
 * Season totals by canal, crop or method.
 */
import { depthToVolume, volumeToDepth } from '../base/units.ts';
import type { ParcelPeriodRow } from './parcel-period-row.ts';

/** One group of parcels. Depths are means over the group's area [mm]. */
export interface SummaryRow {
  readonly name: string;
  readonly parcelCount: number;
  /** m² */
  readonly area: number;
  readonly cropEt: number;
  readonly adjustedCropEt: number;
  readonly precipitation: number;
  readonly effectivePrecipitation: number;
  readonly netRequirement: number;
  readonly grossRequirement: number;
  /** m³ */
  readonly netVolume: number;
  readonly grossVolume: number;
}

const DEPTHS = ['cropEt', 'adjustedCropEt', 'precipitation', 'effectivePrecipitation', 'netRequirement', 'grossRequirement'] as const;

/**
 * Sums parcels into groups, largest gross volume first. A parcel with NaN makes its own group NaN in that column, no other.
 *
 * @param groupOf name of the group a row belongs to
 */
export function summarise(rows: readonly ParcelPeriodRow[], groupOf: (row: ParcelPeriodRow) => string): SummaryRow[] {
  const groups = new Map<string, ParcelPeriodRow[]>();
  for (const row of rows) {
    const name = groupOf(row);
    const members = groups.get(name);
    if (members) members.push(row);
    else groups.set(name, [row]);
  }
  const size = ({ grossVolume }: SummaryRow) => (Number.isNaN(grossVolume) ? -1 : grossVolume);
  return [...groups].map(([name, members]) => summaryOf(name, members)).sort((a, b) => size(b) - size(a) || (a.name < b.name ? -1 : 1));
}

/** All rows as one group. */
export function summaryOf(name: string, members: readonly ParcelPeriodRow[]): SummaryRow {
  const parcelAreas = new Map(members.map((row) => [row.parcel, row.area]));
  const area = [...parcelAreas.values()].reduce((sum, each) => sum + each, 0);
  const volume = (of: (typeof DEPTHS)[number]) => members.reduce((sum, row) => sum + depthToVolume(row[of], row.area), 0);
  const depths = Object.fromEntries(DEPTHS.map((of) => [of, volumeToDepth(volume(of), area)])) as Record<(typeof DEPTHS)[number], number>;
  return {
    name,
    parcelCount: parcelAreas.size,
    area,
    ...depths,
    netVolume: volume('netRequirement'),
    grossVolume: volume('grossRequirement'),
  };
}
