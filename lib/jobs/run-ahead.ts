/**
 * The days of a run past the last observation, in this order: the forecast where there is one; then the normal of the day, or the days of an analogue year.
 *
 * A day is past the last observation when no site of the run has air temperature (or reference ET of its own) on it or on any later day. A site that stops
 * before the others has a gap, filled as any other.
 */
import type { Tx } from '../../db/connect.ts';
import { addDays, dayNumber, dayOfYear, isoDate } from '../base/civil-date.ts';
import { counted } from '../base/counted.ts';
import { Refused } from '../base/errors.ts';
import { clearSiteDay, copyOfWeather, hasDriver } from '../weather/days-ahead.ts';
import type { DaySpan } from '../weather/normal-of-day.ts';
import { type CompletedWeather, FALLBACK } from '../weather/variable.ts';
import { putBeyond } from './run-ahead-beyond.ts';
import { type Forecast, loadForecast, putForecast } from './run-ahead-forecast.ts';
import { windowText } from './run-ahead-normals.ts';
import type { AheadRecord, AheadWanted, Telling } from './run-ahead-record.ts';
import { computedReferenceEt } from './site-reference-et.ts';

/** Longest time from the last observation to the end of a run [d]. The product's own limit: two years of planning and the rest of a season. */
const MOST_DAYS_AHEAD = 1096;
/** Years below which normals are told with a caution; a climate normal is of 30 (WMO-No. 1203). Common practice, no source for 10. */
const FEW_YEARS = 10;

/** What is told of a run all of whose days have been observed. */
export function nothingAhead(lastObserved: string | null, dayCount: number): AheadRecord {
  return {
    ...{ last_observed: lastObserved, first_ahead: null, first_beyond_forecast: null, forecast: null, normals: null, analogue_year: null },
    ...{ observed_days: dayCount, forecast_days: 0, analogue_days: 0, normal_days: 0 },
  };
}

/** The days of a run after its last observed one; null where there are none. @throws {Refused} when they reach too far */
export function daysToCome(run: { readonly startDate: string; readonly dayCount: number }, lastObserved: string): DaySpan | null {
  const first = Math.max(dayNumber(run.startDate), dayNumber(lastObserved) + 1);
  const end = dayNumber(run.startDate) + run.dayCount;
  if (first >= end) return null;
  const furthest = addDays(lastObserved, MOST_DAYS_AHEAD);
  if (isoDate(end - 1) > furthest) {
    throw new Refused(
      `The run ends on ${isoDate(end - 1)}; the last observation is of ${lastObserved}, and days to come are told for at most ${MOST_DAYS_AHEAD} days after it, to ${furthest}. Take an earlier season, or import newer weather.`,
    );
  }
  return { first, dayCount: end - first };
}

/**
 * Puts weather on the days to come.
 *
 * @returns the weather of the whole run, and what the manifest tells
 * @throws {Refused} when days have neither forecast, normal nor analogue, or a season of which nothing has been observed has too few years behind it
 */
export async function tellAhead(
  tx: Tx,
  districtId: string,
  wanted: AheadWanted & { readonly days: DaySpan },
): Promise<{ weather: CompletedWeather; ahead: AheadRecord; warnings: string[] }> {
  const { days, run, sites, settings } = wanted;
  const weather = copyOfWeather(wanted.weather);
  const offset = days.first - dayNumber(run.startDate);
  const forecast = await loadForecast(tx, districtId, { ...wanted, name: settings.forecast_source });
  const open = forecast ? forecastDays(weather, forecast, { ...wanted, offset }) : allOpen(weather, offset, days.dayCount);
  const openCount = open.reduce((sum, day) => sum + day, 0);
  const telling: Telling = { ...wanted, offset, open, openCount };
  const beyond = openCount === 0 ? null : await putBeyond(weather, telling);
  requireTold(weather, telling);
  const ahead: AheadRecord = {
    ...nothingAhead(wanted.lastObserved, run.dayCount - days.dayCount),
    first_ahead: isoDate(days.first),
    first_beyond_forecast: openCount === 0 ? null : isoDate(days.first + open.indexOf(1)),
    forecast_days: days.dayCount - openCount,
    analogue_days: settings.ahead === 'analogue' ? openCount : 0,
    normal_days: settings.ahead === 'analogue' ? 0 : openCount,
    forecast: forecast && openCount < days.dayCount ? forecastRecord(forecast, open, days) : null,
    normals: beyond?.normals ?? null,
    analogue_year: beyond && settings.ahead === 'analogue' ? settings.analogue_year : null,
  };
  return { weather, ahead, warnings: warningsOf(ahead, sites.length) };
}

