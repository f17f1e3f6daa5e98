/** How the record of a site was made whole, series by series and day by day: what the strip chart and the shares of the gaps screen show. */
import type { FilledObservations } from './gaps-fill.ts';
import { type CompletedWeather, FALLBACK, QUALITY, type WeatherVariable } from './variable.ts';

/** The series of a completed record; each is got from the first of its variables that has a value. */
export const RECORD_SERIES = {
  air_temperature_max: { term: 'Maximum air temperature', variables: ['air_temperature_max_c'] },
  air_temperature_min: { term: 'Minimum air temperature', variables: ['air_temperature_min_c'] },
  humidity: {
    term: 'Humidity',
    variables: [
      'vapour_pressure_kpa',
      'dew_point_c',
      'relative_humidity_max_pct',
      'relative_humidity_mean_pct',
      'specific_humidity_kg_kg',
      'relative_humidity_min_pct',
    ],
  },
  radiation: { term: 'Solar radiation', variables: ['solar_radiation_mj_m2_d', 'sunshine_duration_h'] },
  wind: { term: 'Wind speed', variables: ['wind_speed_m_s'] },
  precipitation: { term: 'Rain', variables: ['precipitation_mm'] },
} as const satisfies Record<string, { term: string; variables: readonly WeatherVariable[] }>;
export type RecordSeries = keyof typeof RECORD_SERIES;

/** The published estimates that stand where nothing of a series was measured or filled. */
const ESTIMATES: Readonly<Record<RecordSeries, number>> = {
  air_temperature_max: FALLBACK.temperatureExtremesFromMean,
  air_temperature_min: FALLBACK.temperatureExtremesFromMean,
  humidity: FALLBACK.humidityFromMinimumTemperature,
  radiation: FALLBACK.radiationFromTemperatureRange,
  wind: FALLBACK.windAssumed,
  precipitation: FALLBACK.precipitationAssumedZero,
};

/**
 * How each day of one series of one site was got, as codes of QUALITY: measured, corrected, suspect, filled by a method, estimated (7), or
 * missing (0) where even the estimate had nothing to go by.
 *
 * @param completed the completion of `filled`, over the same sites and days
 * @returns codes [day]
 */
export function recordMethods(filled: FilledObservations, completed: CompletedWeather, site: number, series: RecordSeries): Uint8Array {
  const { dayCount } = filled;
  const codes = new Uint8Array(dayCount);
  for (let day = 0; day < dayCount; day++) {
    const at = site * dayCount + day;
    codes[day] = firstCode(filled, RECORD_SERIES[series].variables, at);
    if (codes[day] === QUALITY.missing && (completed.flags[at] & ESTIMATES[series]) !== 0) codes[day] = QUALITY.estimated;
  }
  return codes;
}

function firstCode(filled: FilledObservations, variables: readonly WeatherVariable[], at: number): number {
  for (const variable of variables) {
    if (!Number.isNaN(filled.values[variable]?.[at] ?? Number.NaN)) return filled.quality[variable]?.[at] ?? QUALITY.measured;
  }
  return QUALITY.missing;
}

/** A run of days got in one way. */
export interface MethodSpan {
  /** code of QUALITY */
  readonly code: number;
  /** days, both included */
  readonly from: number;
  readonly to: number;
}

/** Runs of equal codes, in order. */
export function methodSpans(codes: Uint8Array): MethodSpan[] {
  const spans: MethodSpan[] = [];
  for (let from = 0; from < codes.length; ) {
    let to = from;
    while (to + 1 < codes.length && codes[to + 1] === codes[from]) to++;
    spans.push({ code: codes[from], from, to });
    from = to + 1;
  }
  return spans;
}
