/** Checks of single values: physical limits, and values of one day that contradict each other. */
import { type SiteObservations, WEATHER_VARIABLES, type WeatherVariable } from '../variable.ts';
import { brokenRuns, daysText, type Flag, seriesOf, withUnit } from './flag.ts';

/** Values outside the limits of the vocabulary: a wrong unit, a missing code or a broken sensor. Source: as rule `range`. */
export function checkRange(observations: SiteObservations, site: number): Flag[] {
  return (Object.keys(observations.values) as WeatherVariable[]).flatMap((variable) => {
    const series = seriesOf(observations, variable, site);
    const { low, high } = WEATHER_VARIABLES[variable];
    if (!series) return [];
    return brokenRuns(series.length, (day) => Math.max(series[day] - high, low - series[day])).map(({ first, last, worst }): Flag => {
      const value = series[worst];
      const limit = value > high ? high : low;
      const side = value > high ? 'above' : 'below';
      return {
        ...{ site, variable, rule: 'range', severity: 'impossible', firstDay: first, lastDay: last, value, limit },
        detail: `${withUnit(value, variable)} ${daysText(observations, first, last)} is ${side} ${withUnit(limit, variable)}, which nothing at the surface reaches: look for a wrong unit or a missing code, and reject the value.`,
      };
    });
  });
}

/** Variables whose order on one day is fixed: the first is never below the second. `slack` covers rounding [unit of the variable]. */
const ORDERED: readonly { upper: WeatherVariable; lower: WeatherVariable; mean: WeatherVariable; slack: number; meanSlack: number }[] = [
  {
    ...{ upper: 'air_temperature_max_c', lower: 'air_temperature_min_c', mean: 'air_temperature_mean_c' },
    ...{ slack: 0.05, meanSlack: 0.25 },
  },
  {
    ...{ upper: 'relative_humidity_max_pct', lower: 'relative_humidity_min_pct', mean: 'relative_humidity_mean_pct' },
    ...{ slack: 0.5, meanSlack: 1 },
  },
];

/** Extremes that have changed places, and means outside their extremes. Source: as rules `extremes-crossed`, `mean-outside-extremes`. */
export function checkConsistency(observations: SiteObservations, site: number): Flag[] {
  return ORDERED.flatMap(({ upper, lower, mean, slack, meanSlack }) => {
    const [high, low, middle] = [upper, lower, mean].map((variable) => seriesOf(observations, variable, site));
    if (!high || !low) return [];
    const crossed = brokenRuns(high.length, (day) => low[day] - high[day] - slack).map(
      ({ first, last, worst }): Flag => ({
        ...{ site, variable: upper, rule: 'extremes-crossed', severity: 'impossible', firstDay: first, lastDay: last },
        ...{ value: high[worst], limit: low[worst] },
        detail: `${WEATHER_VARIABLES[upper].term} ${withUnit(high[worst], upper)} ${daysText(observations, first, last)} is below the minimum of ${withUnit(low[worst], lower)}: the two may have changed places, or one is wrong.`,
      }),
    );
    if (!middle) return crossed;
    const outside = brokenRuns(middle.length, (day) => Math.max(low[day] - middle[day], middle[day] - high[day]) - meanSlack).map(
      ({ first, last, worst }): Flag => ({
        ...{ site, variable: mean, rule: 'mean-outside-extremes', severity: 'suspect', firstDay: first, lastDay: last },
        ...{ value: middle[worst], limit: middle[worst] > high[worst] ? high[worst] : low[worst] },
        detail: `${WEATHER_VARIABLES[mean].term} ${withUnit(middle[worst], mean)} ${daysText(observations, first, last)} is outside ${withUnit(low[worst], lower)} to ${withUnit(high[worst], upper)}: the three may be of different days.`,
      }),
    );
    return [...crossed, ...outside];
  });
}
