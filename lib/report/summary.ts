/**
 * Season totals by canal, crop or method.
 */
import type { UnitSystem } from '../base/units.ts';
import { depthToVolume, volumeToDepth } from '../base/units.ts';
import type { ParcelPeriodRow } from './parcels-table.ts';
import { type ColumnPlan, type TableDocument, tableOf } from './table.ts';

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

const PLANS: readonly ColumnPlan<SummaryRow>[] = [
  { name: 'parcels', header: 'Parcels', quantity: 'plain', value: (row) => row.parcelCount },
  { name: 'area', header: 'Area', quantity: 'm2', value: (row) => row.area },
  { name: 'crop_et', header: 'Crop ET', quantity: 'mm', value: (row) => row.cropEt },
  { name: 'adjusted_crop_et', header: 'Crop ET, adjusted', quantity: 'mm', value: (row) => row.adjustedCropEt },
  { name: 'precipitation', header: 'Rain', quantity: 'mm', value: (row) => row.precipitation },
  { name: 'effective_precipitation', header: 'Effective rain', quantity: 'mm', value: (row) => row.effectivePrecipitation },
  { name: 'net_requirement', header: 'Net requirement', quantity: 'mm', value: (row) => row.netRequirement },
  { name: 'gross_requirement', header: 'Gross requirement', quantity: 'mm', value: (row) => row.grossRequirement },
  { name: 'net_requirement_volume', header: 'Net volume', quantity: 'm3', value: (row) => row.netVolume },
  { name: 'gross_requirement_volume', header: 'Gross volume', quantity: 'm3', value: (row) => row.grossVolume },
];

/** @param by what the groups are, as a column header: `Canal`, `Crop` */
export function summaryTable(by: string, rows: readonly SummaryRow[], units: UnitSystem): TableDocument {
  const first: ColumnPlan<SummaryRow> = { name: by.toLowerCase(), header: by, quantity: 'text', value: (row) => row.name };
  return tableOf(`Water requirement by ${by.toLowerCase()}`, [first, ...PLANS], rows, units);
}
