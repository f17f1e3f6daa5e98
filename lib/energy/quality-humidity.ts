/** Humidity against temperature, saturation and rain. */
import { brokenRuns, daysText, type Flag, figureText, monthsOf, seriesOf, withUnit } from '../weather/quality/flag.ts';
import type { SiteObservations, WeatherVariable } from '../weather/variable.ts';
import { meanSaturationVapourPressure, saturationVapourPressure } from './humidity.ts';
import type { SiteSky } from './quality-sky.ts';

/**
 * Mean dew point above minimum temperature [°C] that is suspect for days on end, and on a single day: moist air that comes in by day lifts
 * it for one day. The product's own.
 */
const DEW_POINT_ABOVE = 3;
const DEW_POINT_ABOVE_ONCE = 6;
const DEW_POINT_DAYS = 3;
/** Tmin − Tdew that reference surroundings do not exceed over a month [°C]. Source: ASCE 2005 Appendix D (recalled), 2–3 °C. */
const DEW_POINT_BELOW = 3;
/** Vapour pressure above saturation that rounding explains, as a share. */
const SATURATION_SLACK = 0.03;
/** Relative humidity above 100 % that is noted [%]. Source: FAO-56 Annex 5, 3–5 %. */
const OVERSHOOT = 103;
/** Monthly highest RHmax that is suspect and that is noted at an irrigated site [%]. Source: FAO-56 Annex 5, 80–90 %. */
const NEVER_ABOVE_SUSPECT = 80;
const NEVER_ABOVE_NOTED = 90;
/** RHmax that a day of rain should reach [%]. Source: FAO-56 Annex 5. */
const RH_IN_RAIN = 95;
/** Their mean below which it is suspect [%]; the product's own. */
const RH_IN_RAIN_SUSPECT = 90;
/** Rain that wets the air for long enough [mm]; fewest such days of a verdict. The product's own. */
const RAIN_THAT_WETS = 10;
const LEAST_RAIN_DAYS = 5;
/** Fewest days of a month that count. */
const LEAST_DAYS = 20;

/** Humidity from which the dew point of a day can be told; one mean humidity cannot. */
const TELLS_DEW_POINT: ReadonlySet<WeatherVariable> = new Set(['dew_point_c', 'vapour_pressure_kpa', 'relative_humidity_max_pct']);

/** The variable that the site reports its humidity in, for flags that speak of the dew point. */
function reportedHumidity(observations: SiteObservations, site: number): WeatherVariable | null {
  const reported: readonly WeatherVariable[] = [
    'dew_point_c',
    'vapour_pressure_kpa',
    'relative_humidity_max_pct',
    'relative_humidity_mean_pct',
    'specific_humidity_kg_kg',
  ];
  return reported.find((variable) => seriesOf(observations, variable, site)?.some((value) => !Number.isNaN(value))) ?? null;
}

/** Every check of humidity. Source: as the rules. */
export function checkHumidity(observations: SiteObservations, sky: SiteSky): Flag[] {
  const variable = reportedHumidity(observations, sky.site);
  const max = seriesOf(observations, 'air_temperature_max_c', sky.site);
  const min = seriesOf(observations, 'air_temperature_min_c', sky.site);
  const rhMax = seriesOf(observations, 'relative_humidity_max_pct', sky.site);
  return [
    ...(variable && max && min ? saturationFlags({ observations, sky, variable, max, min }) : []),
    ...(variable && min ? drySurroundings(observations, sky, variable, min) : []),
    ...(rhMax ? humidityMaximumFlags(observations, sky.site, rhMax) : []),
  ];
}

interface WithTemperature {
  readonly observations: SiteObservations;
  readonly sky: SiteSky;
  readonly variable: WeatherVariable;
  readonly max: Float64Array;
  readonly min: Float64Array;
}

