/** Homogeneity of a record against a neighbour by cumulative residuals, and stations that have moved. */
import { geodesicDistance } from '../../geo/geodesic.ts';
import { type Site, type SiteObservations, WEATHER_VARIABLES, type WeatherVariable } from '../variable.ts';
import { daysText, type Flag, figureText, monthsOf, seriesOf } from './flag.ts';
import type { NeighbourLine } from './neighbours.ts';
import { predicted, regressionOf } from './regression.ts';

/** Standard normal deviate zp by the probability of acceptance. Source: FAO-56 Annex 4. */
export const ELLIPSE_DEVIATE = { 75: 0.67, 80: 0.84, 85: 1.04, 90: 1.28, 95: 1.64 } as const;
export type EllipseProbability = keyof typeof ELLIPSE_DEVIATE;

/** Verdict on a pair of records. */
export interface Homogeneity {
  readonly homogeneous: boolean;
  /** index after which the level changes: where the cumulative residual is farthest outside the ellipse, or farthest from 0 */
  readonly breakAfter: number;
  /** E there, and the ellipse's bound there, both in the unit of y */
  readonly cumulative: number;
  readonly bound: number;
  /** semi-axes: n / 2, and n zp s_y,x / √(n − 1) */
  readonly halfLength: number;
  readonly halfHeight: number;
}

/**
 * Cumulative residuals of y on x held against the ellipse within which they stay when y is homogeneous with x.
 *   E_i = Σ_{j ≤ i} (y_j − a − b x_j);  α = n / 2,  β = n zp s_y,x / √(n − 1),  s_y,x = s_y √(1 − r²)
 *   bound at i: β √[1 − ((i − n/2) / (n/2))²]
 *
 * @param x complete record, @param y record under test; the same length, no missing values
 * @param probability of acceptance [%]; 80 as published
 * @returns null for fewer than 4 pairs or x without spread
 * Source: FAO-56 Annex 4, method of cumulative residuals.
 */
export function homogeneityOf(x: Float64Array, y: Float64Array, probability: EllipseProbability = 80): Homogeneity | null {
  const line = regressionOf(x, y);
  if (!line || line.count < 4 || line.count !== x.length) return null;
  const n = x.length;
  const meanY = y.reduce((sum, value) => sum + value, 0) / n;
  const variance = y.reduce((sum, value) => sum + (value - meanY) ** 2, 0) / (n - 1);
  const deviation = Math.sqrt(variance * Math.max(0, 1 - line.rSquared));
  const halfLength = n / 2;
  const halfHeight = (n * ELLIPSE_DEVIATE[probability] * deviation) / Math.sqrt(n - 1);
  let [cumulative, worst] = [0, { at: 0, excess: Number.NEGATIVE_INFINITY, cumulative: 0, bound: 0 }];
  for (let i = 0; i < n - 1; i++) {
    cumulative += y[i] - predicted(line, x[i]);
    const bound = halfHeight * Math.sqrt(Math.max(0, 1 - ((i + 1 - halfLength) / halfLength) ** 2));
    const excess = Math.abs(cumulative) - bound;
    if (excess > worst.excess) worst = { at: i, excess, cumulative, bound };
  }
  const { at: breakAfter, bound } = worst;
  return { homogeneous: worst.excess <= 0, breakAfter, cumulative: worst.cumulative, bound, halfLength, halfHeight };
}

/** Fewest common months of a test, and fewest days of a month that count. */
const LEAST_MONTHS = 24;
const LEAST_DAYS = 20;
/** Change of level that is worth a flag [unit of the variable]; the product's own. */
const LEAST_CHANGE: Partial<Record<WeatherVariable, number>> = {
  air_temperature_max_c: 0.5,
  air_temperature_min_c: 0.5,
  air_temperature_mean_c: 0.4,
  dew_point_c: 0.7,
  vapour_pressure_kpa: 0.08,
  solar_radiation_mj_m2_d: 0.8,
};

/**
 * Breaks of a site's monthly means against its best acceptable neighbour: outside the 80 % ellipse a note, outside the 95 % ellipse suspect.
 * The means are taken as departures from the mean of their calendar month, so that unlike seasons of the two sites are not read as breaks.
 *
 * Source: FAO-56 Annex 4; the departures, and the least change of level that counts, are the product's own.
 */
export function checkHomogeneity(observations: SiteObservations, site: number, lines: readonly NeighbourLine[]): Flag[] {
  return (Object.keys(LEAST_CHANGE) as WeatherVariable[]).flatMap((variable) => {
    const good = lines.filter((each) => each.site === site && each.variable === variable && each.acceptable);
    if (good.length === 0) return [];
    const best = good.reduce((a, b) => (b.line.rSquared > a.line.rSquared ? b : a));
    const flag = breakAgainst(observations, best);
    return flag ? [flag] : [];
  });
}

function breakAgainst(observations: SiteObservations, { site, neighbour, variable }: NeighbourLine): Flag | null {
  const months = commonMonths(observations, variable, site, neighbour);
  if (months.length < LEAST_MONTHS) return null;
  const x = Float64Array.from(departures(months, (month) => month.x));
  const y = Float64Array.from(departures(months, (month) => month.y));
  const usual = homogeneityOf(x, y, 80);
  if (!usual || usual.homogeneous) return null;
  const strict = homogeneityOf(x, y, 95);
  const change = levelChange(x, y, usual.breakAfter);
  if (Math.abs(change) < (LEAST_CHANGE[variable] ?? 0)) return null;
  const firstDay = months[usual.breakAfter + 1].first;
  const lastDay = months[months.length - 1].last;
  const { code } = observations.sites[neighbour];
  const { term, unit } = WEATHER_VARIABLES[variable];
  return {
    ...{ site, variable, rule: 'inhomogeneous', severity: strict && !strict.homogeneous ? 'suspect' : 'note', firstDay, lastDay },
    ...{ value: Math.abs(usual.cumulative), limit: usual.bound },
    detail: `${term} changes its level against ${code} by ${figureText(change)} ${unit} ${daysText(observations, firstDay, firstDay)}: the cumulative residual of ${months.length} months is ${figureText(Math.abs(usual.cumulative))}, the 80 % ellipse allows ${figureText(usual.bound)}. Ask whether the station, its instrument or its surroundings were changed then; an offset over one of the two parts brings them together.`,
    figures: { neighbour: code, change, months: months.length, probability_pct: strict && !strict.homogeneous ? 95 : 80 },
  };
}

