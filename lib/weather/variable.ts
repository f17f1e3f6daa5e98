/**
 * The vocabulary of daily weather: every variable a source can bring, its unit, and the limits outside which a value is refused.
 *
 * Limits are wider than any accepted surface record (WMO World Weather and Climate Extremes Archive), so a refusal means a wrong unit,
 * a missing code or a broken sensor. The rain limit is also what the daily store can hold.
 */
export const WEATHER_VARIABLES = {
  air_temperature_max_c: { term: 'Maximum air temperature', unit: '°C', low: -60, high: 60 },
  air_temperature_min_c: { term: 'Minimum air temperature', unit: '°C', low: -90, high: 50 },
  air_temperature_mean_c: { term: 'Mean air temperature', unit: '°C', low: -75, high: 50 },
  dew_point_c: { term: 'Dew point', unit: '°C', low: -90, high: 36 },
  vapour_pressure_kpa: { term: 'Actual vapour pressure', unit: 'kPa', low: 0, high: 6 },
  relative_humidity_max_pct: { term: 'Maximum relative humidity', unit: '%', low: 0, high: 105 },
  relative_humidity_min_pct: { term: 'Minimum relative humidity', unit: '%', low: 0, high: 105 },
  relative_humidity_mean_pct: { term: 'Mean relative humidity', unit: '%', low: 0, high: 105 },
  specific_humidity_kg_kg: { term: 'Specific humidity', unit: 'kg/kg', low: 0, high: 0.04 },
  wind_speed_m_s: { term: 'Wind speed', unit: 'm/s', low: 0, high: 60 },
  solar_radiation_mj_m2_d: { term: 'Solar radiation', unit: 'MJ m⁻² d⁻¹', low: 0, high: 45 },
  sunshine_duration_h: { term: 'Sunshine duration', unit: 'h', low: 0, high: 24 },
  net_radiation_mj_m2_d: { term: 'Net radiation', unit: 'MJ m⁻² d⁻¹', low: -15, high: 35 },
  precipitation_mm: { term: 'Precipitation', unit: 'mm', low: 0, high: 600 },
  pressure_kpa: { term: 'Atmospheric pressure', unit: 'kPa', low: 45, high: 110 },
  reference_et_given_mm: { term: 'Reference ET, as given by the source', unit: 'mm', low: 0, high: 25 },
} as const;

export type WeatherVariable = keyof typeof WEATHER_VARIABLES;

/**
 * The vocabulary of hourly weather, of stations that report by the hour: 24 values a day in the site's own day, each for the hour that
 * begins at its index. Sums and means are over the hour.
 */
export const HOUR_VARIABLES = {
  hour_air_temperature_c: { term: 'Air temperature of the hour', unit: '°C', low: -90, high: 60 },
  hour_dew_point_c: { term: 'Dew point of the hour', unit: '°C', low: -90, high: 36 },
  hour_vapour_pressure_kpa: { term: 'Vapour pressure of the hour', unit: 'kPa', low: 0, high: 6 },
  hour_relative_humidity_pct: { term: 'Relative humidity of the hour', unit: '%', low: 0, high: 105 },
  hour_wind_speed_m_s: { term: 'Wind speed of the hour', unit: 'm/s', low: 0, high: 75 },
  hour_solar_radiation_mj_m2: { term: 'Solar radiation of the hour', unit: 'MJ m⁻² h⁻¹', low: -0.1, high: 5.5 },
  hour_precipitation_mm: { term: 'Precipitation of the hour', unit: 'mm', low: 0, high: 350 },
  hour_pressure_kpa: { term: 'Atmospheric pressure of the hour', unit: 'kPa', low: 45, high: 110 },
} as const;

export type HourVariable = keyof typeof HOUR_VARIABLES;

/** What a block can hold: a daily variable with one value a day, or an hourly one with 24. */
export type BlockVariable = WeatherVariable | HourVariable;

export function isHourVariable(name: string): name is HourVariable {
  return name in HOUR_VARIABLES;
}

/** Quality of one value, one byte each: as stored, as corrected, or how it was filled. */
export const QUALITY = {
  missing: 0,
  measured: 1,
  corrected: 2,
  filledInTime: 3,
  filledFromNormal: 4,
  filledFromNeighbour: 5,
  filledFromSource: 6,
  estimated: 7,
  suspect: 9,
  rejected: 10,
} as const;

