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
  irrigate: boolean;
  runoff: boolean;
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
  irrigate: true,
  runoff: true,
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
    ...(isAtSites(settings.reference_et) ? { referenceEt: settings.reference_et } : {}),
  };
}

/** Whether the reference ET is carried from the sites; a planned run has its "automatic" settled. */
function isAtSites(setting: RunSettings['reference_et']): setting is SiteReferenceEt {
  return setting === 'given' || setting === 'hourly-sum' || setting === 'at-sites';
}
