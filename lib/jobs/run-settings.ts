/** The settings of a run with their defaults, in the form the API speaks; conversions into the numeric rooms' form. */
import type { SeasonSettings, SiteReferenceEt } from '../season/types.ts';

export interface RunSettings {
  method: 'fao56' | 'asce2005';
  interpolation: 'automatic' | 'nearest' | 'inverse-distance' | 'bilinear' | 'kriging';
  /** how a site's value is moved to the parcel's elevation; with automatic interpolation the trend is chosen with the method */
  elevation_trend: 'lapse-rate' | 'fitted' | 'none';
  power: number;
  maximum_sites: number;
  /** where the reference ET that drives the crops is computed, or taken from */
  reference_et: 'automatic' | 'at-parcels' | 'at-sites' | 'given' | 'hourly-sum';
  /** gaps of a site are filled from neighbours, other sources and normals before the published estimates */
  fill_gaps: boolean;
  lapse_rate_c_per_m: number;
  initial_depletion: number;
  /** how the soil begins: at `initial_depletion`, as measured, as the season before left it, or after a spin-up */
  initial_state: 'fraction' | 'measured' | 'carry-over' | 'spin-up';
  /** days stepped before the season when the soil is spun up */
  spin_up_days: number;
  coefficient: 'dual' | 'single';
  irrigate: boolean;
  /** water as each planting's rule asks, as recorded, or as recorded to date and by the rule from then on */
  water: 'rule' | 'recorded' | 'recorded-then-rule';
  runoff: boolean;
  antecedent_moisture: 'average' | 'five-day-rain' | 'surface-layer';
  snow: boolean;
  frozen_ground: boolean;
  capillary_rise: boolean;
  salinity: 'off' | 'stress' | 'stress-and-leaching';
  /** of the irrigation water where a parcel has none of its own [dS m⁻¹] */
  water_salinity_ds_m: number;
  fallow: 'bare' | 'weeds';
  /** vegetation index or cover from images replaces the curve where a parcel has any */
  observed_cover: boolean;
  /** days past the last observation: none, by forecast where there is one and then the normal of the day, or then an analogue year */
  ahead: 'refuse' | 'normal' | 'analogue';
  analogue_year: number | null;
  /** name of the forecast source; null takes the district's first */
  forecast_source: string | null;
  /** members of the band; 0 for none */
  band_members: number;
  band_seed: number;
  default_soil: string;
  default_method: string;
  source: string | null;
}

export const DEFAULT_RUN_SETTINGS: RunSettings = {
  method: 'fao56',
  interpolation: 'inverse-distance',
  elevation_trend: 'lapse-rate',
  power: 2,
  maximum_sites: 6,
  reference_et: 'automatic',
  fill_gaps: true,
  lapse_rate_c_per_m: 0.0065,
  initial_depletion: 0.3,
  initial_state: 'fraction',
  spin_up_days: 365,
  coefficient: 'dual',
  irrigate: true,
  water: 'rule',
  runoff: true,
  antecedent_moisture: 'average',
  snow: false,
  frozen_ground: false,
  capillary_rise: false,
  salinity: 'off',
  water_salinity_ds_m: 1,
  fallow: 'bare',
  observed_cover: false,
  ahead: 'normal',
  analogue_year: null,
  forecast_source: null,
  band_members: 0,
  band_seed: 1,
  default_soil: 'loam',
  default_method: 'furrow',
  source: null,
};

export function seasonSettings(settings: RunSettings): SeasonSettings {
  return {
    method: settings.method,
    initialDepletion: settings.initial_depletion,
    lapseRate: settings.elevation_trend === 'none' ? 0 : settings.lapse_rate_c_per_m,
    irrigate: settings.irrigate,
    runoff: settings.runoff,
    coefficient: settings.coefficient,
    antecedentMoisture: settings.antecedent_moisture,
    snow: settings.snow,
    frozenGround: settings.frozen_ground,
    capillaryRise: settings.capillary_rise,
    salinity: settings.salinity,
    water: settings.water,
    fallow: settings.fallow,
    ...(isAtSites(settings.reference_et) ? { referenceEt: settings.reference_et } : {}),
  };
}

/** Whether the reference ET is carried from the sites; a planned run has its "automatic" settled. */
function isAtSites(setting: RunSettings['reference_et']): setting is SiteReferenceEt {
  return setting === 'given' || setting === 'hourly-sum' || setting === 'at-sites';
}