/** The lattice a grid's cells lie on: what a source of grid cells keeps, so that a later file can be held against it. */
export interface GridShape {
  /** cells of the whole grid, north–south and east–west as the file counts them */
  readonly rows: number;
  readonly columns: number;
  /** `rectilinear`: latitude and longitude axes; `projected`: x and y axes of a projected or rotated system; `curvilinear`: 2-D places only */
  readonly kind: 'rectilinear' | 'projected' | 'curvilinear';
  /** axis values of the cells' centres over the whole grid, in the units of the system; null for curvilinear grids */
  readonly x: readonly number[] | null;
  readonly y: readonly number[] | null;
  /** definition of the system that proj4 understands, e.g. "EPSG:4326" or "+proj=ob_tran …" */
  readonly crs: string;
}

/**
 * What was filled or estimated on a completed site-day, as bits, in the order in which each is tried for its quantity: the published order of fallbacks
 * (FAO-56 chapter 3, "Calculation procedures" and "Estimating missing climatic data"), with the filling of gaps (`fillGaps`) before what is only estimated.
 * The numbers are stored with every run and never change.
 */
export const FALLBACK = {
  humidityFromDewPoint: 1 << 0,
  humidityFromRhMax: 1 << 1,
  humidityFromRhMean: 1 << 2,
  humidityFromNeighbour: 1 << 16,
  humidityFromSource: 1 << 17,
  humidityFromMinimumTemperature: 1 << 3,
  radiationFromSunshine: 1 << 4,
  radiationFromNeighbour: 1 << 18,
  radiationFromSource: 1 << 19,
  radiationFromTemperatureRange: 1 << 5,
  radiationCappedAtClearSky: 1 << 11,
  windHeightAssumed: 1 << 13,
  windFromNeighbour: 1 << 20,
  windFromSource: 1 << 21,
  windFromNormal: 1 << 22,
  windAssumed: 1 << 6,
  temperatureFromNeighbour: 1 << 14,
  temperatureFromSource: 1 << 15,
  temperatureFilledInTime: 1 << 7,
  temperatureFromNormal: 1 << 8,
  temperatureExtremesFromMean: 1 << 12,
  precipitationFromNeighbour: 1 << 23,
  precipitationAssumedZero: 1 << 9,
  elevationAssumed: 1 << 10,
  climateAssumedStandard: 1 << 24,
  referenceEtFromDailyWeather: 1 << 25,
  aheadFromForecast: 1 << 26,
  aheadFromNormal: 1 << 27,
  aheadFromAnalogue: 1 << 28,
} as const;
export type Fallback = keyof typeof FALLBACK;

/** Fallbacks a reader must see: all but the dew point, which FAO-56 ranks as a measurement (Eq. 14). */
export const FALLBACK_TEXT: Record<Fallback, string> = {
  humidityFromDewPoint: 'vapour pressure from dew point (FAO-56 Eq. 14)',
  humidityFromRhMax: 'vapour pressure from maximum humidity only (FAO-56 Eq. 18)',
  humidityFromRhMean: 'vapour pressure from mean humidity (FAO-56 Eq. 19)',
  humidityFromNeighbour: 'humidity from a neighbouring site by regression (FAO-56 Annex 4)',
  humidityFromSource: 'humidity from another weather source, its mean difference taken off',
  humidityFromMinimumTemperature: 'no humidity: dew point taken as minimum temperature (FAO-56 Eq. 48)',
  radiationFromSunshine: 'solar radiation from sunshine hours (FAO-56 Eq. 35)',
  radiationFromNeighbour: 'solar radiation from a neighbouring site by regression (FAO-56 Annex 4)',
  radiationFromSource: 'solar radiation from another weather source, scaled to the site',
  radiationFromTemperatureRange: 'no radiation: estimated from temperature range (FAO-56 Eq. 50)',
  radiationCappedAtClearSky: 'estimated radiation held at the clear-sky value',
  windHeightAssumed: 'height of the anemometer unknown: 10 m assumed',
  windFromNeighbour: 'wind from a neighbouring site by regression (FAO-56 Annex 4)',
  windFromSource: 'wind from another weather source, scaled to the site',
  windFromNormal: 'wind from the normal of the day',
  windAssumed: 'no wind: 2 m/s assumed (FAO-56 chapter 3)',
  temperatureFromNeighbour: 'temperature from a neighbouring site by regression (FAO-56 Annex 4)',
  temperatureFromSource: 'temperature from another weather source, its mean difference taken off',
  temperatureFilledInTime: 'temperature filled between neighbouring days',
  temperatureFromNormal: 'temperature from the normal of the day',
  temperatureExtremesFromMean: 'no temperature extremes: both taken equal to the mean',
  precipitationFromNeighbour: 'rain from a neighbouring site by regression (FAO-56 Annex 4)',
  precipitationAssumedZero: 'no rain record: taken as zero',
  elevationAssumed: 'site elevation unknown: taken from the district setting',
  climateAssumedStandard: 'no temperature: crop coefficients kept at their standard climate',
  referenceEtFromDailyWeather: 'reference ET computed from the day’s weather, where the given or hourly one is missing',
  aheadFromForecast: 'a day to come: weather of the forecast',
  aheadFromNormal: 'a day to come: normal of the day from the years on record',
  aheadFromAnalogue: 'a day to come: weather of the analogue year',
};

