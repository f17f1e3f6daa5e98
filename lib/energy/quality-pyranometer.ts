/**
 * A pyranometer against the clear-sky curve over months and years: on the clearest days of a window Rs should touch Rso. From the windows
 * come the level of each year, the drift over the record, and the factor that would bring it back.
 *
 * Two forms of the curve are published, from elevation and from water vapour; they differ by up to 7 %. A sensor whose clear days lie between
 * them is on the curve.
 */
import { civilFromDayNumber, dayNumber } from '../base/civil-date.ts';
import { daysText, type Flag, figureText, seriesOf } from '../weather/quality/flag.ts';
import type { SiteObservations } from '../weather/variable.ts';
import type { SiteSky } from './quality-sky.ts';

/** Days of a window, and the fewest of them with a value. */
const WINDOW = 30;
const LEAST_DAYS = 15;
/** Least Rso of a day that counts [MJ m⁻² d⁻¹]: under a low sun the ratio says little. */
const LEAST_CLEAR_SKY = 5;
/** Distance of clear days from the curve that is noted, and that is suspect. Source: FAO-56 Annex 5, ASCE 2005 Appendix D: 3–5 %. */
const NOTED = 0.03;
const SUSPECT = 0.05;
/** A drift counts when it is so many standard errors from none and moves the record by 3 % over its length. */
const DRIFT_ERRORS = 3;
const LEAST_DRIFT = 0.03;
/** Fewest windows of a year's level, and of a drift. */
const LEAST_WINDOWS_YEAR = 4;
const LEAST_WINDOWS_DRIFT = 12;
const DAYS_OF_YEAR = 365.25;

/** Clearest days of one window. */
export interface ClearWindow {
  /** offsets of the first and last day */
  readonly first: number;
  readonly last: number;
  /** second highest Rs of the window over the nearer of the two curves, 1 between them: one wrong day does not set it */
  readonly ratio: number;
  /** the same over the mean of the two curves, for the drift */
  readonly middle: number;
}

export interface PyranometerYear {
  readonly year: number;
  /** upper quartile of the year's windows [1]: months without a clear day do not pull it down */
  readonly ratio: number;
  readonly windows: number;
}

/** What the record of one pyranometer says of it. */
export interface Pyranometer {
  readonly windows: readonly ClearWindow[];
  readonly years: readonly PyranometerYear[];
  /** upper quartile of all windows [1]; NaN with too few */
  readonly level: number;
  /** change of the windows' ratio per year [1 a⁻¹]; NaN with too few windows */
  readonly slope: number;
  readonly slopeError: number;
  /** factor that brings the clear days of the last year to the curve */
  readonly suggestedFactor: number;
}

/**
 * Windows, yearly levels and drift of a pyranometer.
 *
 * @param radiation Rs [day] in MJ m⁻² d⁻¹
 * @param curves higher and lower form of Rso [day] in MJ m⁻² d⁻¹
 * @param startDate of the series, YYYY-MM-DD
 * Source: FAO-56 Annex 5; ASCE-EWRI 2005 Appendix D (recalled). Window, quantile and regression are the product's own.
 */
export function pyranometerOf(
  radiation: Float64Array,
  curves: { readonly high: Float64Array; readonly low: Float64Array },
  startDate: string,
): Pyranometer {
  const windows = clearWindows(radiation, curves.high, curves.low);
  const first = dayNumber(startDate);
  const byYear = new Map<number, number[]>();
  for (const window of windows) {
    const { year } = civilFromDayNumber(first + Math.floor((window.first + window.last) / 2));
    byYear.set(year, [...(byYear.get(year) ?? []), window.ratio]);
  }
  const years = [...byYear]
    .filter(([, ratios]) => ratios.length >= LEAST_WINDOWS_YEAR)
    .map(([year, ratios]) => ({ year, ratio: upperQuartile(ratios), windows: ratios.length }));
  const level = windows.length >= LEAST_WINDOWS_YEAR ? upperQuartile(windows.map(({ ratio }) => ratio)) : Number.NaN;
  const { slope, slopeError } = driftOf(windows);
  return { windows, years, level, slope, slopeError, suggestedFactor: 1 / (years.at(-1)?.ratio ?? level) };
}

function clearWindows(radiation: Float64Array, high: Float64Array, low: Float64Array): ClearWindow[] {
  const windows: ClearWindow[] = [];
  for (let first = 0; first + LEAST_DAYS <= radiation.length; first += WINDOW) {
    const last = Math.min(radiation.length, first + WINDOW) - 1;
    const days = Array.from({ length: last - first + 1 }, (_, i) => first + i).filter(
      (day) => high[day] >= LEAST_CLEAR_SKY && !Number.isNaN(radiation[day]),
    );
    if (days.length < LEAST_DAYS) continue;
    const over = (curve: (day: number) => number) => secondHighest(days.map((day) => radiation[day] / curve(day)));
    const [toHigh, toLow] = [over((day) => high[day]), over((day) => low[day])];
    const ratio = toHigh > 1 ? toHigh : Math.min(1, toLow);
    windows.push({ first, last, ratio, middle: over((day) => (high[day] + low[day]) / 2) });
  }
  return windows;
}

function secondHighest(values: readonly number[]): number {
  let [highest, second] = [0, 0];
  for (const value of values) {
    if (value > highest) [highest, second] = [value, highest];
    else if (value > second) second = value;
  }
  return second;
}

/** Value that a quarter of the values exceed, between the two nearest. @example upperQuartile([1, 2, 3, 4, 5]) // 4 */
export function upperQuartile(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  const at = 0.75 * (sorted.length - 1);
  const below = Math.floor(at);
  return sorted[below] + (at - below) * ((sorted[below + 1] ?? sorted[below]) - sorted[below]);
}

