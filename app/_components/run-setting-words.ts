/** Every setting of a run: its words, and its control in the form. */

export const SETTING_GROUPS = [
  { id: 'weather', name: 'Weather' },
  { id: 'start', name: 'Soil water at the start' },
  { id: 'water', name: 'Irrigation water' },
  { id: 'crops', name: 'Crops' },
  { id: 'ground', name: 'Rain, snow and the ground' },
  { id: 'salt', name: 'Salt' },
  { id: 'ahead', name: 'Days ahead' },
  { id: 'band', name: 'How sure the numbers are' },
  { id: 'defaults', name: 'Where a parcel says nothing' },
] as const;

export type SettingGroup = (typeof SETTING_GROUPS)[number]['id'];

/** How a setting is asked for; `usual` is the value of the API where nothing is said. */
export type SettingControl =
  | { readonly kind: 'check'; readonly usual: boolean }
  | {
      readonly kind: 'number';
      readonly usual: string;
      readonly min: number;
      readonly max: number;
      readonly step: number | 'any';
      /** may be left empty */
      readonly optional?: boolean;
    }
  | { readonly kind: 'choice'; readonly usual: string; readonly values: readonly string[] }
  /** one of what the district has; `open` is the word for none named */
  | { readonly kind: 'named'; readonly usual: string; readonly of: 'sources' | 'forecasts' | 'soils' | 'methods'; readonly open?: string };

export interface SettingWords {
  readonly key: string;
  readonly group: SettingGroup;
  readonly name: string;
  readonly help: string;
  readonly control: SettingControl;
}

const check = (usual: boolean): SettingControl => ({ kind: 'check', usual });
const choice = (...values: readonly string[]): SettingControl => ({ kind: 'choice', usual: values[0], values });
const number = (usual: string, min: number, max: number, step: number | 'any'): SettingControl => ({
  kind: 'number',
  usual,
  min,
  max,
  step,
});

