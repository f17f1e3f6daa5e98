/** Checks of a site against its neighbours: values off their regression, and wind that falls behind theirs. */
import { geodesicDistance } from '../../geo/geodesic.ts';
import { type SiteObservations, WEATHER_VARIABLES, type WeatherVariable } from '../variable.ts';
import { brokenRuns, daysText, type Flag, figureText, median, seriesOf, withUnit } from './flag.ts';
import { isAcceptable, predicted, predictionError, type Regression, regressionOf } from './regression.ts';

/** Neighbours looked at: the nearest so many, within so far [m]. */
const MOST_NEIGHBOURS = 5;
const FARTHEST = 200_000;
/** Fewest common days of a regression. */
const LEAST_COMMON = 30;
/** A value is off when it is so many standard errors from what the line gives … */
const DEVIATIONS = 5;

/** … and at least so far from it [unit of the variable]. 8 °C is published (Durre et al. 2010, recalled); the others are the product's own. */
const COMPARED: Partial<Record<WeatherVariable, number>> = {
  air_temperature_max_c: 8,
  air_temperature_min_c: 8,
  air_temperature_mean_c: 6,
  dew_point_c: 8,
  vapour_pressure_kpa: 0.6,
  solar_radiation_mj_m2_d: 10,
  pressure_kpa: 1,
};

/** One neighbour of one site for one variable: the line of the site on the neighbour. */
export interface NeighbourLine {
  readonly site: number;
  readonly neighbour: number;
  readonly variable: WeatherVariable;
  /** m */
  readonly distance: number;
  readonly line: Regression;
  readonly acceptable: boolean;
}

/** Nearest sites of each site with their distances [m], nearest first. */
export function nearestNeighbours(sites: SiteObservations['sites']): { site: number; distance: number }[][] {
  return sites.map((own, at) =>
    sites
      .map((other, site) => ({ site, distance: geodesicDistance(own.longitude, own.latitude, other.longitude, other.latitude) }))
      .filter(({ site, distance }) => site !== at && distance <= FARTHEST)
      .sort((a, b) => a.distance - b.distance || a.site - b.site)
      .slice(0, MOST_NEIGHBOURS),
  );
}

/** Regressions of a site on its neighbours, each fitted a second time without the days that lie far off it. */
export function neighbourLines(
  observations: SiteObservations,
  site: number,
  neighbours: readonly { site: number; distance: number }[],
): NeighbourLine[] {
  return (Object.keys(COMPARED) as WeatherVariable[]).flatMap((variable) => {
    const own = seriesOf(observations, variable, site);
    if (!own) return [];
    return neighbours.flatMap(({ site: neighbour, distance }) => {
      const other = seriesOf(observations, variable, neighbour);
      const line = other ? steadyLine(other, own) : null;
      return line && line.count >= LEAST_COMMON ? [{ site, neighbour, variable, distance, line, acceptable: isAcceptable(line) }] : [];
    });
  });
}

function steadyLine(x: Float64Array, y: Float64Array): Regression | null {
  const first = regressionOf(x, y);
  if (!first || first.residualDeviation === 0) return first;
  return regressionOf(x, y, (i) => Math.abs(y[i] - predicted(first, x[i])) > DEVIATIONS * first.residualDeviation) ?? first;
}

/**
 * Values that lie outside the prediction interval of every acceptable neighbour that reported that day. With one neighbour alone it cannot
 * be told which of the two is wrong, so that is a note.
 *
 * Source: FAO-56 Annex 4 for the regression and its limits; five standard errors and the least distance as rule `neighbour-outlier`.
 */
export function checkNeighbours(observations: SiteObservations, site: number, lines: readonly NeighbourLine[]): Flag[] {
  return (Object.keys(COMPARED) as WeatherVariable[]).flatMap((variable) => {
    const own = seriesOf(observations, variable, site);
    const good = lines.filter((each) => each.site === site && each.variable === variable && each.acceptable);
    if (!own || good.length === 0) return [];
    const others = good.map((each) => seriesOf(observations, variable, each.neighbour) as Float64Array);
    const least = COMPARED[variable] ?? 0;
    const offBy = (day: number) => outlierExcess(own, day, good, others, least);
    return brokenRuns(own.length, offBy).map((run) => neighbourFlag({ observations, variable, own, good, others, least }, run, site));
  });
}

/** How far a day is outside the interval of the neighbour that excuses it most; NaN when none reported. */
function outlierExcess(own: Float64Array, day: number, lines: readonly NeighbourLine[], others: readonly Float64Array[], least: number) {
  let excess = Number.NaN;
  for (let i = 0; i < lines.length; i++) {
    const x = others[i][day];
    if (Number.isNaN(x) || Number.isNaN(own[day])) continue;
    const { line } = lines[i];
    const over = Math.abs(own[day] - predicted(line, x)) - Math.max(least, DEVIATIONS * predictionError(line, x));
    if (!(over >= excess)) excess = over;
    if (over <= 0) return over;
  }
  return excess;
}

