/** Words for the state and the settings of a run. */
export const STATES = { queued: 'waiting', running: 'running', done: 'done', failed: 'failed', cancelled: 'called off' } as const;
export type RunStateName = keyof typeof STATES;

export function isOver(state: string): boolean {
  return state === 'done' || state === 'failed' || state === 'cancelled';
}

export interface SettingWords {
  readonly key: string;
  readonly name: string;
  readonly help: string;
}

/** Every setting of a run, named and explained, in the order of the form. */
export const SETTINGS: readonly SettingWords[] = [
  {
    key: 'method',
    name: 'Reference ET',
    help: 'Which published combination equation drives the crops. Both are for a short (grass) surface, to which the crop library belongs.',
  },
  {
    key: 'interpolation',
    name: 'Weather at a parcel',
    help: 'How the sites around a parcel make its weather; automatic takes, for each variable, the way with the lowest error in the check under Weather, Interpolation.',
  },
  {
    key: 'elevation_trend',
    name: 'Change with elevation',
    help: 'Moves a site’s value to the parcel’s elevation: temperature by the lapse rate, every variable but rain by the slope its own sites show, or not at all; automatic weather chooses this too.',
  },
  {
    key: 'power',
    name: 'Power of the distance',
    help: 'How fast a site’s weight falls with distance. 2 is usual; a greater power leans on the nearest site.',
  },
  {
    key: 'reference_et',
    name: 'Where reference ET is computed',
    help: 'At the parcels from the weather brought there, or at the sites (or cells) and then carried to the parcels; or taken as the source gives it, or summed over hours. Automatic: at the parcels for stations, at the cells for a grid, as given for a source without temperature.',
  },
  {
    key: 'fill_gaps',
    name: 'Fill gaps',
    help: 'Fills what a site did not measure from its neighbours, from other sources and from normals, each within its limits; see Weather, Gaps. Off leaves only the published estimates, and a site without temperature carries no weight that day.',
  },
  { key: 'maximum_sites', name: 'Sites per parcel, at most', help: 'The nearest so many sites share a parcel’s weather (1 to 8).' },
  {
    key: 'lapse_rate_c_per_m',
    name: 'Temperature lapse, °C per metre',
    help: 'Cools or warms a site’s temperature to the parcel’s elevation. 0.0065 is the international standard atmosphere; 0 switches it off.',
  },
  {
    key: 'initial_depletion',
    name: 'Soil water at the start',
    help: 'How much of the water that the root zone can hold is gone on the first day, 0 (full) to 1 (empty).',
  },
  { key: 'irrigate', name: 'Irrigate', help: 'Off computes the season rain-fed: no requirement, only what the crops would lack.' },
  { key: 'runoff', name: 'Rain runs off', help: 'Uses the runoff curve number of a soil that has one. Off lets all rain enter the soil.' },
  { key: 'default_soil', name: 'Soil where none is given', help: 'Taken for parcels without a soil.' },
  {
    key: 'default_method',
    name: 'Application method where none is given',
    help: 'Taken for parcels without one; its efficiency turns the net into the gross requirement.',
  },
  {
    key: 'source',
    name: 'Weather source',
    help: 'One source by its name; left open, all stations of the district, or its first grid where there are no stations.',
  },
];

export function settingText(value: unknown): string {
  if (value === null || value === undefined) return 'the stations, or the first grid';
  if (typeof value === 'boolean') return value ? 'yes' : 'no';
  if (value === 'fao56') return 'FAO-56 Penman–Monteith (Eq. 6)';
  if (value === 'asce2005') return 'ASCE 2005 standardized, short surface';
  if (value === 'inverse-distance') return 'weighted by inverse distance';
  if (value === 'nearest') return 'the nearest site';
  if (value === 'automatic') return 'automatic';
  if (value === 'bilinear') return 'between the four grid cells around it';
  if (value === 'kriging') return 'ordinary kriging';
  if (value === 'lapse-rate') return 'temperature by the lapse rate';
  if (value === 'fitted') return 'slope fitted to the sites';
  if (value === 'none') return 'none';
  if (value === 'at-parcels') return 'at the parcels';
  if (value === 'at-sites') return 'at the sites or cells';
  if (value === 'given') return 'as the source gives it';
  if (value === 'hourly-sum') return 'sum over the hours';
  return String(value);
}
