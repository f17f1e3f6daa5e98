/**
 * Water of each parcel over each period, as a table.
 */
import type { UnitSystem } from '../base/units.ts';
import { type ColumnPlan, type TableDocument, tableOf } from './table.ts';

/** One parcel over one period. Depths are sums over the parcel's area [mm]; NaN where not computed. */
export interface ParcelPeriodRow {
  readonly parcel: string;
  readonly turnout: string | null;
  readonly reach: string | null;
  /** names of the crops, in order of planting */
  readonly crops: readonly string[];
  readonly method: string;
  readonly soil: string;
  /** m² */
  readonly area: number;
  readonly start: string;
  readonly end: string;
  readonly referenceEt: number;
  readonly cropEt: number;
  readonly adjustedCropEt: number;
  readonly precipitation: number;
  readonly effectivePrecipitation: number;
  readonly netRequirement: number;
  readonly grossRequirement: number;
  readonly deepPercolation: number;
  /** at the end of the period [mm] */
  readonly rootZoneDepletion: number;
  /** mean of the days, 0–1 */
  readonly stressCoefficient: number;
  /** gross requirement [m³] */
  readonly grossVolume: number;
}

const PLANS: readonly ColumnPlan<ParcelPeriodRow>[] = [
  { name: 'parcel', header: 'Parcel', quantity: 'text', value: (row) => row.parcel },
  { name: 'turnout', header: 'Turnout', quantity: 'text', value: (row) => row.turnout },
  { name: 'reach', header: 'Reach', quantity: 'text', value: (row) => row.reach },
  { name: 'crops', header: 'Crops', quantity: 'text', value: (row) => row.crops.join('; ') },
  { name: 'method', header: 'Method', quantity: 'text', value: (row) => row.method },
  { name: 'soil', header: 'Soil', quantity: 'text', value: (row) => row.soil },
  { name: 'area', header: 'Area', quantity: 'm2', value: (row) => row.area },
  { name: 'start_date', header: 'From', quantity: 'text', value: (row) => row.start },
  { name: 'end_date', header: 'To', quantity: 'text', value: (row) => row.end },
  { name: 'reference_et', header: 'Reference ET', quantity: 'mm', value: (row) => row.referenceEt },
  { name: 'crop_et', header: 'Crop ET', quantity: 'mm', value: (row) => row.cropEt },
  { name: 'adjusted_crop_et', header: 'Crop ET, adjusted', quantity: 'mm', value: (row) => row.adjustedCropEt },
  { name: 'precipitation', header: 'Rain', quantity: 'mm', value: (row) => row.precipitation },
  { name: 'effective_precipitation', header: 'Effective rain', quantity: 'mm', value: (row) => row.effectivePrecipitation },
  { name: 'net_requirement', header: 'Net requirement', quantity: 'mm', value: (row) => row.netRequirement },
  { name: 'gross_requirement', header: 'Gross requirement', quantity: 'mm', value: (row) => row.grossRequirement },
  { name: 'deep_percolation', header: 'Deep percolation', quantity: 'mm', value: (row) => row.deepPercolation },
  { name: 'root_zone_depletion', header: 'Depletion at end', quantity: 'mm', value: (row) => row.rootZoneDepletion },
  { name: 'stress_coefficient', header: 'Stress coefficient', quantity: 'plain', value: (row) => row.stressCoefficient },
  { name: 'gross_requirement_volume', header: 'Gross volume', quantity: 'm3', value: (row) => row.grossVolume },
];

/** Table of parcels and periods in the reader's units. */
export function parcelsTable(rows: readonly ParcelPeriodRow[], units: UnitSystem): TableDocument {
  return tableOf('Parcel water requirement', PLANS, rows, units);
}