interface Compared {
  readonly observations: SiteObservations;
  readonly variable: WeatherVariable;
  readonly own: Float64Array;
  readonly good: readonly NeighbourLine[];
  readonly others: readonly Float64Array[];
  readonly least: number;
}

function neighbourFlag(compared: Compared, run: { first: number; last: number; worst: number }, site: number): Flag {
  const { observations, variable, own, good, others, least } = compared;
  const day = run.worst;
  const reported = good.map((each, i) => ({ ...each, x: others[i][day] })).filter(({ x }) => !Number.isNaN(x));
  const best = reported.reduce((a, b) => (b.line.rSquared > a.line.rSquared ? b : a));
  const expected = predicted(best.line, best.x);
  const reach = Math.max(least, DEVIATIONS * predictionError(best.line, best.x));
  const limit = own[day] > expected ? expected + reach : expected - reach;
  const { code } = observations.sites[best.neighbour];
  const alone = reported.length === 1;
  return {
    ...{ site, variable, rule: 'neighbour-outlier', severity: alone ? 'note' : 'suspect', firstDay: run.first, lastDay: run.last },
    ...{ value: own[day], limit },
    detail: `${withUnit(own[day], variable)} ${daysText(observations, run.first, run.last)}, where ${alone ? `the one neighbour ${code} gives` : `${reported.length} neighbours, ${code} among them, give`} ${withUnit(expected, variable)} ± ${figureText(reach)}. ${alone ? 'One of the two is wrong: see both.' : 'Compare the series, then reject or replace it.'}`,
    figures: {
      ...{ neighbour: code, neighbours: reported.length, expected, r_squared: best.line.rSquared, slope: best.line.slope },
      ...{ intercept: best.line.intercept, common_days: best.line.count, residual_deviation: best.line.residualDeviation },
    },
  };
}

/** Days of a window of wind, and the share of its usual ratio to a neighbour below which a site is behind. */
const WIND_WINDOW = 30;
const LEAST_WINDOW_DAYS = 15;
const BEHIND = 0.6;
/** Fewest windows from which the usual ratio is taken. */
const LEAST_WINDOWS = 6;

/**
 * Wind that stays behind the neighbours': thirty-day means whose ratio to every neighbour's falls under 0.6 of the usual ratio between the
 * two, as when a bearing wears. The usual ratio is the median over the record.
 *
 * Source: ASCE-EWRI 2005 Appendix D for the comparison (recalled); window and share are the product's own.
 */
export function checkWindAgainstNeighbours(
  observations: SiteObservations,
  site: number,
  neighbours: readonly { site: number; distance: number }[],
): Flag[] {
  const own = seriesOf(observations, 'wind_speed_m_s', site);
  if (!own) return [];
  const ratios = neighbours.flatMap(({ site: neighbour }) => {
    const other = seriesOf(observations, 'wind_speed_m_s', neighbour);
    const windows = other ? windowRatios(own, other) : [];
    const usual = median(windows.filter((ratio) => !Number.isNaN(ratio)));
    const known = windows.filter((ratio) => !Number.isNaN(ratio)).length;
    return known >= LEAST_WINDOWS && usual > 0 ? [windows.map((ratio) => ratio / usual)] : [];
  });
  if (ratios.length === 0) return [];
  const best = ratios[0].map((_, w) => Math.max(...ratios.map((each) => each[w]).filter((ratio) => !Number.isNaN(ratio))));
  return brokenRuns(best.length, (w) => (Number.isFinite(best[w]) ? BEHIND - best[w] : Number.NaN)).map(({ first, last, worst }): Flag => {
    const [from, to] = [first * WIND_WINDOW, Math.min(own.length, (last + 1) * WIND_WINDOW) - 1];
    return {
      ...{ site, variable: 'wind_speed_m_s', rule: 'wind-below-neighbours', severity: ratios.length > 1 ? 'suspect' : 'note' },
      ...{ firstDay: from, lastDay: to, value: best[worst], limit: BEHIND },
      detail: `${WEATHER_VARIABLES.wind_speed_m_s.term} ${daysText(observations, from, to)} is ${figureText(best[worst] * 100)} % of what it usually is beside ${ratios.length === 1 ? 'its neighbour' : `its ${ratios.length} neighbours`}; less than ${BEHIND * 100} % points to a worn bearing or a sheltered mast.`,
      figures: { neighbours: ratios.length },
    };
  });
}

/** Ratio of the means of two series over their common days, window by window; NaN for a window with too few. */
function windowRatios(own: Float64Array, other: Float64Array): number[] {
  const windows: number[] = [];
  for (let start = 0; start < own.length; start += WIND_WINDOW) {
    let [count, sumOwn, sumOther] = [0, 0, 0];
    for (let day = start; day < Math.min(own.length, start + WIND_WINDOW); day++) {
      if (Number.isNaN(own[day]) || Number.isNaN(other[day])) continue;
      count++;
      sumOwn += own[day];
      sumOther += other[day];
    }
    windows.push(count >= LEAST_WINDOW_DAYS && sumOther > 0 ? sumOwn / sumOther : Number.NaN);
  }
  return windows;
}