function allOpen(weather: CompletedWeather, offset: number, dayCount: number): Uint8Array {
  for (let site = 0; site < weather.siteCount; site++) {
    for (let day = 0; day < dayCount; day++) clearSiteDay(weather, site * weather.dayCount + offset + day);
  }
  return new Uint8Array(dayCount).fill(1);
}

function forecastDays(weather: CompletedWeather, forecast: Forecast, wanted: AheadWanted & { days: DaySpan; offset: number }): Uint8Array {
  const { settings, days, sites, offset, referenceEt, run, defaultElevation } = wanted;
  const lapseRate = settings.elevation_trend === 'none' ? 0 : settings.lapse_rate_c_per_m;
  const place = { forecast, sites, offset, dayCount: days.dayCount, lapseRate, defaultElevation, isGiven: referenceEt === 'given' };
  const open = putForecast(weather, place);
  if (!weather.referenceEt) return open;
  const first = dayNumber(run.startDate);
  sites.forEach(({ latitude, elevation }, site) => {
    for (let day = offset; day < weather.dayCount; day++) {
      const at = site * weather.dayCount + day;
      if (!weather.referenceEt || !Number.isNaN(weather.referenceEt[at]) || Number.isNaN(weather.airTemperatureMax[at])) continue;
      weather.referenceEt[at] = computedReferenceEt(weather, at, {
        ...{ method: settings.method, surface: 'short', latitude, dayOfYear: dayOfYear(first + day) },
        elevation: Number.isNaN(elevation) ? defaultElevation : elevation,
      });
      if (referenceEt !== 'at-sites') weather.flags[at] |= FALLBACK.referenceEtFromDailyWeather;
    }
  });
  return open;
}

function forecastRecord(forecast: Forecast, open: Uint8Array, days: DaySpan): NonNullable<AheadRecord['forecast']> {
  const [first, last] = [open.indexOf(0), open.lastIndexOf(0)];
  const { source, issued } = forecast;
  return { source, issued, first_day: isoDate(days.first + first), last_day: isoDate(days.first + last) };
}

function requireTold(weather: CompletedWeather, { days, offset, sites }: Telling): void {
  const empty: number[] = [];
  for (let day = 0; day < days.dayCount; day++) {
    let found = false;
    for (let site = 0; site < sites.length && !found; site++) found = hasDriver(weather, site * weather.dayCount + offset + day);
    if (!found) empty.push(days.first + day);
  }
  if (empty.length === 0) return;
  throw new Refused(
    `${counted(empty.length, 'day', 'days')} past the last observation (from ${isoDate(empty[0])}) have no forecast, and no other year on record tells their normal. Import weather of these days, of an earlier year, or a forecast; or end the season earlier.`,
  );
}

/** What a reader must be told before relying on the days to come. */
function warningsOf(ahead: AheadRecord, siteCount: number): string[] {
  if (ahead.first_ahead === null) return [];
  const parts = [
    ahead.forecast ? `${counted(ahead.forecast_days, 'day', 'days')} of the forecast ${ahead.forecast.source}` : null,
    ahead.analogue_days > 0 ? `${counted(ahead.analogue_days, 'day', 'days')} of the analogue year ${ahead.analogue_year}` : null,
    ahead.normals
      ? `${counted(ahead.normal_days, 'day', 'days')} of normals of ${counted(ahead.normals.years, 'year', 'years')} (${ahead.normals.of}; ${windowText()})`
      : null,
  ].filter((part) => part !== null);
  const sites = siteCount === 1 ? 'the site' : 'the sites';
  const warnings = [`Days from ${ahead.first_ahead} lie past the last observation: ${parts.join(', ')} at ${sites}.`];
  if (ahead.normals && ahead.normals.years < FEW_YEARS) {
    warnings.push(
      `The normals rest on ${counted(ahead.normals.years, 'year', 'years')}; below ${FEW_YEARS} they may be far from what is usual.`,
    );
  }
  if (ahead.normals && ahead.normals.rain_year === null) warnings.push('No year has rain on record for the days to come: none is taken.');
  return warnings;
}
