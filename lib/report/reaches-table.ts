/**
 * Flow of each reach over each period, as a table.
 */
import type { UnitSystem } from '../base/units.ts';
import type { CapacityStatus } from '../canal/reach-period.ts';
import { type ColumnPlan, type TableDocument, tableOf } from './table.ts';

/** One reach over one period: volumes [m³], flows and capacity [m³ s⁻¹], NaN where not known. */
export interface ReachPeriodRow {
  readonly reach: string;
  readonly name: string;
  readonly parent: string | null;
  readonly kind: string;
  readonly start: string;
  readonly end: string;
  readonly turnoutDemand: number;
  readonly demandBelow: number;
  readonly loss: number;
  readonly headInflow: number;
  readonly meanFlow: number;
  readonly peakFlow: number;
  readonly capacity: number;
  /** peak and mean flow over capacity, 0–1 and above */
  readonly capacityShare: number;
  readonly meanShare: number;
  readonly status: CapacityStatus | null;
}

const PLANS: readonly ColumnPlan<ReachPeriodRow>[] = [
  { name: 'reach', header: 'Reach', quantity: 'text', value: (row) => row.reach },
  { name: 'name', header: 'Name', quantity: 'text', value: (row) => row.name },
  { name: 'parent', header: 'Fed by', quantity: 'text', value: (row) => row.parent },
  { name: 'kind', header: 'Kind', quantity: 'text', value: (row) => row.kind },
  { name: 'start_date', header: 'From', quantity: 'text', value: (row) => row.start },
  { name: 'end_date', header: 'To', quantity: 'text', value: (row) => row.end },
  { name: 'turnout_demand', header: 'Turnout demand', quantity: 'm3', value: (row) => row.turnoutDemand },
  { name: 'demand_below', header: 'Demand below', quantity: 'm3', value: (row) => row.demandBelow },
  { name: 'reach_loss', header: 'Loss', quantity: 'm3', value: (row) => row.loss },
  { name: 'head_inflow', header: 'Head inflow', quantity: 'm3', value: (row) => row.headInflow },
  { name: 'mean_flow', header: 'Mean flow', quantity: 'm3_s', value: (row) => row.meanFlow },
  { name: 'peak_flow', header: 'Peak flow', quantity: 'm3_s', value: (row) => row.peakFlow },
  { name: 'capacity', header: 'Capacity', quantity: 'm3_s', value: (row) => row.capacity },
  { name: 'capacity_share', header: 'Busiest week of capacity', quantity: 'percent', value: (row) => row.capacityShare },
  { name: 'mean_share', header: 'Mean of capacity', quantity: 'percent', value: (row) => row.meanShare },
  { name: 'status', header: 'Status', quantity: 'text', value: (row) => row.status },
];

/** Table of reaches and periods in the reader's units. */
export function reachesTable(rows: readonly ReachPeriodRow[], units: UnitSystem): TableDocument {
  return tableOf('Canal flow', PLANS, rows, units);
}
