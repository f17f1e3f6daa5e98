/**
 * One site-day under completion: each value from the first thing in the published order that the site reports. The trace, when there is
 * one, is told the same numbers the result is made of.
 */
import type { Trace, WorkingStep } from '../base/working.ts';
import { FALLBACK, type SiteObservations, WEATHER_VARIABLES, type WeatherVariable } from '../weather/variable.ts';
import { atmosphericPressure } from './air.ts';
import {
  actualVapourPressureFromDewPoint,
  actualVapourPressureFromExtremes,
  actualVapourPressureFromMinimumTemperature,
  actualVapourPressureFromRhMax,
  actualVapourPressureFromRhMean,
  actualVapourPressureFromSpecificHumidity,
  meanSaturationVapourPressure,
} from './humidity.ts';
import { cappedAtClearSky, clearSkyRadiation, solarRadiationFromSunshine, solarRadiationFromTemperatureRange } from './radiation.ts';
import { daylightHours, type SolarGeometry } from './sun.ts';
import { windProfileFactor } from './wind.ts';

/** Wind taken where none was measured [m s⁻¹ at 2 m]. Source: FAO-56 chapter 3, mean over 2000 stations. */
export const WIND_WITHOUT_RECORD = 2;

/** A reader standing on one site and day; moved along in place. */
export interface SiteDay {
  readonly values: SiteObservations['values'];
  /** extremes of all sites and days, with the bits of what was filled, [site × day] */
  readonly temperatures: {
    readonly airTemperatureMax: Float64Array;
    readonly airTemperatureMin: Float64Array;
    readonly flags: Uint32Array;
  };
  readonly sun: SolarGeometry;
  /** m, the default where the site has none */
  readonly elevation: number;
  readonly siteFlags: number;
  /** m */
  readonly windHeight: number;
  /** FALLBACK.windHeightAssumed where the site does not state its anemometer's height, else 0 */
  readonly windHeightFlag: number;
  readonly radiationCoefficient: number;
  index: number;
  outIndex: number;
  dayOfYear: number;
  airTemperatureMax: number;
  airTemperatureMin: number;
  /** what the last way tried gave */
  value: number;
  /** bits of FALLBACK, growing as values are completed */
  flags: number;
}

/** How a variable that was filled came to be, by the bits that say so. */
const FILLED_TEXT: readonly (readonly [number, string])[] = [
  [
    FALLBACK.humidityFromNeighbour | FALLBACK.radiationFromNeighbour | FALLBACK.windFromNeighbour | FALLBACK.precipitationFromNeighbour,
    'filled by regression on a neighbouring site, FAO-56 Annex 4',
  ],
  [FALLBACK.humidityFromSource | FALLBACK.radiationFromSource | FALLBACK.windFromSource, 'filled from another weather source'],
  [FALLBACK.windFromNormal, 'filled with the normal of the day'],
];

const HUMIDITY_FILLED = FALLBACK.humidityFromNeighbour | FALLBACK.humidityFromSource;
const RADIATION_FILLED = FALLBACK.radiationFromNeighbour | FALLBACK.radiationFromSource;
const WIND_FILLED = FALLBACK.windFromNeighbour | FALLBACK.windFromSource | FALLBACK.windFromNormal;

/** The source of a step, with what was filled of the day's `bits`. */
function sourceWith(source: string, day: SiteDay, bits: number): string {
  const text = FILLED_TEXT.find(([group]) => (day.flags & bits & group) !== 0)?.[1];
  return text ? `${source.replace('observed at the site', 'value of the site')}; ${text}` : source;
}

type Quantity = WorkingStep['inputs'][number];
type Told = Omit<WorkingStep, 'part'>;

function tell(trace: Trace, step: Told): void {
  trace.step({ part: 'weather', ...step });
}

function observed(day: SiteDay, variable: WeatherVariable): number {
  return day.values[variable]?.[day.index] ?? Number.NaN;
}

function given(day: SiteDay, symbol: string, variable: WeatherVariable): Quantity {
  return { symbol, value: observed(day, variable), unit: WEATHER_VARIABLES[variable].unit };
}

function extremes(day: SiteDay): Quantity[] {
  return [
    { symbol: 'Tmax', value: day.airTemperatureMax, unit: '°C' },
    { symbol: 'Tmin', value: day.airTemperatureMin, unit: '°C' },
  ];
}

/** One way of getting a value: its result (NaN when the site lacks what it needs) and how to tell of it. */
interface Way {
  readonly flag: number;
  readonly expression: string;
  readonly source: string;
  readonly value: (day: SiteDay) => number;
  readonly inputs: (day: SiteDay) => Quantity[];
}

/** Pressure of the site: measured, or from elevation. */
function sitePressure(day: SiteDay): number {
  const measured = observed(day, 'pressure_kpa');
  return Number.isNaN(measured) ? atmosphericPressure(day.elevation) : measured;
}

