/** The working of what the parcel itself brings to a planting: salt in soil and water, and a water table. */
import { quantity } from '../base/working.ts';
import { leachingRequirement } from '../crop/salinity.ts';
import { datedValue } from './capillary.ts';
import type { PackedSeason } from './pack.ts';
import type { ParcelInput, Planting, WorkingStep } from './types.ts';

/** Steps to Ks of salinity and to the leaching requirement, for a crop with a known tolerance in a run with salt. */
export function saltSteps(season: PackedSeason, parcel: ParcelInput, { crop }: Planting, day: number): WorkingStep[] {
  const asked = season.input.settings.salinity ?? 'off';
  const { salinity } = parcel;
  if (asked === 'off' || !salinity || !crop.salinity) return [];
  const { threshold, slope } = crop.salinity;
  const response = Number.isNaN(crop.yieldResponse) ? 1 : crop.yieldResponse;
  const limit = quantity('ECt', threshold, 'dS m⁻¹');
  const stress: WorkingStep = {
    part: 'coefficient',
    symbol: 'Ks,salt',
    name: 'Stress of the salt in the soil',
    expression: 'Ks,salt = min(1, max(0, 1 − b · (ECe − ECt) / (100 · Ky))); Ky is 1 where none is listed',
    inputs: [quantity('b', slope, '% per dS m⁻¹'), quantity('ECe', salinity.soil, 'dS m⁻¹'), limit, quantity('Ky', response, '1')],
    result: season.curve.saltStress[day],
    unit: '1',
    source: 'FAO-56 Eq. 91; ECt and b of Table 23',
  };
  if (asked !== 'stress-and-leaching') return [stress];
  const leaching: WorkingStep = {
    part: 'irrigation',
    symbol: 'LR',
    name: 'Leaching requirement',
    expression: 'LR = ECw / (5 · ECt − ECw), held in 0 … 0.9',
    inputs: [quantity('ECw', salinity.water, 'dS m⁻¹'), limit],
    result: leachingRequirement(salinity.water, threshold),
    unit: '1',
    source: 'FAO-29 rev. 1, Eq. 9 (recalled), with the soil at the crop’s threshold',
  };
  return [stress, leaching];
}

/** Step to the most that rises from the water table under the parcel, where it has one. */
export function riseSteps(season: PackedSeason, parcel: ParcelInput, day: number): WorkingStep[] {
  const { capillary } = parcel.soil;
  if (!season.input.settings.capillaryRise || !capillary || !parcel.waterTable) return [];
  const table = datedValue(parcel.waterTable, day);
  const rootDepth = season.curve.rootDepth[day];
  const conductivity = quantity('Ksat', capillary.conductivity, 'mm d⁻¹');
  const depths = [quantity('zt', table, 'm'), quantity('Zr', rootDepth, 'm')];
  const common = {
    part: 'root-zone',
    symbol: 'CRmax',
    name: 'Most that rises from the water table',
    result: season.curve.capillaryMost[day],
    unit: 'mm d⁻¹',
    source: 'Gardner 1958; Eagleson 1978 (recalled)',
  };
  if (table <= rootDepth)
    return [{ ...common, expression: 'CRmax = Ksat; the table stands in the root zone', inputs: [conductivity, ...depths] }];
  const expression = 'CRmax = min(Ksat, Ksat · (1 + 1.5 / (n − 1)) · (ψb / (zt − Zr))^n); n = 2 + 3 / b of the soil';
  const shape = [quantity('n', 2 + 3 / capillary.exponent, '1'), quantity('ψb', capillary.bubblingHead, 'm')];
  return [{ ...common, expression, inputs: [conductivity, ...shape, ...depths] }];
}
