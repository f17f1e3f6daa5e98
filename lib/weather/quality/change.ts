/** Checks of a series against its own days before and after: spikes, steps, and values that do not change. */
import { type SiteObservations, WEATHER_VARIABLES, type WeatherVariable } from '../variable.ts';
import { brokenRuns, daysText, type Flag, figureText, median, seriesOf, withUnit } from './flag.ts';

/**
 * Bounds of the limit of a change [unit of the variable]. `most` is published for temperature (25 °C); `least` keeps the noise of quiet
 * climates out. Humidity, radiation and rain jump by nature and have none.
 */
const CHANGES: Partial<Record<WeatherVariable, { readonly least: number; readonly most: number }>> = {
  air_temperature_max_c: { least: 12, most: 25 },
  air_temperature_min_c: { least: 12, most: 25 },
  air_temperature_mean_c: { least: 10, most: 25 },
  dew_point_c: { least: 14, most: 30 },
  vapour_pressure_kpa: { least: 1, most: 2.5 },
  pressure_kpa: { least: 2.5, most: 6 },
  wind_speed_m_s: { least: 8, most: 25 },
};

/** A spike is so many robust standard deviations of the change from day to day; a step, which lasts, a few more. */
const SPIKE_DEVIATIONS = 8;
const STEP_DEVIATIONS = 10;
/** Standard deviation of a normal variable in units of its median absolute deviation. */
const NORMAL_FROM_MEDIAN = 1.4826;
/** Fewest changes from which a scale is taken. */
const LEAST_CHANGES = 20;

/**
 * Scale of the changes from day to day: 1.4826 times their median size, which a few wrong values do not move.
 *
 * @returns NaN for fewer than 20 changes
 * @example changeScale(Float64Array.from({ length: 31 }, (_, day) => day % 2)) // 1.4826
 */
export function changeScale(series: Float64Array): number {
  const sizes: number[] = [];
  for (let day = 1; day < series.length; day++) {
    const size = Math.abs(series[day] - series[day - 1]);
    if (!Number.isNaN(size)) sizes.push(size);
  }
  return sizes.length < LEAST_CHANGES ? Number.NaN : NORMAL_FROM_MEDIAN * median(sizes);
}

/** How far a day stands out on one side of both its neighbours in time; negative or NaN where it does not. */
function spikeSize(series: Float64Array, day: number): number {
  const [before, after] = [series[day] - series[day - 1], series[day] - series[day + 1]];
  return before * after > 0 ? Math.min(Math.abs(before), Math.abs(after)) : Number.NaN;
}

/** Spikes and steps. Source: as rules `spike`, `step`. */
export function checkChanges(observations: SiteObservations, site: number): Flag[] {
  return (Object.keys(CHANGES) as WeatherVariable[]).flatMap((variable) => {
    const series = seriesOf(observations, variable, site);
    const bounds = CHANGES[variable];
    if (!series || !bounds) return [];
    const scale = changeScale(series);
    if (Number.isNaN(scale)) return [];
    const limitAt = (deviations: number) => Math.min(bounds.most, Math.max(bounds.least, deviations * scale));
    return changeFlags({ observations, site, variable, series }, limitAt(SPIKE_DEVIATIONS), limitAt(STEP_DEVIATIONS));
  });
}

interface Looked {
  readonly observations: SiteObservations;
  readonly site: number;
  readonly variable: WeatherVariable;
  readonly series: Float64Array;
}

function changeFlags({ observations, site, variable, series }: Looked, spikeLimit: number, stepLimit: number): Flag[] {
  const isSpike = (day: number) => spikeSize(series, day) > spikeLimit;
  const spikes = brokenRuns(series.length, (day) => spikeSize(series, day) - spikeLimit).map(({ first, last, worst }): Flag => {
    const size = spikeSize(series, worst);
    return {
      ...{ site, variable, rule: 'spike', severity: 'suspect', firstDay: first, lastDay: last, value: size, limit: spikeLimit },
      detail: `${withUnit(series[worst], variable)} ${daysText(observations, first, last)} stands ${figureText(size)} off the day before and the day after; at most ${withUnit(spikeLimit, variable)} is expected of this record. Look for a digit or a unit gone wrong.`,
      figures: { observed: series[worst] },
    };
  });
  const stepSize = (day: number) => Math.abs(series[day] - series[day - 1]);
  const steps = brokenRuns(series.length, (day) => (isSpike(day) || isSpike(day - 1) ? Number.NaN : stepSize(day) - stepLimit)).map(
    ({ first, last, worst }): Flag => ({
      ...{ site, variable, rule: 'step', severity: 'note', firstDay: first, lastDay: last, value: stepSize(worst), limit: stepLimit },
      detail: `${WEATHER_VARIABLES[variable].term} changed by ${withUnit(stepSize(worst), variable)} from one day to the next ${daysText(observations, first, last)}; at most ${withUnit(stepLimit, variable)} is usual here. A change of weather, or of the instrument: compare with neighbours.`,
      figures: { before: series[worst - 1], after: series[worst] },
    }),
  );
  return [...spikes, ...steps];
}