/** Ways to vapour pressure, best first. */
const HUMIDITY: readonly Way[] = [
  {
    flag: 0,
    expression: 'ea as observed',
    source: 'observed at the site',
    value: (day) => observed(day, 'vapour_pressure_kpa'),
    inputs: (day) => [given(day, 'ea', 'vapour_pressure_kpa')],
  },
  {
    flag: FALLBACK.humidityFromDewPoint,
    expression: 'ea = e°(Tdew)',
    source: 'FAO-56 Eq. 14',
    value: (day) => actualVapourPressureFromDewPoint(observed(day, 'dew_point_c')),
    inputs: (day) => [given(day, 'Tdew', 'dew_point_c')],
  },
  {
    flag: 0,
    expression: 'ea = [e°(Tmin) RHmax/100 + e°(Tmax) RHmin/100] / 2',
    source: 'FAO-56 Eq. 17',
    value: (day) =>
      actualVapourPressureFromExtremes(
        day.airTemperatureMax,
        day.airTemperatureMin,
        observed(day, 'relative_humidity_max_pct'),
        observed(day, 'relative_humidity_min_pct'),
      ),
    inputs: (day) => [...extremes(day), given(day, 'RHmax', 'relative_humidity_max_pct'), given(day, 'RHmin', 'relative_humidity_min_pct')],
  },
  {
    flag: FALLBACK.humidityFromRhMax,
    expression: 'ea = e°(Tmin) RHmax/100',
    source: 'FAO-56 Eq. 18',
    value: (day) => actualVapourPressureFromRhMax(day.airTemperatureMin, observed(day, 'relative_humidity_max_pct')),
    inputs: (day) => [extremes(day)[1], given(day, 'RHmax', 'relative_humidity_max_pct')],
  },
  {
    flag: FALLBACK.humidityFromRhMean,
    expression: 'ea = RHmean/100 [e°(Tmax) + e°(Tmin)] / 2',
    source: 'FAO-56 Eq. 19',
    value: (day) =>
      actualVapourPressureFromRhMean(day.airTemperatureMax, day.airTemperatureMin, observed(day, 'relative_humidity_mean_pct')),
    inputs: (day) => [...extremes(day), given(day, 'RHmean', 'relative_humidity_mean_pct')],
  },
  {
    flag: 0,
    expression: 'ea = q P / (0.622 + 0.378 q)',
    source: 'definition of specific humidity; P observed or by FAO-56 Eq. 7',
    value: (day) => actualVapourPressureFromSpecificHumidity(observed(day, 'specific_humidity_kg_kg'), sitePressure(day)),
    inputs: (day) => [given(day, 'q', 'specific_humidity_kg_kg'), { symbol: 'P', value: sitePressure(day), unit: 'kPa' }],
  },
  {
    flag: FALLBACK.humidityFromMinimumTemperature,
    expression: 'ea = e°(Tmin)',
    source: 'FAO-56 Eq. 48',
    value: (day) => actualVapourPressureFromMinimumTemperature(day.airTemperatureMin, 0),
    inputs: (day) => [extremes(day)[1]],
  },
];

/** First way that gives a value, which is left in `day.value`; the last one when none does, so that NaN comes out and is told of. */
function firstWay(ways: readonly Way[], day: SiteDay): Way {
  for (const way of ways) {
    day.value = way.value(day);
    if (!Number.isNaN(day.value)) return way;
  }
  return ways[ways.length - 1];
}

/**
 * Actual vapour pressure of a site-day, never above saturation.
 *
 * @returns ea [kPa]; NaN when neither humidity nor temperature is there
 * Source: FAO-56 Eq. 14, 17, 18, 19, 48.
 */
export function completeVapourPressure(day: SiteDay, trace: Trace | null): number {
  const way = firstWay(HUMIDITY, day);
  const { value } = day;
  const saturation = meanSaturationVapourPressure(day.airTemperatureMax, day.airTemperatureMin);
  const capped = value > saturation;
  const result = capped ? saturation : value;
  day.flags |= way.flag;
  if (trace !== null) {
    const { expression, source } = way;
    const held = capped ? '; held at saturation es = [e°(Tmax) + e°(Tmin)] / 2' : '';
    const inputs = capped ? [...way.inputs(day), { symbol: 'es', value: saturation, unit: 'kPa' }] : way.inputs(day);
    tell(trace, {
      symbol: 'ea',
      name: 'Actual vapour pressure',
      expression: expression + held,
      inputs,
      result,
      unit: 'kPa',
      source: sourceWith(source, day, HUMIDITY_FILLED),
    });
  }
  return result;
}

function extraterrestrialOf(day: SiteDay): number {
  return day.sun.extraterrestrialRadiation[day.dayOfYear];
}

function extraterrestrialQuantity(day: SiteDay): Quantity {
  return { symbol: 'Ra', value: extraterrestrialOf(day), unit: 'MJ m⁻² d⁻¹' };
}

function daylightOf(day: SiteDay): number {
  return daylightHours(day.sun.sunsetAngle[day.dayOfYear]);
}

