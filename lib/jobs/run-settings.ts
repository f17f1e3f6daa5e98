/** The settings of a run with their defaults, in the form the API speaks; conversions into the numeric rooms' form. */
import type { SeasonSettings } from '../season/types.ts';

export interface RunSettings {
  method: 'fao56' | 'asce2005';
  interpolation: 'inverse-distance' | 'nearest';
  power: number;
  maximum_sites: number;
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
  power: 2,
  maximum_sites: 6,
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
    lapseRate: settings.lapse_rate_c_per_m,
    irrigate: settings.irrigate,
    runoff: settings.runoff,
  };
}
