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

/** Quality of one stored value, one byte each. */
export const QUALITY = { missing: 0, measured: 1, corrected: 2, filledInTime: 3, filledFromNormal: 4, suspect: 9 } as const;

/**
 * What was estimated on a completed site-day, as bits. The order within each group is the published order of fallbacks
 * (FAO-56 chapter 3, "Calculation procedures" and "Estimating missing climatic data").
 */
export const FALLBACK = {
  humidityFromDewPoint: 1 << 0,
  humidityFromRhMax: 1 << 1,
  humidityFromRhMean: 1 << 2,
  humidityFromMinimumTemperature: 1 << 3,
  radiationFromSunshine: 1 << 4,
  radiationFromTemperatureRange: 1 << 5,
  windAssumed: 1 << 6,
  temperatureFilledInTime: 1 << 7,
  temperatureFromNormal: 1 << 8,
  precipitationAssumedZero: 1 << 9,
  elevationAssumed: 1 << 10,
  radiationCappedAtClearSky: 1 << 11,
  temperatureExtremesFromMean: 1 << 12,
  windHeightAssumed: 1 << 13,
} as const;
export type Fallback = keyof typeof FALLBACK;

/** Fallbacks a reader must see: all but the dew point, which FAO-56 ranks as a measurement (Eq. 14). */
export const FALLBACK_TEXT: Record<Fallback, string> = {
  humidityFromDewPoint: 'vapour pressure from dew point (FAO-56 Eq. 14)',
  humidityFromRhMax: 'vapour pressure from maximum humidity only (FAO-56 Eq. 18)',
  humidityFromRhMean: 'vapour pressure from mean humidity (FAO-56 Eq. 19)',
  humidityFromMinimumTemperature: 'no humidity: dew point taken as minimum temperature (FAO-56 Eq. 48)',
  radiationFromSunshine: 'solar radiation from sunshine hours (FAO-56 Eq. 35)',
  radiationFromTemperatureRange: 'no radiation: estimated from temperature range (FAO-56 Eq. 50)',
  windAssumed: 'no wind: 2 m/s assumed (FAO-56 chapter 3)',
  temperatureFilledInTime: 'temperature filled between neighbouring days',
  temperatureFromNormal: 'temperature from the normal of the day',
  precipitationAssumedZero: 'no rain record: taken as zero',
  elevationAssumed: 'site elevation unknown: taken from the district setting',
  radiationCappedAtClearSky: 'estimated radiation held at the clear-sky value',
  temperatureExtremesFromMean: 'no temperature extremes: both taken equal to the mean',
  windHeightAssumed: 'height of the anemometer unknown: 10 m assumed',
};

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
  /** bits of FALLBACK */
  readonly flags: Uint16Array;
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