/** Ways to solar radiation, best first. */
const RADIATION: readonly Way[] = [
  {
    flag: 0,
    expression: 'Rs as observed',
    source: 'observed at the site',
    value: (day) => observed(day, 'solar_radiation_mj_m2_d'),
    inputs: (day) => [given(day, 'Rs', 'solar_radiation_mj_m2_d')],
  },
  {
    flag: FALLBACK.radiationFromSunshine,
    expression: 'Rs = (0.25 + 0.50 n/N) Ra',
    source: 'FAO-56 Eq. 35',
    value: (day) => solarRadiationFromSunshine(observed(day, 'sunshine_duration_h'), daylightOf(day), extraterrestrialOf(day)),
    inputs: (day) => [
      given(day, 'n', 'sunshine_duration_h'),
      { symbol: 'N', value: daylightOf(day), unit: 'h' },
      extraterrestrialQuantity(day),
    ],
  },
  {
    flag: FALLBACK.radiationFromTemperatureRange,
    expression: 'Rs = kRs √(Tmax − Tmin) Ra',
    source: 'FAO-56 Eq. 50',
    value: (day) =>
      solarRadiationFromTemperatureRange(day.airTemperatureMax, day.airTemperatureMin, extraterrestrialOf(day), day.radiationCoefficient),
    inputs: (day) => [{ symbol: 'kRs', value: day.radiationCoefficient, unit: '°C⁻⁰·⁵' }, ...extremes(day), extraterrestrialQuantity(day)],
  },
];

/**
 * Solar radiation of a site-day; an estimate from the temperature range is held at the clear-sky value, a measurement never.
 *
 * @returns Rs [MJ m⁻² d⁻¹]; NaN when there is neither radiation, sunshine nor temperature
 * Source: FAO-56 Eq. 35, 37, 50.
 */
export function completeRadiation(day: SiteDay, trace: Trace | null): number {
  const way = firstWay(RADIATION, day);
  const { value } = day;
  const clearSky = clearSkyRadiation(extraterrestrialOf(day), day.elevation);
  const capped = way.flag === FALLBACK.radiationFromTemperatureRange && value > clearSky;
  const result = capped ? cappedAtClearSky(value, clearSky) : value;
  day.flags |= capped ? way.flag | FALLBACK.radiationCappedAtClearSky : way.flag;
  if (trace !== null) {
    const { expression, source } = way;
    const held = capped ? '; held at Rso = (0.75 + 2 × 10⁻⁵ z) Ra' : '';
    const inputs = capped ? [...way.inputs(day), { symbol: 'Rso', value: clearSky, unit: 'MJ m⁻² d⁻¹' }] : way.inputs(day);
    tell(trace, {
      symbol: 'Rs',
      name: 'Solar radiation',
      expression: expression + held,
      inputs,
      result,
      unit: 'MJ m⁻² d⁻¹',
      source: sourceWith(source, day, RADIATION_FILLED),
    });
  }
  return result;
}

/**
 * Wind speed of a site-day at 2 m.
 *
 * @returns u2 [m s⁻¹]; 2 where there is no wind record, except on a day without temperature, which stays NaN
 * Source: FAO-56 Eq. 47; 2 m s⁻¹ from its chapter 3.
 */
export function completeWind(day: SiteDay, trace: Trace | null): number {
  const speed = observed(day, 'wind_speed_m_s');
  const missing = Number.isNaN(speed);
  const result = missing ? windWithoutRecord(day) : speed * windProfileFactor(day.windHeight);
  day.flags |= missing ? FALLBACK.windAssumed : day.windHeightFlag;
  if (trace !== null) {
    tell(trace, {
      symbol: 'u2',
      name: 'Wind speed at 2 m',
      expression: missing ? 'u2 = 2, no wind record' : 'u2 = uz 4.87 / ln(67.8 z − 5.42)',
      inputs: missing ? [] : [given(day, 'uz', 'wind_speed_m_s'), { symbol: 'z', value: day.windHeight, unit: 'm' }],
      result,
      unit: 'm s⁻¹',
      source: missing ? 'FAO-56 chapter 3, missing wind speed' : sourceWith('FAO-56 Eq. 47', day, WIND_FILLED),
    });
  }
  return result;
}

function windWithoutRecord(day: SiteDay): number {
  return Number.isNaN(day.airTemperatureMax) ? Number.NaN : WIND_WITHOUT_RECORD;
}

/**
 * Rain of a site-day; a missing record counts as none and is flagged. Rain is never interpolated in time.
 *
 * @returns precipitation [mm d⁻¹]; NaN only when rain is missing on a day that has no temperature either
 */
export function completePrecipitation(day: SiteDay, trace: Trace | null): number {
  const rain = observed(day, 'precipitation_mm');
  const missing = Number.isNaN(rain);
  const result = missing && !Number.isNaN(day.airTemperatureMax) ? 0 : rain;
  if (missing) day.flags |= FALLBACK.precipitationAssumedZero;
  if (trace !== null) {
    tell(trace, {
      symbol: 'P',
      name: 'Precipitation',
      expression: missing ? 'P = 0, no rain record' : 'P as observed',
      inputs: missing ? [] : [given(day, 'P', 'precipitation_mm')],
      result,
      unit: 'mm d⁻¹',
      source: missing ? 'taken as zero and flagged' : sourceWith('observed at the site', day, FALLBACK.precipitationFromNeighbour),
    });
  }
  return result;
}