/** Values that may repeat for days without fault: saturated air, cloudless or sunless days, no rain, no wind. */
const MAY_REPEAT: Partial<Record<WeatherVariable, (value: number) => boolean>> = {
  relative_humidity_max_pct: (value) => value >= 99,
  relative_humidity_min_pct: (value) => value >= 99 || value <= 0,
  relative_humidity_mean_pct: (value) => value >= 99,
  precipitation_mm: (value) => value === 0,
  sunshine_duration_h: () => true,
  solar_radiation_mj_m2_d: (value) => value === 0,
  reference_et_given_mm: (value) => value === 0,
  wind_speed_m_s: (value) => value === 0,
};

/** Shortest run that counts [d]; a coarse record needs longer ones. */
const LEAST_RUN = 4;
const LEAST_RUN_WIND = 3;
const LONGEST_EXPECTED = 60;
/** Runs of that length expected in a faultless record, at most. */
const EXPECTED_RUNS = 0.01;

/**
 * Length from which a run of equal values is a fault: so long that a faultless record of this resolution has one in a hundred times at most.
 * With a share p of equal neighbours in time among N pairs, N pⁿ⁻¹ runs of n days are expected.
 *
 * @example runLimit(500, 0.1, 4) // 6
 */
export function runLimit(pairs: number, equalShare: number, least: number): number {
  let length = least;
  while (length < LONGEST_EXPECTED && pairs * equalShare ** (length - 1) > EXPECTED_RUNS) length++;
  return length;
}

/** Values that stay the same for days: a logger that repeats itself, a cup that is stuck. Source: as rules `persistence`, `wind-stuck`. */
export function checkPersistence(observations: SiteObservations, site: number): Flag[] {
  return (Object.keys(observations.values) as WeatherVariable[]).flatMap((variable) => {
    const series = seriesOf(observations, variable, site);
    return series ? persistenceFlags({ observations, site, variable, series }) : [];
  });
}

function persistenceFlags({ observations, site, variable, series }: Looked): Flag[] {
  const free = MAY_REPEAT[variable] ?? (() => false);
  const repeats = (day: number) => day > 0 && series[day] === series[day - 1] && !free(series[day]);
  let [pairs, equal] = [0, 0];
  for (let day = 1; day < series.length; day++) {
    if (Number.isNaN(series[day]) || Number.isNaN(series[day - 1]) || free(series[day])) continue;
    pairs++;
    if (repeats(day)) equal++;
  }
  if (equal === 0) return [];
  const wind = variable === 'wind_speed_m_s';
  const length = runLimit(pairs, equal / pairs, wind ? LEAST_RUN_WIND : LEAST_RUN);
  const runs = brokenRuns(series.length, (day) => (repeats(day) ? 1 : Number.NaN));
  return runs
    .filter(({ first, last }) => last - first + 2 >= length)
    .map(({ first, last }): Flag => {
      const days = last - first + 2;
      return {
        ...{ site, variable, rule: wind ? 'wind-stuck' : 'persistence', severity: 'suspect', firstDay: first - 1, lastDay: last },
        ...{ value: days, limit: length },
        detail: `${WEATHER_VARIABLES[variable].term} is ${withUnit(series[first], variable)} on ${days} days in a row ${daysText(observations, first - 1, last)}; ${length} or more do not happen by chance in this record. ${wind ? 'The cups or the bearing may be stuck: reject these days.' : 'The logger may repeat its last value: reject these days.'}`,
        figures: { observed: series[first] },
      };
    });
}