function saturationFlags({ observations, sky, variable, max, min }: WithTemperature): Flag[] {
  const { site, vapourPressure, dewPoint } = sky;
  const atMaximum = (day: number) => vapourPressure[day] - saturationVapourPressure(max[day]) * (1 + SATURATION_SLACK);
  const atMean = (day: number) => vapourPressure[day] - meanSaturationVapourPressure(max[day], min[day]) * (1 + SATURATION_SLACK);
  const impossible = brokenRuns(max.length, atMaximum).map(
    ({ first, last, worst }): Flag => ({
      ...{ site, variable, rule: 'vapour-pressure-above-saturation', severity: 'impossible', firstDay: first, lastDay: last },
      ...{ value: vapourPressure[worst], limit: saturationVapourPressure(max[worst]) },
      detail: `Vapour pressure ${figureText(vapourPressure[worst])} kPa ${daysText(observations, first, last)} is above the ${figureText(saturationVapourPressure(max[worst]))} kPa that air of ${withUnit(max[worst], 'air_temperature_max_c')} can hold: humidity or temperature is wrong.`,
      figures: { unit: 'kPa' },
    }),
  );
  const suspect = brokenRuns(max.length, (day) => (atMaximum(day) > 0 ? Number.NaN : atMean(day))).map(
    ({ first, last, worst }): Flag => ({
      ...{ site, variable, rule: 'vapour-pressure-above-saturation', severity: 'suspect', firstDay: first, lastDay: last },
      ...{ value: vapourPressure[worst], limit: meanSaturationVapourPressure(max[worst], min[worst]) },
      detail: `Vapour pressure ${figureText(vapourPressure[worst])} kPa ${daysText(observations, first, last)} is above the day's mean saturation of ${figureText(meanSaturationVapourPressure(max[worst], min[worst]))} kPa: the computation holds it there. Check the humidity sensor.`,
      figures: { unit: 'kPa' },
    }),
  );
  const isAbove = (day: number) => atMean(day) > 0;
  if (!TELLS_DEW_POINT.has(variable)) return [...impossible, ...suspect];
  const dew = brokenRuns(min.length, (day) => (isAbove(day) ? Number.NaN : dewPoint[day] - min[day] - DEW_POINT_ABOVE))
    .filter(({ first, last, worst }) => last - first + 1 >= DEW_POINT_DAYS || dewPoint[worst] - min[worst] > DEW_POINT_ABOVE_ONCE)
    .map(
      ({ first, last, worst }): Flag => ({
        ...{ site, variable, rule: 'dew-point-above-minimum', severity: 'suspect', firstDay: first, lastDay: last },
        ...{ value: dewPoint[worst], limit: min[worst] + DEW_POINT_ABOVE },
        detail: `Dew point ${figureText(dewPoint[worst])} °C ${daysText(observations, first, last)} is ${figureText(dewPoint[worst] - min[worst])} °C above the minimum temperature of ${figureText(min[worst])} °C; air that moist would not have cooled so far, unless moist air came in by day. Check the humidity sensor.`,
        figures: { unit: '°C', minimum_c: min[worst] },
      }),
    );
  return [...impossible, ...suspect, ...dew];
}

/** Months in which Tmin stays far above Tdew: dry surroundings, which bear on reference ET, or a sensor that reads low. */
function drySurroundings(
  observations: SiteObservations,
  { site, dewPoint }: SiteSky,
  variable: WeatherVariable,
  min: Float64Array,
): Flag[] {
  const months = monthsOf(observations.startDate, observations.dayCount);
  const means = months.map(({ first, last }) => meanOver(first, last, (day) => min[day] - dewPoint[day]));
  return brokenRuns(months.length, (m) => means[m] - DEW_POINT_BELOW).map(({ first, last, worst }): Flag => {
    const [from, to] = [months[first].first, months[last].last];
    return {
      ...{ site, variable, rule: 'dew-point-far-below-minimum', severity: 'note', firstDay: from, lastDay: to },
      ...{ value: means[worst], limit: DEW_POINT_BELOW },
      detail: `Minimum temperature stays ${figureText(means[worst])} °C above the dew point in the driest month ${daysText(observations, from, to)}; over a well-watered surface it is 2 to 3 °C at most. The surroundings are dry, or the humidity sensor reads low; where rain is scarce too, the desk offers the adjustment of FAO-56 Annex 6.`,
      figures: { unit: '°C' },
    };
  });
}

