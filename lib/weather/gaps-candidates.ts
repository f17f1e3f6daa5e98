/** What could fill a gap: neighbours of the same record by regression, other sources with their mean difference or ratio taken off. */
import { dayNumber } from '../base/civil-date.ts';
import type { nearestFinder, SiteAround } from './gaps-neighbours.ts';
import { commonSums, isAccepted, REGRESSION_LIMITS, type Regression, regression, spansAround } from './gaps-regression.ts';
import type { SiteObservations, WeatherVariable } from './variable.ts';

/** Nearest neighbours that are tried for one gap. */
const MOST_NEIGHBOURS = 8;

/** A regression that was tried, and how many days of the gap it filled. */
export interface NeighbourFigures extends Regression {
  readonly neighbour: number;
  /** great circle [m] */
  readonly distance: number;
  readonly accepted: boolean;
  days: number;
}

/** Another source's site, what was taken off, and how many days of the gap it filled. */
export interface SourceFigures {
  /** index into the other sources */
  readonly source: number;
  readonly site: number;
  /** great circle [m] */
  readonly distance: number;
  /** common days */
  readonly n: number;
  readonly by: 'difference' | 'ratio';
  /** mean of site less other [unit of the variable], or site over other [1] */
  readonly adjustment: number;
  days: number;
}

/** A way of filling the days of a gap; NaN where it has no value. */
export interface Candidate<Figures> {
  readonly figures: Figures;
  readonly accepted: boolean;
  valueOn(day: number): number;
}

export interface GapPlace {
  readonly site: number;
  readonly variable: WeatherVariable;
  /** offset of the first day, and of the day after the last */
  readonly start: number;
  readonly end: number;
}

/** Neighbours that report on a day of the gap, accepted ones first, best r² first. */
export function fromNeighbours(
  observations: SiteObservations,
  near: readonly SiteAround[],
  { site, variable, start, end }: GapPlace,
): Candidate<NeighbourFigures>[] {
  const { dayCount } = observations;
  const all = observations.values[variable] as Float64Array;
  const rowOf = (index: number) => all.subarray(index * dayCount, (index + 1) * dayCount);
  const own = rowOf(site);
  const spans = spansAround(start, end, dayCount);
  const candidates: Candidate<NeighbourFigures>[] = [];
  for (const { site: neighbour, distance } of near) {
    const row = rowOf(neighbour);
    if (!row.subarray(start, end).some((value) => !Number.isNaN(value))) continue;
    const fit = fitted(row, own, spans);
    const accepted = isAccepted(fit);
    const figures = { ...fit, neighbour, distance, accepted, days: 0 };
    candidates.push({ figures, accepted, valueOn: (day) => completed(fit, row[day], variable) });
    if (candidates.length === MOST_NEIGHBOURS) break;
  }
  const rank = ({ figures }: Candidate<NeighbourFigures>) => (Number.isNaN(figures.r2) ? -1 : figures.r2);
  return candidates.sort((a, b) => Number(b.accepted) - Number(a.accepted) || rank(b) - rank(a));
}

/** In the gap's own time of its year where that has days enough, else at that time of every year. */
function fitted(x: Float64Array, y: Float64Array, { own, everyYear }: ReturnType<typeof spansAround>): Regression {
  const near = regression(x, y, own);
  return near.n >= REGRESSION_LIMITS.leastDays ? near : regression(x, y, everyYear);
}

function completed({ slope, intercept }: Regression, x: number, variable: WeatherVariable): number {
  const value = intercept + slope * x;
  if (variable !== 'precipitation_mm') return value;
  return x === 0 ? 0 : Math.max(0, value);
}

/** Variables that differ by a shift; the others differ by a factor. */
const BY_DIFFERENCE: ReadonlySet<WeatherVariable> = new Set(['air_temperature_max_c', 'air_temperature_min_c', 'dew_point_c']);

/** The nearest site of each other source that has the variable and common days enough, in the order of the sources. */
export function fromSources(
  given: {
    readonly observations: SiteObservations;
    readonly others: readonly SiteObservations[];
    readonly nearOthers: readonly ReturnType<typeof nearestFinder>[];
  },
  { site, variable, start, end }: GapPlace,
): Candidate<SourceFigures>[] {
  const { observations, others, nearOthers } = given;
  const { dayCount } = observations;
  const own = (observations.values[variable] as Float64Array).subarray(site * dayCount, (site + 1) * dayCount);
  const spans = spansAround(start, end, dayCount);
  const candidates: Candidate<SourceFigures>[] = [];
  others.forEach((other, source) => {
    const [nearest] = nearOthers[source](observations.sites[site], -1);
    const row = nearest && onDaysOf(observations, other, variable, nearest.site);
    if (!row?.subarray(start, end).some((value) => !Number.isNaN(value))) return;
    const adjusted = adjustment(row, own, spans, variable);
    if (!adjusted) return;
    const { by, amount, n } = adjusted;
    const figures = { source, site: nearest.site, distance: nearest.distance, n, by, adjustment: amount, days: 0 };
    const valueOn = (day: number) => (by === 'difference' ? row[day] + amount : row[day] * amount);
    candidates.push({ figures, accepted: true, valueOn });
  });
  return candidates;
}

function adjustment(x: Float64Array, y: Float64Array, spans: ReturnType<typeof spansAround>, variable: WeatherVariable) {
  const near = commonSums(x, y, spans.own);
  const { n, sumX, sumY } = near.n >= REGRESSION_LIMITS.leastDays ? near : commonSums(x, y, spans.everyYear);
  if (n < REGRESSION_LIMITS.leastDays) return null;
  if (BY_DIFFERENCE.has(variable)) return { by: 'difference', amount: (sumY - sumX) / n, n } as const;
  return sumX > 0 ? ({ by: 'ratio', amount: sumY / sumX, n } as const) : null;
}

/** A row of another source on the days of the observations; NaN outside its record. Null where it lacks the variable. */
function onDaysOf(observations: SiteObservations, other: SiteObservations, variable: WeatherVariable, site: number): Float64Array | null {
  const all = other.values[variable];
  if (!all) return null;
  const row = new Float64Array(observations.dayCount).fill(Number.NaN);
  const shift = dayNumber(observations.startDate) - dayNumber(other.startDate);
  for (let day = Math.max(0, -shift); day < row.length && day + shift < other.dayCount; day++)
    row[day] = all[site * other.dayCount + day + shift];
  return row;
}