/** Least-squares slope of the windows' ratio on time, per year, with its standard error. */
function driftOf(windows: readonly ClearWindow[]): { slope: number; slopeError: number } {
  const n = windows.length;
  if (n < LEAST_WINDOWS_DRIFT) return { slope: Number.NaN, slopeError: Number.NaN };
  const time = windows.map(({ first, last }) => (first + last) / 2 / DAYS_OF_YEAR);
  const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / n;
  const [meanTime, meanRatio] = [mean(time), mean(windows.map(({ middle }) => middle))];
  let [squares, products] = [0, 0];
  for (let i = 0; i < n; i++) {
    squares += (time[i] - meanTime) ** 2;
    products += (time[i] - meanTime) * (windows[i].middle - meanRatio);
  }
  const slope = products / squares;
  const residual = windows.reduce((sum, { middle }, i) => sum + (middle - meanRatio - slope * (time[i] - meanTime)) ** 2, 0);
  return { slope, slopeError: Math.sqrt(residual / (n - 2) / squares) };
}

/** Shortest record that can show a drift [a]. */
const SHORTEST_YEARS = 0.75;

/**
 * True where clear days have moved away from the curve by more than chance and by more than 3 % over the record; twice that in a record short of
 * a year and a half, whose seasons are not yet told from a drift.
 */
export function isDrifting({ slope, slopeError, windows }: Pyranometer): boolean {
  if (Number.isNaN(slope) || windows.length === 0) return false;
  const years = (windows[windows.length - 1].last - windows[0].first + 1) / DAYS_OF_YEAR;
  const least = years >= 1.5 ? LEAST_DRIFT : 2 * LEAST_DRIFT;
  return years >= SHORTEST_YEARS && Math.abs(slope) > DRIFT_ERRORS * slopeError && Math.abs(slope) * years >= least;
}

/** Years whose clear days are off the curve by more than 3 % (note) or 5 % (suspect), and drift. Source: as the rules. */
export function checkPyranometer(observations: SiteObservations, sky: SiteSky): { flags: Flag[]; pyranometer: Pyranometer | null } {
  const radiation = seriesOf(observations, 'solar_radiation_mj_m2_d', sky.site);
  if (!radiation) return { flags: [], pyranometer: null };
  const pyranometer = pyranometerOf(radiation, { high: sky.clearSky, low: sky.clearSkyLow }, observations.startDate);
  const drift = isDrifting(pyranometer) ? [driftFlag(observations, sky.site, pyranometer)] : [];
  return { flags: [...envelopeFlags(observations, sky, pyranometer), ...drift], pyranometer };
}

function envelopeFlags(observations: SiteObservations, { site, elevationKnown }: SiteSky, { years }: Pyranometer): Flag[] {
  const first = dayNumber(observations.startDate);
  const days = new Map<number, { first: number; last: number }>();
  for (let day = 0; day < observations.dayCount; day++) {
    const { year } = civilFromDayNumber(first + day);
    const own = days.get(year);
    if (own) own.last = day;
    else days.set(year, { first: day, last: day });
  }
  return years.flatMap(({ year, ratio, windows }): Flag[] => {
    const off = Math.abs(ratio - 1);
    const own = days.get(year);
    if (off <= NOTED || !own) return [];
    const side = ratio > 1 ? 'above' : 'below';
    const limit = ratio > 1 ? 1 + NOTED : 1 - NOTED;
    return [
      {
        ...{
          site,
          variable: 'solar_radiation_mj_m2_d',
          rule: 'radiation-envelope',
          severity: off > SUSPECT && elevationKnown ? 'suspect' : 'note',
        },
        ...{ firstDay: own.first, lastDay: own.last, value: ratio, limit },
        detail: `The clearest days of ${year} reach ${figureText(ratio * 100)} % of clear-sky radiation, ${figureText(off * 100)} % ${side} the curve; within 3 to 5 % is sound. ${ratio > 1 ? 'Calibration, or a clean and high place' : 'Calibration, dust on the dome, a sensor off level, or a year without clear days'}: see the curve before correcting. A factor of ${figureText(1 / ratio)} would bring them together.${elevationKnown ? '' : ' The elevation of the station is not known, which moves the curve by 2 % for each 750 m: bring it in first.'}`,
        figures: { windows, suggested_factor: 1 / ratio },
      },
    ];
  });
}

function driftFlag(observations: SiteObservations, site: number, pyranometer: Pyranometer): Flag {
  const { windows, slope, slopeError, suggestedFactor } = pyranometer;
  const [first, last] = [windows[0].first, windows[windows.length - 1].last];
  const years = (last - first + 1) / DAYS_OF_YEAR;
  const total = Math.abs(slope) * years;
  return {
    ...{ site, variable: 'solar_radiation_mj_m2_d', rule: 'radiation-drift', severity: total > SUSPECT ? 'suspect' : 'note' },
    ...{ firstDay: first, lastDay: last, value: slope * 100, limit: Math.sign(slope) * DRIFT_ERRORS * slopeError * 100 },
    detail: `Clear days move by ${figureText(slope * 100)} ± ${figureText(slopeError * 100)} % a year ${daysText(observations, first, last)}, ${figureText(total * 100)} % over the record. Have the pyranometer calibrated; a factor of ${figureText(suggestedFactor)} brings the last year to the curve.`,
    figures: { slope_per_year: slope, slope_error: slopeError, windows: windows.length, suggested_factor: suggestedFactor },
  };
}