function humidityMaximumFlags(observations: SiteObservations, site: number, rhMax: Float64Array): Flag[] {
  return [
    ...overshootFlags(observations, site, rhMax),
    ...neverSaturatedFlags(observations, site, rhMax),
    ...rainFlags(observations, site, rhMax),
  ];
}

function overshootFlags(observations: SiteObservations, site: number, rhMax: Float64Array): Flag[] {
  const variable = 'relative_humidity_max_pct';
  return brokenRuns(rhMax.length, (day) => rhMax[day] - OVERSHOOT).map(
    ({ first, last, worst }): Flag => ({
      ...{ site, variable, rule: 'humidity-above-saturation', severity: 'suspect', firstDay: first, lastDay: last },
      ...{ value: rhMax[worst], limit: OVERSHOOT },
      detail: `Relative humidity ${withUnit(rhMax[worst], variable)} ${daysText(observations, first, last)}; more than 3 to 5 % above 100 % asks for a calibration. A factor of ${figureText(100 / rhMax[worst])} brings it to saturation.`,
    }),
  );
}

function neverSaturatedFlags(observations: SiteObservations, site: number, rhMax: Float64Array): Flag[] {
  const variable = 'relative_humidity_max_pct';
  const months = monthsOf(observations.startDate, observations.dayCount);
  const highest = months.map(({ first, last }) => {
    const values = rhMax.subarray(first, last + 1).filter((value) => !Number.isNaN(value));
    return values.length >= LEAST_DAYS ? values.reduce((a, b) => Math.max(a, b)) : Number.NaN;
  });
  return brokenRuns(months.length, (m) => NEVER_ABOVE_NOTED - highest[m]).map(({ first, last, worst }): Flag => {
    const [from, to] = [months[first].first, months[last].last];
    const suspect = highest[worst] < NEVER_ABOVE_SUSPECT;
    return {
      ...{ site, variable, rule: 'humidity-never-saturated', severity: suspect ? 'suspect' : 'note', firstDay: from, lastDay: to },
      ...{ value: highest[worst], limit: suspect ? NEVER_ABOVE_SUSPECT : NEVER_ABOVE_NOTED },
      detail: `The highest humidity of a month is only ${withUnit(highest[worst], variable)} ${daysText(observations, from, to)}; over irrigated land nights come near 100 %. The sensor reads low, or the station stands in dry surroundings.`,
    };
  });
}

/** Rain days of the record on which the highest humidity stayed low: told once, over the whole record. */
function rainFlags(observations: SiteObservations, site: number, rhMax: Float64Array): Flag[] {
  const rain = seriesOf(observations, 'precipitation_mm', site);
  if (!rain) return [];
  let [wet, low, sum, first, last] = [0, 0, 0, -1, -1];
  for (let day = 0; day < rain.length; day++) {
    if (!(rain[day] >= RAIN_THAT_WETS) || Number.isNaN(rhMax[day])) continue;
    wet++;
    sum += rhMax[day];
    if (rhMax[day] < RH_IN_RAIN) low++;
    if (first < 0) first = day;
    last = day;
  }
  if (wet < LEAST_RAIN_DAYS || low * 2 <= wet) return [];
  const mean = sum / wet;
  return [
    {
      ...{ site, variable: 'relative_humidity_max_pct', rule: 'humidity-low-in-rain', firstDay: first, lastDay: last },
      severity: mean < RH_IN_RAIN_SUSPECT ? 'suspect' : 'note',
      ...{ value: mean, limit: RH_IN_RAIN },
      detail: `On ${low} of ${wet} days with ${RAIN_THAT_WETS} mm of rain or more the humidity never reached ${RH_IN_RAIN} %; their mean maximum is ${figureText(mean)} %. Calibrate the sensor; a factor of ${figureText(100 / mean)} would bring rain days to saturation.`,
      figures: { rain_days: wet, low_days: low, suggested_factor: 100 / mean },
    },
  ];
}

function meanOver(first: number, last: number, value: (day: number) => number): number {
  let [count, sum] = [0, 0];
  for (let day = first; day <= last; day++) {
    const one = value(day);
    if (Number.isNaN(one)) continue;
    count++;
    sum += one;
  }
  return count >= LEAST_DAYS ? sum / count : Number.NaN;
}
