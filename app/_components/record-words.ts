/** Words for what is recorded at a parcel. */
import type { MeasurementAnswer } from '../../lib/http/contract/records.ts';

type Quantity = MeasurementAnswer['quantity'];

interface QuantityWords {
  readonly name: string;
  readonly unit: string;
  readonly decimals: number;
  /** whether it is of a depth of soil, and must say of which */
  readonly depth: 'needed' | 'optional' | 'none';
}

export const QUANTITIES: Readonly<Record<Quantity, QuantityWords>> = {
  water_content_m3_m3: { name: 'Water content of the soil', unit: 'm³/m³', decimals: 3, depth: 'needed' },
  root_zone_depletion_mm: { name: 'Depletion of the root zone', unit: 'mm', decimals: 1, depth: 'optional' },
  water_table_depth_m: { name: 'Depth of the water table', unit: 'm', decimals: 2, depth: 'none' },
  soil_salinity_ds_m: { name: 'Salinity of the soil, ECe', unit: 'dS/m', decimals: 2, depth: 'none' },
  water_salinity_ds_m: { name: 'Salinity of the water, ECw', unit: 'dS/m', decimals: 2, depth: 'none' },
  efficiency: { name: 'Application efficiency', unit: 'fraction', decimals: 2, depth: 'none' },
};