/** Assumptions about a site or a coefficient, and the dew point, which ranks as a measurement: not filled or estimated weather. */
const NO_ESTIMATE =
  FALLBACK.humidityFromDewPoint |
  FALLBACK.elevationAssumed |
  FALLBACK.windHeightAssumed |
  FALLBACK.climateAssumedStandard |
  FALLBACK.referenceEtFromDailyWeather;

/** Bits that say a value of the day's weather was filled or estimated: what "estimated share" counts. */
export const ESTIMATED_BITS = Object.values(FALLBACK).reduce((bits: number, bit) => bits | bit, 0) & ~NO_ESTIMATE;

/** Whether a fallback of this name makes its day count as estimated. */
export function countsAsEstimated(name: string): boolean {
  return ((FALLBACK[name as Fallback] ?? 0) & ESTIMATED_BITS) !== 0;
}

/** Names of the bits set in `flags`, in the order of `FALLBACK`. */
export function fallbackNames(flags: number): Fallback[] {
  return (Object.keys(FALLBACK) as Fallback[]).filter((name) => (flags & FALLBACK[name]) !== 0);
}

/** A station, or a cell of a grid. Longitude and latitude [degrees, WGS 84], elevation and anemometer height [m]; NaN when unknown. */
export interface Site {
  readonly code: string;
  readonly name: string;
  readonly longitude: number;
  readonly latitude: number;
  readonly elevation: number;
  readonly windHeight: number;
}

/** Raw daily observations of the sites of one source: each present variable is [site × day], NaN where missing. */
export interface SiteObservations {
  readonly sites: readonly Site[];
  readonly startDate: string;
  readonly dayCount: number;
  readonly values: Partial<Record<WeatherVariable, Float64Array>>;
  /** codes of QUALITY beside the values, [site × day]; left out where all is as measured */
  readonly quality?: Partial<Record<WeatherVariable, Uint8Array>>;
}

/**
 * Weather completed for the energy balance: every array is [site × day]. NaN temperature means the site has nothing that day and
 * carries no weight on it.
 */
export interface CompletedWeather {
  readonly siteCount: number;
  readonly dayCount: number;
  /** °C */
  readonly airTemperatureMax: Float64Array;
  /** °C */
  readonly airTemperatureMin: Float64Array;
  /** kPa */
  readonly actualVapourPressure: Float64Array;
  /** MJ m⁻² d⁻¹ */
  readonly solarRadiation: Float64Array;
  /** m s⁻¹ at 2 m over grass */
  readonly windSpeed2m: Float64Array;
  /** mm d⁻¹ */
  readonly precipitation: Float64Array;
  /** reference ET of the short surface at the sites [mm d⁻¹], where it is computed or given there and carried to the parcels as it is */
  readonly referenceEt?: Float64Array | null;
  /** bits of FALLBACK */
  readonly flags: Uint32Array;
}

/** The series of completed weather, in the order in which they are stored. */
export const COMPLETED_SERIES = [
  'airTemperatureMax',
  'airTemperatureMin',
  'actualVapourPressure',
  'solarRadiation',
  'windSpeed2m',
  'precipitation',
] as const;

/** One site's share in a parcel's weather; the weights of a parcel are ≥ 0 and sum to 1. At most 8 per parcel. */
export interface SiteWeight {
  /** index into the site table of the run */
  readonly site: number;
  readonly weight: number;
}

/** What is carried from sites to parcels. */
export type CarriedSeries = (typeof COMPLETED_SERIES)[number] | 'referenceEt';

/** How one series is carried to one parcel, where it has weights of its own: x = Σ w (x site + gradient (z parcel − z site)). */
export interface SeriesWeights {
  /** at most 8; they sum to 1; kriging may give negative ones */
  readonly weights: readonly SiteWeight[];
  /** change with elevation [unit of the series per m]; 0 for none */
  readonly gradient: number;
  /** kriging variance [unit² of the series]; NaN for other methods */
  readonly variance: number;
}
