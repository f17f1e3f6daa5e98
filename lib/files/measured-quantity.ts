/**
 * What can be measured at a parcel: the name of each quantity in files, its unit and its limits.
 */
import type { StagedMeasurement } from './reading.ts';
import { type TableRole, tableRoleOf } from './table-columns.ts';
import type { UnitKind } from './unit.ts';

export type Quantity = StagedMeasurement['quantity'];

export interface MeasuredRole {
  readonly role: string;
  readonly quantity: Quantity;
  /** names, the preferred one first */
  readonly names: readonly string[];
  readonly kind: UnitKind;
  /** in the inside unit of the kind; shares up to `percent.most` are fractions */
  readonly limits: { readonly low: number; readonly high: number; readonly unit: string };
  /** depth of the soil it holds for */
  readonly depth: 'needed' | 'optional' | 'none';
  /** shares: the largest fraction, and the smallest percentage */
  readonly percent?: { readonly most: number; readonly least: number };
}

/** Limits catch slips of unit and column; they are wider than what fields show. Common practice, no source. */
export const MEASURED: Readonly<Record<Quantity, MeasuredRole>> = {
  water_content_m3_m3: {
    role: 'water_content',
    quantity: 'water_content_m3_m3',
    names: ['water content', 'volumetric water content', 'vwc', 'theta', 'soil moisture', 'soil water content', 'moisture'],
    kind: 'share',
    limits: { low: 0.005, high: 90, unit: '% by volume (or the fraction)' },
    depth: 'needed',
    percent: { most: 0.9, least: 1 },
  },
  root_zone_depletion_mm: {
    role: 'depletion',
    quantity: 'root_zone_depletion_mm',
    names: ['depletion', 'root zone depletion', 'dr', 'deficit', 'soil water deficit', 'smd'],
    kind: 'depth',
    limits: { low: 0, high: 1000, unit: 'mm' },
    depth: 'optional',
  },
  water_table_depth_m: {
    role: 'water_table',
    quantity: 'water_table_depth_m',
    names: ['water table', 'water table depth', 'depth to water', 'groundwater depth', 'depth to groundwater'],
    kind: 'length',
    limits: { low: 0, high: 200, unit: 'm below the surface' },
    depth: 'none',
  },
  soil_salinity_ds_m: {
    role: 'soil_salinity',
    quantity: 'soil_salinity_ds_m',
    names: ['soil salinity', 'ece', 'ec e', 'soil ec', 'saturation extract'],
    kind: 'conductivity',
    limits: { low: 0, high: 100, unit: 'dS/m' },
    depth: 'none',
  },
  water_salinity_ds_m: {
    role: 'water_salinity',
    quantity: 'water_salinity_ds_m',
    names: ['water salinity', 'ecw', 'eciw', 'ec w', 'water ec', 'irrigation water salinity'],
    kind: 'conductivity',
    limits: { low: 0, high: 20, unit: 'dS/m' },
    depth: 'none',
  },
  efficiency: {
    role: 'efficiency',
    quantity: 'efficiency',
    names: ['efficiency', 'application efficiency', 'ea'],
    kind: 'share',
    limits: { low: 0.05, high: 100, unit: '% (or the fraction)' },
    depth: 'none',
    percent: { most: 1, least: 5 },
  },
};

const ROLES: readonly TableRole[] = Object.values(MEASURED).map(({ role, names, kind }) => ({ role, names, kind }));

/** The quantity that a text names, with a unit written in it, or null; also by its name in the API. @example measuredRoleNamed('ECe')?.measured.role // 'soil_salinity' */
export function measuredRoleNamed(text: string): { measured: MeasuredRole; unitText: string | null } | null {
  if (Object.hasOwn(MEASURED, text)) return { measured: MEASURED[text as Quantity], unitText: null };
  const match = tableRoleOf(text, ROLES);
  const measured = match && Object.values(MEASURED).find(({ role }) => role === match.role.role);
  return match && measured ? { measured, unitText: match.unitText } : null;
}
