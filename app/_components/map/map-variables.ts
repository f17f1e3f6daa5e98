/** What the demand map can show, and how each value is written. */
import type { UnitSystem } from '../../../lib/base/units.ts';
import type { MapDescription } from '../../../lib/http/contract/run.ts';
import { figure, inUnits, type Quantity, unitOf } from '../figures.ts';

export type ScaleName = 'irrigation' | 'et' | 'rain' | 'soil' | 'stress';

export interface MapVariable {
  readonly id: string;
  /** the stored array it is read from; volume is depth over the parcel's area */
  readonly source: string;
  readonly name: string;
  /** a fraction has no unit */
  readonly quantity: Quantity | 'fraction';
  /** how weeks make a longer period: summed, as at the end, or averaged over days */
  readonly over: 'sum' | 'end' | 'mean';
  readonly scale: ScaleName;
  /** zero is a statement of its own (no water asked for, no rain) and gets its own class */
  readonly zeroApart: boolean;
}

const VARIABLES: readonly MapVariable[] = [
  {
    id: 'gross_requirement',
    source: 'gross_requirement',
    name: 'Demand, depth',
    quantity: 'depth',
    over: 'sum',
    scale: 'irrigation',
    zeroApart: true,
  },
  {
    id: 'gross_volume',
    source: 'gross_requirement',
    name: 'Demand, volume',
    quantity: 'volume',
    over: 'sum',
    scale: 'irrigation',
    zeroApart: true,
  },
  {
    id: 'net_requirement',
    source: 'net_requirement',
    name: 'Net requirement',
    quantity: 'depth',
    over: 'sum',
    scale: 'irrigation',
    zeroApart: true,
  },
  { id: 'crop_et', source: 'crop_et', name: 'Crop ET', quantity: 'depth', over: 'sum', scale: 'et', zeroApart: true },
  {
    id: 'adjusted_crop_et',
    source: 'adjusted_crop_et',
    name: 'Crop ET, adjusted',
    quantity: 'depth',
    over: 'sum',
    scale: 'et',
    zeroApart: true,
  },
  { id: 'reference_et', source: 'reference_et', name: 'Reference ET', quantity: 'depth', over: 'sum', scale: 'et', zeroApart: false },
  { id: 'precipitation', source: 'precipitation', name: 'Rain', quantity: 'depth', over: 'sum', scale: 'rain', zeroApart: true },
  {
    id: 'effective_precipitation',
    source: 'effective_precipitation',
    name: 'Effective rain',
    quantity: 'depth',
    over: 'sum',
    scale: 'rain',
    zeroApart: true,
  },
  {
    id: 'root_zone_depletion',
    source: 'root_zone_depletion',
    name: 'Soil depletion',
    quantity: 'depth',
    over: 'end',
    scale: 'soil',
    zeroApart: false,
  },
  {
    id: 'depletion_share',
    source: 'depletion_share',
    name: 'Soil depletion, share',
    quantity: 'fraction',
    over: 'end',
    scale: 'soil',
    zeroApart: false,
  },
  {
    id: 'stress_coefficient',
    source: 'stress_coefficient',
    name: 'Stress coefficient',
    quantity: 'fraction',
    over: 'mean',
    scale: 'stress',
    zeroApart: false,
  },
  {
    id: 'estimated_share',
    source: 'estimated_share',
    name: 'Estimated weather, share of days',
    quantity: 'fraction',
    over: 'mean',
    scale: 'soil',
    zeroApart: true,
  },
];

/** The variables whose stored array this run offers. */
export function offeredVariables(description: MapDescription): MapVariable[] {
  const stored = new Map(description.variables.map((variable) => [variable.id, variable.aggregate]));
  return VARIABLES.filter((variable) => stored.has(variable.source)).map((variable) => ({
    ...variable,
    over: stored.get(variable.source) ?? variable.over,
  }));
}

/** A map value in the reader's unit. */
export function shownValue(value: number, variable: MapVariable, units: UnitSystem): number {
  return variable.quantity === 'fraction' ? value : inUnits(value, variable.quantity, units);
}

/** The reader's number back in the map's own unit; the inverse of `shownValue`. */
export function storedValue(shown: number, variable: MapVariable, units: UnitSystem): number {
  return shown / shownValue(1, variable, units);
}

export function writeValue(value: number, variable: MapVariable, units: UnitSystem): string {
  if (!Number.isFinite(value)) return '–';
  return variable.quantity === 'fraction' ? value.toFixed(2) : figure(value, variable.quantity, units);
}

export function unitOfVariable(variable: MapVariable, units: UnitSystem): string {
  return variable.quantity === 'fraction' ? '' : unitOf(variable.quantity, units);
}