interface CommonMonth {
  readonly first: number;
  readonly last: number;
  readonly calendar: number;
  readonly x: number;
  readonly y: number;
}

/** Monthly means of both sites over the days that both have. */
function commonMonths(observations: SiteObservations, variable: WeatherVariable, site: number, neighbour: number): CommonMonth[] {
  const own = seriesOf(observations, variable, site);
  const other = seriesOf(observations, variable, neighbour);
  if (!own || !other) return [];
  return monthsOf(observations.startDate, observations.dayCount).flatMap(({ first, last, month }) => {
    let [count, x, y] = [0, 0, 0];
    for (let day = first; day <= last; day++) {
      if (Number.isNaN(own[day]) || Number.isNaN(other[day])) continue;
      count++;
      x += other[day];
      y += own[day];
    }
    return count >= LEAST_DAYS ? [{ first, last, calendar: month % 12, x: x / count, y: y / count }] : [];
  });
}

/** Departures of monthly values from the mean of their calendar month over the record. */
function departures(months: readonly CommonMonth[], pick: (month: CommonMonth) => number): number[] {
  const sums = new Float64Array(12);
  const counts = new Float64Array(12);
  for (const month of months) {
    sums[month.calendar] += pick(month);
    counts[month.calendar]++;
  }
  return months.map((month) => pick(month) - sums[month.calendar] / counts[month.calendar]);
}

/** Mean residual after a break less that before it. */
function levelChange(x: Float64Array, y: Float64Array, breakAfter: number): number {
  const difference = Array.from(y, (value, i) => value - x[i]);
  const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;
  return mean(difference.slice(breakAfter + 1)) - mean(difference.slice(0, breakAfter + 1));
}

/** Where a station stood when it was last checked. */
export interface SitePlace {
  readonly code: string;
  readonly longitude: number;
  readonly latitude: number;
  /** m; null when unknown */
  readonly elevation: number | null;
  readonly windHeight: number | null;
}

/** A change of a station's place or of its mast between two checks. */
export interface SiteMove {
  readonly code: string;
  /** day on which the change was seen, YYYY-MM-DD */
  readonly seen: string;
  /** m along the ground */
  readonly distance: number;
  /** m; null where one of the two is unknown */
  readonly climb: number | null;
  readonly mast: number | null;
}

/** Move that can bear on the record [m]: farther than the third decimal of a degree, higher than the error of a map. */
const MOVED_BY = { distance: 150, climb: 10, mast: 0.5 } as const;

/** Where a site stands, for the next check to compare with. */
export function placeOf({ code, longitude, latitude, elevation, windHeight }: Site): SitePlace {
  const known = (value: number) => (Number.isNaN(value) ? null : value);
  return { code, longitude, latitude, elevation: known(elevation), windHeight: known(windHeight) };
}

/** Stations whose place in the stations table has changed since the last check. */
export function movesSince(before: readonly SitePlace[], now: readonly SitePlace[], seen: string): SiteMove[] {
  const last = new Map(before.map((place) => [place.code, place]));
  return now.flatMap((place) => {
    const old = last.get(place.code);
    if (!old) return [];
    const distance = geodesicDistance(old.longitude, old.latitude, place.longitude, place.latitude);
    const between = (a: number | null, b: number | null) => (a === null || b === null ? null : b - a);
    const [climb, mast] = [between(old.elevation, place.elevation), between(old.windHeight, place.windHeight)];
    const moved = distance >= MOVED_BY.distance || Math.abs(climb ?? 0) >= MOVED_BY.climb || Math.abs(mast ?? 0) >= MOVED_BY.mast;
    return moved ? [{ code: place.code, seen, distance, climb, mast }] : [];
  });
}

/** Flags of moves, each on the day it was seen, held to the days of the record. */
export function moveFlags(observations: SiteObservations, moves: readonly SiteMove[], dayOf: (date: string) => number): Flag[] {
  return moves.flatMap((move): Flag[] => {
    const site = observations.sites.findIndex(({ code }) => code === move.code);
    if (site < 0 || observations.dayCount === 0) return [];
    const day = Math.min(observations.dayCount - 1, Math.max(0, dayOf(move.seen)));
    const parts = [
      move.distance >= 1 ? `${figureText(move.distance)} m along the ground` : null,
      move.climb ? `${figureText(move.climb)} m in elevation` : null,
      move.mast ? `${figureText(move.mast)} m in the height of the anemometer` : null,
    ].filter(Boolean);
    return [
      {
        ...{ site, variable: 'air_temperature_max_c', rule: 'station-moved', severity: 'note', firstDay: day, lastDay: day },
        ...{ value: move.distance, limit: MOVED_BY.distance },
        detail: `The stations table has had another place for this station since ${move.seen}: ${parts.join(', ')}. The whole record is computed with the new place. If the station was moved, keep the old record under a code of its own; if the place was wrong before, accept this.`,
        figures: { climb_m: move.climb, mast_m: move.mast },
      },
    ];
  });
}