/** In the order of the form. */
export const SETTINGS: readonly SettingWords[] = [
  {
    key: 'source',
    group: 'weather',
    name: 'Weather source',
    help: 'One source by its name; left open, all stations of the district, or its first grid where there are no stations.',
    control: { kind: 'named', usual: '', of: 'sources', open: 'every source' },
  },
  {
    key: 'method',
    group: 'weather',
    name: 'Reference ET',
    help: 'Which published combination equation drives the crops. Both are for a short (grass) surface, to which the crop library belongs.',
    control: choice('fao56', 'asce2005'),
  },
  {
    key: 'reference_et',
    group: 'weather',
    name: 'Where reference ET is computed',
    help: 'At the parcels from the weather brought there, or at the sites (or cells) and then carried to the parcels; or taken as the source gives it, or summed over hours. Automatic: at the parcels for stations, at the cells for a grid, as given for a source without temperature.',
    control: choice('automatic', 'at-parcels', 'at-sites', 'given', 'hourly-sum'),
  },
  {
    key: 'interpolation',
    group: 'weather',
    name: 'Weather at a parcel',
    help: 'How the sites around a parcel make its weather; automatic takes, for each variable, the way with the lowest error in the check under Weather, Interpolation.',
    control: choice('', 'automatic', 'inverse-distance', 'nearest', 'kriging', 'bilinear'),
  },
  {
    key: 'elevation_trend',
    group: 'weather',
    name: 'Change with elevation',
    help: 'Moves a site’s value to the parcel’s elevation: temperature by the lapse rate, every variable but rain by the slope its own sites show, or not at all; automatic weather chooses this too.',
    control: choice('lapse-rate', 'fitted', 'none'),
  },
  {
    key: 'lapse_rate_c_per_m',
    group: 'weather',
    name: 'Temperature lapse, °C per metre',
    help: 'Cools or warms a site’s temperature to the parcel’s elevation. 0.0065 is the international standard atmosphere; 0 switches it off.',
    control: number('0.0065', 0, 0.012, 'any'),
  },
  {
    key: 'power',
    group: 'weather',
    name: 'Power of the distance',
    help: 'How fast a site’s weight falls with distance. 2 is usual; a greater power leans on the nearest site.',
    control: number('2', 0.5, 6, 0.5),
  },
  {
    key: 'maximum_sites',
    group: 'weather',
    name: 'Sites per parcel, at most',
    help: 'The nearest so many sites share a parcel’s weather (1 to 8).',
    control: number('6', 1, 8, 1),
  },
  {
    key: 'fill_gaps',
    group: 'weather',
    name: 'Fill gaps',
    help: 'Fills what a site did not measure from its neighbours, from other sources and from normals, each within its limits; see Weather, Gaps. Off leaves only the published estimates, and a site without temperature carries no weight that day.',
    control: check(true),
  },
  {
    key: 'initial_state',
    group: 'start',
    name: 'How the soil begins',
    help: 'At the share below; as measured within 14 days before the season, where a parcel was; as the season before left it; or after days stepped before the season. A parcel without a measurement begins at the share below.',
    control: choice('fraction', 'measured', 'carry-over', 'spin-up'),
  },
  {
    key: 'initial_depletion',
    group: 'start',
    name: 'Soil water missing at the start',
    help: 'How much of the water that the root zone can hold is gone on the first day, 0 (full) to 1 (empty). Used wherever nothing better is known.',
    control: number('0.3', 0, 1, 0.05),
  },
  {
    key: 'spin_up_days',
    group: 'start',
    name: 'Days before the season (d)',
    help: 'So many days are stepped before the season when the soil is spun up (30 to 400); fewer where weather is missing.',
    control: number('365', 30, 400, 1),
  },
  {
    key: 'irrigate',
    group: 'water',
    name: 'Irrigate',
    help: 'Off computes the season rain-fed: no requirement, only what the crops would lack.',
    control: check(true),
  },
  {
    key: 'water',
    group: 'water',
    name: 'Where the water comes from',
    help: 'As the crops ask, by the rule of each planting; as the deliveries recorded; or as recorded up to the last day on which the district has any delivery, and by the rule from the next day on.',
    control: choice('rule', 'recorded', 'recorded-then-rule'),
  },
  {
    key: 'coefficient',
    group: 'crops',
    name: 'Crop coefficient',
    help: 'Two parts, crop and wet soil apart (FAO-56 chapter 7), follow each rain and irrigation; the single one (chapter 6) averages over them.',
    control: choice('dual', 'single'),
  },
  {
    key: 'observed_cover',
    group: 'crops',
    name: 'Cover from images',
    help: 'Where a parcel was seen by images of plant cover, they take the place of the crop curve.',
    control: check(false),
  },
  {
    key: 'fallow',
    group: 'crops',
    name: 'Ground between crops',
    help: 'Bare, or under weeds that use water.',
    control: choice('bare', 'weeds'),
  },
  {
    key: 'runoff',
    group: 'ground',
    name: 'Rain runs off',
    help: 'Uses the runoff curve number of a soil that has one. Off lets all rain enter the soil.',
    control: check(true),
  },
  {
    key: 'antecedent_moisture',
    group: 'ground',
    name: 'Runoff from wet ground',
    help: 'The curve number as it is; or higher on wet and lower on dry ground, told by the rain of five days before or by the surface layer.',
    control: choice('average', 'five-day-rain', 'surface-layer'),
  },
  {
    key: 'snow',
    group: 'ground',
    name: 'Snow',
    help: 'Keeps what falls on cold days as snow, which melts by the warmth of the days after.',
    control: check(false),
  },
  {
    key: 'frozen_ground',
    group: 'ground',
    name: 'Frozen ground',
    help: 'Ground that is frozen takes up neither rain nor melt.',
    control: check(false),
  },
  {
    key: 'capillary_rise',
    group: 'ground',
    name: 'Rise from the water table',
    help: 'Lets water rise to the roots where a water table was measured at the parcel and its soil has the properties for it.',
    control: check(false),
  },
  {
    key: 'salinity',
    group: 'salt',
    name: 'Salt',
    help: 'Lets salty soil slow the crops, and adds the water that washes the salt down. Takes what was measured at a parcel before the season; soil that was not measured is taken to have come to the salt of its water, at a leaching fraction of 15 % (FAO-56 Eq. 93).',
    control: choice('off', 'stress', 'stress-and-leaching'),
  },
  {
    key: 'water_salinity_ds_m',
    group: 'salt',
    name: 'Salt of the irrigation water (dS/m)',
    help: 'Electrical conductivity ECw, where none was measured at a parcel.',
    control: number('1', 0, 20, 'any'),
  },
  {
    key: 'ahead',
    group: 'ahead',
    name: 'Days not yet measured',
    help: 'By the forecast where there is one and then the normal of the day; or then the days of a year of your choice; or not at all, which refuses a season that is still running.',
    control: choice('normal', 'analogue', 'refuse'),
  },
  {
    key: 'analogue_year',
    group: 'ahead',
    name: 'Year whose days stand in',
    help: 'The year in which that season ended; only for days of a chosen year.',
    control: { kind: 'number', usual: '', min: 1900, max: 2200, step: 1, optional: true },
  },
  {
    key: 'forecast_source',
    group: 'ahead',
    name: 'Forecast',
    help: 'One forecast by its name; left open, the first that the district has.',
    control: { kind: 'named', usual: '', of: 'forecasts', open: 'the first there is' },
  },
  {
    key: 'band_members',
    group: 'band',
    name: 'Times the season is drawn',
    help: 'Computes the season again so many times with weather, coefficients, efficiency and soil drawn within their errors, and tells between which figures 8 of 10 lie. 0 leaves it out; 100 is usual.',
    control: number('0', 0, 500, 1),
  },
  {
    key: 'band_seed',
    group: 'band',
    name: 'Seed of the draw',
    help: 'The same seed gives the same figures.',
    control: number('1', 0, 2147483647, 1),
  },
  {
    key: 'default_soil',
    group: 'defaults',
    name: 'Soil where none is given',
    help: 'Taken for parcels without a soil.',
    control: { kind: 'named', usual: 'loam', of: 'soils' },
  },
  {
    key: 'default_method',
    group: 'defaults',
    name: 'Application method where none is given',
    help: 'Taken for parcels without one; its efficiency turns the net into the gross requirement.',
    control: { kind: 'named', usual: 'furrow', of: 'methods' },
  },
];
