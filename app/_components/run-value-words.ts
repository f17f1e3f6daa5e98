/** The values of the settings of a run in words. */

const VALUES: Readonly<Record<string, string>> = {
  '': 'the usual: inverse distance between stations, bilinear on a grid',
  fao56: 'FAO-56 Penman–Monteith (Eq. 6)',
  asce2005: 'ASCE 2005 standardized, short surface',
  'inverse-distance': 'weighted by inverse distance',
  nearest: 'the nearest site',
  bilinear: 'between the four grid cells around it',
  kriging: 'ordinary kriging',
  'lapse-rate': 'temperature by the lapse rate',
  fitted: 'slope fitted to the sites',
  'at-parcels': 'at the parcels',
  'at-sites': 'at the sites or cells',
  given: 'as the source gives it',
  'hourly-sum': 'sum over the hours',
  fraction: 'at a share of its water',
  measured: 'as measured',
  'carry-over': 'as the season before left it',
  'spin-up': 'after days stepped before the season',
  rule: 'as the crops ask',
  recorded: 'as the deliveries recorded',
  'recorded-then-rule': 'as recorded to date, then as the crops ask',
  dual: 'crop and wet soil apart',
  single: 'single',
  weeds: 'under weeds',
  average: 'curve number as it is',
  'five-day-rain': 'by the rain of five days before',
  'surface-layer': 'by the surface layer',
  stress: 'slows the crops',
  'stress-and-leaching': 'slows the crops, and is washed down',
  normal: 'forecast, then the normal of the day',
  analogue: 'forecast, then the days of a chosen year',
  refuse: 'none',
};

/** What a value that is left open means. */
const OPEN: Readonly<Record<string, string>> = {
  source: 'the stations, or the first grid',
  forecast_source: 'the first there is',
  analogue_year: 'none',
};

/** A value in words. @param key of the setting, for values that are left open */
export function settingText(value: unknown, key = 'source'): string {
  if (value === null || value === undefined) return OPEN[key] ?? '–';
  if (typeof value === 'boolean') return value ? 'yes' : 'no';
  return VALUES[String(value)] ?? String(value);
}
